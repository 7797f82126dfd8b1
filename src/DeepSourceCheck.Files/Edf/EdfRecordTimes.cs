using System.Globalization;
using System.Text;

using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Edf;

/// <summary>Starts of the data records of a discontinuous file: each record's first annotation states its own (EDF+, section 2.2.4: time-keeping).</summary>
internal static class EdfRecordTimes
{
    // Ends a time stamp and each annotation; precedes a duration.
    private const byte EndOfText = 20, BeforeDuration = 21;

    /// <summary>The signal whose first annotation keeps the time.</summary>
    /// <param name="header">Header of a discontinuous file.</param>
    /// <exception cref="InputException">There is none.</exception>
    public static EdfSignal Keeper(EdfHeader header) => header.Signals.FirstOrDefault(s => s.IsAnnotations)
        ?? throw new InputException(header.DisplayName, "signals", $"the file says that it is discontinuous ({header.Kind}) but has no channel of annotations, which alone tells where each record starts; export it again, or as continuous parts");

    /// <summary>Start of one record [s] after the start of the file.</summary>
    /// <param name="record">The record's bytes of the keeper.</param>
    /// <param name="index">The record's number, from 0.</param>
    /// <param name="header">Header, for messages.</param>
    /// <exception cref="InputException">The bytes do not begin with a time stamp.</exception>
    public static double Start(ReadOnlySpan<byte> record, long index, EdfHeader header)
    {
        int end = record.IndexOfAny(EndOfText, BeforeDuration);
        string text = end < 0 ? "" : Encoding.Latin1.GetString(record[..end]);
        bool timeKeeping = end >= 0 && end + 1 < record.Length && record[end] == EndOfText && record[end + 1] == EndOfText;
        return timeKeeping && text.Length > 1 && text[0] is '+' or '-'
            && double.TryParse(text, NumberStyles.AllowLeadingSign | NumberStyles.AllowDecimalPoint, CultureInfo.InvariantCulture, out double start)
            ? start
            : throw new InputException(header.DisplayName, Invariant($"annotations of data record {index + 1}"),
                $"begin with {Shown.Quoted(text)}; each record of a discontinuous file begins with its start in seconds, as +12.5 with two bytes of value 20 behind it");
    }

    /// <summary>Checks that the records follow each other, and finds where gaps lie.</summary>
    /// <param name="starts">Start of each record [s].</param>
    /// <param name="header">Header.</param>
    /// <param name="samplePeriod">Time between samples [s]: what is shorter than half of it is no gap.</param>
    /// <returns>Index of the first record of each stretch without gaps.</returns>
    /// <exception cref="InputException">A record begins before the one before it ends.</exception>
    public static IReadOnlyList<int> Stretches(IReadOnlyList<double> starts, EdfHeader header, double samplePeriod)
    {
        var first = new List<int> { 0 };
        double drift = 0;
        for (int k = 1; k < starts.Count; k++)
        {
            // Against the stretch's own start, so that time stamps rounded to milliseconds do not add up.
            drift = starts[k] - (starts[first[^1]] + (k - first[^1]) * header.RecordSeconds);
            if (drift < -samplePeriod / 2)
            {
                throw new InputException(header.DisplayName, Invariant($"annotations of data record {k + 1}"),
                    Invariant($"the record starts at {starts[k]:0.######} s, before the one before it ends; records must follow each other in time"));
            }

            if (drift > samplePeriod / 2)
            {
                first.Add(k);
            }
        }

        return first;
    }
}
