namespace DeepSourceCheck.Report.Figures;

/// <summary>A logarithmic axis: bounds rounded out to half decades, at most five ticks at powers of ten.</summary>
public sealed class LogAxis
{
    /// <summary>An axis that holds all values; values that are not positive and finite are left out.</summary>
    public LogAxis(IEnumerable<double> values)
    {
        double[] logs = [.. values.Where(v => v > 0 && double.IsFinite(v)).Select(Math.Log10)];
        double low = logs.Length > 0 ? logs.Min() : 0, high = logs.Length > 0 ? logs.Max() : 2;
        Low = Math.Floor(2 * low - 0.1) / 2;
        High = Math.Ceiling(2 * high + 0.1) / 2;
        if (High - Low < 1.5)
        {
            High = Low + 1.5;
        }
    }

    /// <summary>Lower end, common logarithm.</summary>
    public double Low { get; }

    /// <summary>Upper end, common logarithm.</summary>
    public double High { get; private set; }

    /// <summary>Moves the upper end so that this share of the axis lies beyond a point (common logarithm).</summary>
    public void MakeRoom(double point, double share) => High = Math.Max(High, (point - share * Low) / (1 - share));

    /// <summary>Exponents of the ticks.</summary>
    public IReadOnlyList<int> Decades
    {
        get
        {
            int first = (int)Math.Ceiling(Low), last = (int)Math.Floor(High);
            int step = Math.Max(1, (int)Math.Ceiling((last - first + 1) / 5.0));
            return [.. Enumerable.Range(0, (last - first) / step + 1).Select(k => first + k * step)];
        }
    }

    /// <summary>`0.1`, `100`, `10,000`, `1 million`.</summary>
    public static string Label(int exponent) => exponent switch
    {
        < -3 => $"1e−{-exponent}",
        < 0 => Answers.Say.Stated(Math.Pow(10, exponent)),
        < 6 => Answers.Say.Count((long)Math.Pow(10, exponent)),
        < 9 => $"{Answers.Say.Count((long)Math.Pow(10, exponent - 6))} million",
        < 12 => $"{Answers.Say.Count((long)Math.Pow(10, exponent - 9))} billion",
        _ => $"1e{exponent}",
    };

    /// <summary>Ticks for a sheet whose coordinates are common logarithms.</summary>
    public IReadOnlyList<(double Position, string Label)> Ticks => [.. Decades.Select(e => ((double)e, Label(e)))];
}
