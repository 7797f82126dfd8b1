using System.Globalization;
using System.Text.RegularExpressions;

using DeepSourceCheck.Report.Html;

namespace DeepSourceCheck.Tests.Report;

/// <summary>Reads the colour tokens of the page's stylesheet and computes contrast.</summary>
internal static partial class StylesheetColours
{
    /// <summary>Every block that defines tokens as hexadecimal colours: light, dark by system, dark by button, print.</summary>
    public static IReadOnlyList<IReadOnlyDictionary<string, string>> Blocks() =>
    [
        .. Block().Matches(HtmlReport.Stylesheet).Select(b => Token().Matches(b.Value).ToDictionary(t => t.Groups[1].Value, t => t.Groups[2].Value)).Where(b => b.Count > 0),
    ];

    /// <summary>Contrast ratio of two colours. Source: WCAG 2.2, definitions of contrast ratio and relative luminance (from memory).</summary>
    public static double Contrast(string a, string b)
    {
        double x = Luminance(a), y = Luminance(b);
        return (Math.Max(x, y) + 0.05) / (Math.Min(x, y) + 0.05);
    }

    private static double Luminance(string hex)
    {
        double Channel(int at)
        {
            double c = int.Parse(hex.AsSpan(at, 2), NumberStyles.HexNumber, CultureInfo.InvariantCulture) / 255.0;
            return c <= 0.04045 ? c / 12.92 : Math.Pow((c + 0.055) / 1.055, 2.4);
        }

        return 0.2126 * Channel(1) + 0.7152 * Channel(3) + 0.0722 * Channel(5);
    }

    [GeneratedRegex("\\{[^{}]*--ground:[^{}]*\\}")]
    private static partial Regex Block();

    [GeneratedRegex("--([a-z0-9]+): (#[0-9A-F]{6});")]
    private static partial Regex Token();
}
