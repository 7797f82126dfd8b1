using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Waveforms;

namespace DeepSourceCheck.Files.Tables;

/// <summary>Samples of a response: columns `time_ms` and `value`, separated by commas or tabs.</summary>
public static class WaveformTable
{
    /// <summary>Column of the times.</summary>
    public const string Time = "time_ms";

    /// <summary>Column of the values against the baseline, in any unit.</summary>
    public const string Value = "value";

    /// <summary>Largest number of samples.</summary>
    public const int MostSamples = 100_000;

    private const double LongestTime = 1e7, LargestValue = 1e30;

    /// <summary>Reads a table.</summary>
    /// <param name="path">File.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <exception cref="InputException">Every problem of the file at once, with lines and columns.</exception>
    public static SampledWaveform Read(string path, string displayName)
    {
        byte[] bytes = InputFileAccess.ReadAll(path, displayName, TsvTable.LargestFile);
        ReadOnlySpan<byte> header = bytes.AsSpan().TrimStart("\r\n \uFEFF"u8);
        int end = header.IndexOf((byte)'\n');
        char separator = (end < 0 ? header : header[..end]).Contains((byte)',') ? ',' : '\t';
        TsvTable table = TsvTable.Of(bytes, displayName, separator, [Time, Value]);
        var times = new List<double>();
        var values = new List<double>();
        int lastLine = 0;
        foreach (TsvRow row in table.Rows)
        {
            double time = table.Number(row, Time, LongestTime, "ms"), value = table.Number(row, Value, LargestValue, "");
            if (times.Count > 0 && time <= 1000 * times[^1])
            {
                table.Problems.Add(row.Line, Time, FormattableString.Invariant($"the time {time:G6} ms does not lie after that of line {lastLine} ({1000 * times[^1]:G6} ms); sort the rows by rising time"));
            }

            if (double.IsFinite(time))
            {
                times.Add(time / 1000);
                values.Add(value);
                lastLine = row.Line;
            }
        }

        if (table.Problems.IsEmpty && table.Rows.Count < 2)
        {
            table.Problems.Add(0, null, "the table has a single row; a waveform needs two samples at least");
        }

        if (table.Problems.IsEmpty && table.Rows.Count > MostSamples)
        {
            table.Problems.Add(0, null, FormattableString.Invariant($"the table has {table.Rows.Count} rows; at most {MostSamples} are read: keep the response alone, sampled some ten times a cycle"));
        }

        if (table.Problems.IsEmpty && values.All(v => v == 0))
        {
            table.Problems.Add(0, Value, "every value is 0: there is no response in the table");
        }

        table.Problems.ThrowIfAny();
        return new SampledWaveform(displayName, times, values);
    }
}
