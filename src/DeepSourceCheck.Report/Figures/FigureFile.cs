using System.Xml.Linq;

namespace DeepSourceCheck.Report.Figures;

/// <summary>A figure as an SVG file of its own: with title and description, for those who meet it without its page.</summary>
public static class FigureFile
{
    /// <summary>The file's text.</summary>
    public static string Svg(Figure figure, FigureSheet sheet) => Svg(figure, sheet.SvgWithText());

    /// <summary>The file's text, from <see cref="FigureSheet.SvgWithText"/>.</summary>
    internal static string Svg(Figure figure, string xml)
    {
        XElement root = SvgOutlines.Element(xml, "g");
        XNamespace svg = root.Name.Namespace;
        root.SetAttributeValue("role", "img");
        root.SetAttributeValue("aria-labelledby", "title description");
        root.AddFirst(
            new XElement(svg + "title", new XAttribute("id", "title"), figure.Title),
            new XElement(svg + "desc", new XAttribute("id", "description"), $"{figure.Alt} {figure.Quantity}; {figure.Conditions}"));
        return "<?xml version=\"1.0\" encoding=\"utf-8\"?>\n" + root.ToString(SaveOptions.DisableFormatting) + "\n";
    }
}
