using System.Globalization;
using System.Text;

using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Edf;

/// <summary>Header of an EDF, EDF+ or BDF file from its bytes. Every field that is used is checked; none of those that tell who was recorded is looked at.</summary>
internal sealed class EdfHeaderParser
{
    /// <summary>Size of the first part, which says how large the rest is [bytes].</summary>
    public const int FixedBytes = 256;

    private const int BytesPerSignal = 256;

    private readonly byte[] _bytes;
    private readonly string _display;
    private readonly int _signals;

    private EdfHeaderParser(byte[] bytes, string display)
    {
        (_bytes, _display) = (bytes, display);
        _signals = Whole("number of signals", 252, 4, 1, 9999);
    }

    /// <summary>Size of the header that the first part announces [bytes]; checks what tells the format.</summary>
    /// <param name="first">The first <see cref="FixedBytes"/> bytes.</param>
    /// <param name="display">File as the user named it.</param>
    /// <exception cref="InputException">No such file, or its size of header and number of signals disagree.</exception>
    public static int HeaderBytes(byte[] first, string display)
    {
        if (first[0] != 0xFF && !(first[0] == (byte)'0' && first.AsSpan(1, 7).IndexOfAnyExcept((byte)' ') < 0))
        {
            throw new InputException(display, "version", "the file is neither EDF (which begins with 0 and seven spaces) nor BDF (which begins with the byte 255); export the recording in one of them");
        }

        var parser = new EdfHeaderParser(first, display);
        int stated = parser.Whole("number of bytes in header", 184, 8, FixedBytes, int.MaxValue), due = FixedBytes + BytesPerSignal * parser._signals;
        return stated == due ? due
            : throw new InputException(display, "number of bytes in header", Invariant($"is {stated}; with {parser._signals} signals it must be {due} (256 for the file and 256 for each signal)"));
    }

    /// <summary>Parses a whole header.</summary>
    /// <param name="bytes">As many bytes as <see cref="HeaderBytes"/> says.</param>
    /// <param name="fileBytes">Size of the file [bytes].</param>
    /// <param name="display">File as the user named it.</param>
    /// <exception cref="InputException">A field is malformed, or the file does not hold what the header says.</exception>
    public static EdfHeader Parse(byte[] bytes, long fileBytes, string display) => new EdfHeaderParser(bytes, display).Parse(fileBytes);

    private EdfHeader Parse(long fileBytes)
    {
        int sample = _bytes[0] == 0xFF ? 3 : 2;
        string kind = Ascii("reserved", 192, 44);
        double seconds = Real("duration of a data record", 244, 8);
        if (!(seconds >= 0))
        {
            throw Fault("duration of a data record", Invariant($"is {seconds} s; it must be above 0, or 0 for annotations alone"));
        }

        var signals = new List<EdfSignal>();
        long offset = 0;
        for (int k = 0; k < _signals; k++)
        {
            EdfSignal signal = Signal(k, sample, checked((int)offset));
            signals.Add(signal);
            offset += (long)signal.SamplesPerRecord * sample;
            if (offset > Math.Min(fileBytes, int.MaxValue))
            {
                throw Fault($"number of samples of {signal.Name}", Invariant($"is {signal.SamplesPerRecord}: with it one data record has {offset:N0} bytes, more than the file has or a record may have (the file: {fileBytes:N0})"));
            }
        }

        if (seconds == 0 && !signals.TrueForAll(s => s.IsAnnotations))
        {
            throw Fault("duration of a data record", "is 0 s, which is allowed for annotations alone; these signals would have no sampling rate");
        }

        (long records, bool counted) = Records(fileBytes, (int)offset);
        return new EdfHeader
        {
            DisplayName = _display,
            SampleBytes = sample,
            Discontinuous = kind.StartsWith("EDF+D", StringComparison.Ordinal) || kind.StartsWith("BDF+D", StringComparison.Ordinal),
            HeaderBytes = _bytes.Length,
            Records = records,
            RecordsCounted = counted,
            RecordSeconds = seconds,
            RecordBytes = (int)offset,
            Signals = signals,
        };
    }

