using System.Globalization;
using System.Text.RegularExpressions;

namespace DeepSourceCheck.Files.Edf;

/// <summary>Edges of the filters that a recording has passed, from the text of its header.</summary>
/// <param name="HighPass">Highest high-pass edge [Hz]; null where the text states none.</param>
/// <param name="LowPass">Lowest low-pass edge [Hz]; null where the text states none.</param>
public readonly partial record struct EdfPrefilter(double? HighPass, double? LowPass)
{
    /// <summary>Reads `HP:0.1Hz LP:75Hz N:50Hz` (EDF+, section 2.1.3.3) and what is written in its place: `HP: DC; LP: 417 Hz`, `HP:100mHz LP:2.5kHz`. Notches and the rest are passed over.</summary>
    /// <param name="text">The header's text.</param>
    public static EdfPrefilter Parse(string text)
    {
        double? high = null, low = null;
        foreach (Match match in Edge().Matches(text))
        {
            double factor = match.Groups["scale"].Value switch { "m" => 1e-3, "k" or "K" => 1e3, _ => 1 };
            double edge = match.Groups["number"].Success ? factor * double.Parse(match.Groups["number"].ValueSpan, NumberStyles.Float, CultureInfo.InvariantCulture) : 0;
            if (match.Groups["kind"].Value is "HP" or "hp")
            {
                high = Math.Max(high ?? 0, edge);
            }
            else if (edge > 0)
            {
                low = Math.Min(low ?? double.PositiveInfinity, edge);
            }
        }

        return new(high, low);
    }

    [GeneratedRegex(@"\b(?<kind>HP|LP|hp|lp)\s*[:=]?\s*(?:DC\b|(?<number>\d+(?:\.\d+)?|\.\d+)\s*(?:(?<scale>[mkK])?[Hh]z)?)", RegexOptions.CultureInvariant)]
    private static partial Regex Edge();
}
