using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Report.Answers;

/// <summary>What is not known, in words that page, figure and console share.</summary>
public static class UnknownWords
{
    /// <summary>Name of an unknown: `skull conductivity`.</summary>
    /// <param name="unknown">Key.</param>
    public static string Name(string unknown) => unknown switch
    {
        "moment_nAm" => "moment",
        "skull_conductivity_ratio" => "skull conductivity",
        "noise_factor" => "noise",
        "head_shift_mm" => "head in the array",
        "centre_shift_mm" => "sphere's centre",
        _ => unknown,
    };

    /// <summary>Its range: `2 to 6 nAm`, `ratio 15 to 80`, `5 mm each axis`.</summary>
    /// <param name="unknown">Key.</param>
    /// <param name="study">The study.</param>
    /// <param name="response">The response.</param>
    public static string Range(string unknown, Study study, Response response) => (unknown, study.Unknowns) switch
    {
        ("moment_nAm", _) when response.MomentRange is { } r => $"{Number(Si.ToNanoAmpereMetres(r.Low))} to {Number(Si.ToNanoAmpereMetres(r.High))} nAm",
        ("skull_conductivity_ratio", { SkullRatio: { } r }) => $"ratio {Number(r.Low)} to {Number(r.High)}",
        ("noise_factor", { NoiseFactor: { } r }) => $"{Number(r.Low)} to {Number(r.High)} times",
        ("head_shift_mm", { } u) => $"{Number(Si.ToMm(u.HeadShift))} mm each axis",
        ("centre_shift_mm", { } u) => $"{Number(Si.ToMm(u.CentreShift))} mm each axis",
        _ => "",
    };

    /// <summary>`170 to 900`, the end that is out of reach in words.</summary>
    /// <param name="fewest">Fewest trials; null where out of reach.</param>
    /// <param name="most">Most trials; null where out of reach.</param>
    public static string Trials(long? fewest, long? most) => fewest is null or > Say.MostTrials ? Say.OutOfReach
        : fewest == most ? Say.Count(fewest.Value)
        : most is { } m and <= Say.MostTrials ? $"{Say.Count(fewest.Value)} to {Say.Count(m)}" : $"{Say.Count(fewest.Value)} to {Say.OutOfReach}";

    /// <summary>Whether single unknowns explain the spread.</summary>
    /// <param name="spread">The verdict's spread.</param>
    public static string Interaction(VerdictSpread spread) => spread.Interaction switch
    {
        null => "",
        0 => "The unknowns act one by one: together they spread the count as much as each alone would have it.",
        { } share => $"{Say.Percent(Math.Round(share, 2))} of the spread comes from unknowns acting together, which no single bar shows.",
    };

    private static string Number(double value) => Say.Stated(Math.Round(value, 6));
}
