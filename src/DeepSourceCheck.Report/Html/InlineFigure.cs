using System.Text.RegularExpressions;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Figures;

namespace DeepSourceCheck.Report.Html;

/// <summary>Drawings as they stand in the page: in the page's colours, so that they follow its light and dark.</summary>
internal static partial class InlineFigure
{
    /// <summary>The drawing with a text alternative.</summary>
    public static string Svg(FigureSheet sheet, string prefix, string alt, string cssClass) => Svg(sheet.SvgWithText(), prefix, alt, cssClass);

    /// <summary>The same from <see cref="FigureSheet.SvgWithText"/>.</summary>
    public static string Svg(string xml, string prefix, string alt, string cssClass)
    {
        string svg = InPageColours(SvgOutlines.Replace(xml, prefix));
        int end = svg.IndexOf('>', StringComparison.Ordinal);
        return $"<svg class=\"{cssClass}\" role=\"img\" aria-label=\"{Markup.Escape(alt)}\"{svg[4..end]}{svg[end..]}";
    }

    /// <summary>A modality's mark, decorative.</summary>
    public static string Mark(Modality modality)
    {
        string shape = modality switch
        {
            Modality.Eeg => "<circle cx=\"10\" cy=\"10\" r=\"7\" style=\"fill:var(--eeg)\"/>",
            Modality.Meg => "<path d=\"M10 1L19 10L10 19L1 10Z\" style=\"fill:var(--meg)\"/>",
            _ => "<path d=\"M3 3H17V17H3Z\" style=\"fill:var(--both)\"/><circle cx=\"10\" cy=\"10\" r=\"3\" style=\"fill:var(--ground)\"/>",
        };
        return $"<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"20\" height=\"20\" aria-hidden=\"true\">{shape}</svg>";
    }

    /// <summary>The caution triangle, decorative: the word stands beside it.</summary>
    public const string Triangle =
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"20\" height=\"18\" aria-hidden=\"true\"><path d=\"M10 2L18.5 16.5H1.5Z\" style=\"fill:none;stroke:var(--caution);stroke-width:2;stroke-linejoin:round\"/>"
        + "<path d=\"M10 7V11.5M10 13.2V14.8\" style=\"stroke:var(--caution);stroke-width:2\"/></svg>";

    /// <summary>The plumb weight beside the program's name.</summary>
    public const string Glyph =
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"14\" height=\"26\" aria-hidden=\"true\"><path d=\"M7 0V14\" style=\"stroke:var(--ink);stroke-width:2\"/><path d=\"M1.5 13H12.5L7 25Z\" style=\"fill:var(--ink)\"/></svg>";

    /// <summary>A bar of a place, for the key.</summary>
    public const string PlaceKey =
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"40\" height=\"10\" aria-hidden=\"true\"><path d=\"M0 2.5H40V7.5H0Z\" style=\"fill:var(--ink2)\"/><path d=\"M12 2V8M26 2V8\" style=\"stroke:var(--ground);stroke-width:1.5\"/></svg>";

    /// <summary>The plumb line, for the key.</summary>
    public const string PlumbKey =
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"34\" height=\"20\" aria-hidden=\"true\"><path d=\"M8 0H34V14H8Z\" style=\"fill:var(--beyond)\"/><path d=\"M8 0V12\" style=\"stroke:var(--ink);stroke-width:2\"/><path d=\"M3 11H13L8 20Z\" style=\"fill:var(--ink)\"/></svg>";

    /// <summary>An open mark, for the key.</summary>
    public const string OpenKey =
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"20\" height=\"20\" aria-hidden=\"true\"><path d=\"M10 2L18 10L10 18L2 10Z\" style=\"fill:none;stroke:var(--meg);stroke-width:2\"/></svg>";

    /// <summary>A modality's line, for the key.</summary>
    public static string Line(Modality modality)
    {
        (string token, string dash) = modality switch
        {
            Modality.Eeg => ("eeg", "none"),
            Modality.Meg => ("meg", "9 4"),
            _ => ("both", "2 3 9 3"),
        };
        return $"<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"40\" height=\"10\" aria-hidden=\"true\"><path d=\"M0 5H40\" style=\"stroke:var(--{token});stroke-width:3;stroke-dasharray:{dash}\"/></svg>";
    }

    private static string InPageColours(string svg) => ColourAttribute().Replace(svg, match =>
    {
        string hex = match.Groups[2].Value.ToUpperInvariant();
        string token = Palette.Tokens.FirstOrDefault(t => Palette.Hex(t.Colour) == hex).Token
            ?? throw new InvalidOperationException($"The figure uses {hex}, which is no colour of the page.");
        return $"style=\"{match.Groups[1].Value}:var(--{token})\"";
    });

    [GeneratedRegex("\\b(fill|stroke)=\"(#[0-9A-Fa-f]{6})\"")]
    private static partial Regex ColourAttribute();
}