    private (long Records, bool Counted) Records(long fileBytes, int recordBytes)
    {
        const string Field = "number of data records";
        int stated = Whole(Field, 236, 8, int.MinValue, int.MaxValue);
        long whole = Math.DivRem(fileBytes - _bytes.Length, recordBytes, out long rest);
        string held = Invariant($"the file holds {whole}{(rest > 0 ? $" and {rest} bytes of another" : "")} of {recordBytes:N0} bytes each");
        if (stated == -1 && rest == 0 && whole > 0)
        {
            return (whole, true);
        }

        if (stated == -1)
        {
            throw Fault(Field, $"is -1 (not known when the recording began), and {held}; it was not closed properly: export it again");
        }

        if (stated < 1)
        {
            throw Fault(Field, Invariant($"is {stated}; it must be at least 1, or -1 in a recording that was not closed"));
        }

        return stated == whole && rest == 0 ? (stated, false)
            : throw Fault(Field, Invariant($"is {stated}, but {held}: {(whole < stated ? "the file is truncated; copy or export it again" : "bytes follow that no record accounts for; export it again")}"));
    }

    private EdfSignal Signal(int k, int sampleBytes, int offset)
    {
        string label = Ascii($"label of signal {k + 1}", Place(0, 16, k), 16);
        string Field(string name) => $"{name} of signal {k + 1} ({Shown.Text(label)})";
        int lowest = sampleBytes == 2 ? short.MinValue : -(1 << 23), highest = -lowest - 1;
        var signal = new EdfSignal
        {
            Index = k,
            Label = label,
            Unit = Ascii(Field("physical dimension"), Place(96, 8, k), 8),
            PhysicalMinimum = Real(Field("physical minimum"), Place(104, 8, k), 8),
            PhysicalMaximum = Real(Field("physical maximum"), Place(112, 8, k), 8),
            DigitalMinimum = Whole(Field("digital minimum"), Place(120, 8, k), 8, lowest, highest),
            DigitalMaximum = Whole(Field("digital maximum"), Place(128, 8, k), 8, lowest, highest),
            Prefilter = Ascii(Field("prefiltering"), Place(136, 80, k), 80),
            SamplesPerRecord = Whole(Field("number of samples"), Place(216, 8, k), 8, 1, int.MaxValue),
            Offset = offset,
        };
        if (signal.DigitalMinimum >= signal.DigitalMaximum)
        {
            throw Fault(Field("digital maximum"), Invariant($"is {signal.DigitalMaximum}, not above the digital minimum {signal.DigitalMinimum}"));
        }

        return signal.PhysicalMinimum != signal.PhysicalMaximum ? signal
            : throw Fault(Field("physical maximum"), Invariant($"is {signal.PhysicalMaximum}, as the physical minimum; the two must differ, or every sample means the same"));
    }

    // Fields of the signals stand field by field: that of all signals, then the next; `before` bytes a signal come first.
    private int Place(int before, int width, int signal) => FixedBytes + before * _signals + width * signal;

    private string Ascii(string field, int at, int length)
    {
        ReadOnlySpan<byte> bytes = _bytes.AsSpan(at, length);
        int foreign = bytes.IndexOfAnyExceptInRange((byte)32, (byte)126);
        if (foreign >= 0)
        {
            string micro = bytes[foreign] is 0xB5 or 0xC2 or 0xCE ? " (a micro sign? the unit is written uV)" : "";
            throw Fault(field, Invariant($"holds the byte {bytes[foreign]} at position {foreign + 1}; a header holds printable ASCII alone{micro}"));
        }

        return Encoding.ASCII.GetString(bytes).Trim();
    }

    private int Whole(string field, int at, int length, int least, int most)
    {
        string text = Ascii(field, at, length);
        if (!int.TryParse(text, NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out int value))
        {
            throw Fault(field, $"is {Shown.Quoted(text)}; a whole number is expected, from the left of its {length} characters");
        }

        return value >= least && value <= most ? value : throw Fault(field, Invariant($"is {value}; allowed is {least} to {most}"));
    }

    private double Real(string field, int at, int length)
    {
        string text = Ascii(field, at, length);
        return double.TryParse(text, NumberStyles.Float, CultureInfo.InvariantCulture, out double value) && double.IsFinite(value) ? value
            : throw Fault(field, $"is {Shown.Quoted(text)}; a number with a decimal point is expected");
    }

    private InputException Fault(string field, string message) => new(_display, field, message);
}
