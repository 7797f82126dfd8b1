using System.Globalization;
using System.Text;

namespace DeepSourceCheck.Tests.Support;

/// <summary>One signal of a file that a test writes.</summary>
internal sealed record EdfTestSignal(string Label, double[] Values)
{
    public string Unit { get; init; } = "uV";

    public string Prefilter { get; init; } = "";

    public double PhysicalMinimum { get; init; } = -200;

    public double PhysicalMaximum { get; init; } = 200;

    /// <summary>Null: the whole range of the format.</summary>
    public (int Low, int High)? Digital { get; init; }

    /// <summary>Samples of each record; null: the file's.</summary>
    public int? PerRecord { get; init; }

    /// <summary>Texts of annotation signals, one a record, in place of samples.</summary>
    public IReadOnlyList<string>? Annotations { get; init; }
}

/// <summary>
/// Writes EDF, EDF+ and BDF byte by byte, from Kemp et al. 1992 (table 1: the header) and Kemp and Olivan 2003 (annotations), apart from the reader. BDF: version byte 255, samples of 24 bits.
/// </summary>
internal sealed record EdfBytes
{
    public bool Bdf { get; init; }

    public string Reserved { get; init; } = "";

    public double RecordSeconds { get; init; } = 1;

    public int PerRecord { get; init; } = 100;

    /// <summary>Number of records that the header states; null: as many as there are.</summary>
    public string? Records { get; init; }

    public required IReadOnlyList<EdfTestSignal> Signals { get; init; }

    private int SampleBytes => Bdf ? 3 : 2;

    private (int Low, int High) FullRange => Bdf ? (-(1 << 23), (1 << 23) - 1) : (-32768, 32767);

    public byte[] ToArray()
    {
        using var stream = new MemoryStream();
        int records = Signals.Max(s => s.Annotations?.Count ?? s.Values.Length / (s.PerRecord ?? PerRecord)), count = Signals.Count;
        stream.WriteByte(Bdf ? (byte)0xFF : (byte)'0');
        Field(stream, "", 7);
        Field(stream, "X X X X", 80);
        Field(stream, "Startdate X X X X", 80);
        Field(stream, "01.01.01", 8);
        Field(stream, "00.00.00", 8);
        Field(stream, Text(256 * (count + 1)), 8);
        Field(stream, Reserved.Length > 0 ? Reserved : Bdf ? "24BIT" : "", 44);
        Field(stream, Records ?? Text(records), 8);
        Field(stream, Text(RecordSeconds), 8);
        Field(stream, Text(count), 4);
        All(stream, s => s.Label, 16);
        All(stream, _ => "AgCl electrode", 80);
        All(stream, s => s.Unit, 8);
        All(stream, s => Text(s.PhysicalMinimum), 8);
        All(stream, s => Text(s.PhysicalMaximum), 8);
        All(stream, s => Text((s.Digital ?? FullRange).Low), 8);
        All(stream, s => Text((s.Digital ?? FullRange).High), 8);
        All(stream, s => s.Prefilter, 80);
        All(stream, s => Text(s.PerRecord ?? PerRecord), 8);
        All(stream, _ => "", 32);
        for (int r = 0; r < records; r++)
        {
            foreach (EdfTestSignal signal in Signals)
            {
                int samples = signal.PerRecord ?? PerRecord;
                if (signal.Annotations is { } texts)
                {
                    byte[] bytes = new byte[samples * SampleBytes];
                    Encoding.Latin1.GetBytes(texts[r]).CopyTo(bytes, 0);
                    stream.Write(bytes);
                    continue;
                }

                for (int n = 0; n < samples; n++)
                {
                    Sample(stream, Digital(signal, signal.Values[r * samples + n]));
                }
            }
        }

        return stream.ToArray();
    }

    /// <summary>The time stamp of a record with an annotation behind it.</summary>
    public static string Stamp(double seconds) => seconds.ToString("+0.######;-0.######;+0", CultureInfo.InvariantCulture) + "\u0014\u0014\0+1\u00152\u0014blink\u0014\0";

    /// <summary>Digital value of a physical one.</summary>
    public int Digital(EdfTestSignal signal, double value)
    {
        (int low, int high) = signal.Digital ?? FullRange;
        double digital = low + (value - signal.PhysicalMinimum) * ((double)high - low) / (signal.PhysicalMaximum - signal.PhysicalMinimum);
        return (int)Math.Clamp(Math.Round(digital), low, high);
    }

    private void Sample(MemoryStream stream, int value)
    {
        for (int k = 0; k < SampleBytes; k++)
        {
            stream.WriteByte((byte)(value >> (8 * k)));
        }
    }

    private void All(MemoryStream stream, Func<EdfTestSignal, string> text, int width)
    {
        foreach (EdfTestSignal signal in Signals)
        {
            Field(stream, text(signal), width);
        }
    }

    private static void Field(MemoryStream stream, string text, int width) => stream.Write(Encoding.Latin1.GetBytes(text.PadRight(width)[..width]));

    private static string Text(double value) => value.ToString("0.#####", CultureInfo.InvariantCulture);
}
