using System.Collections.Concurrent;
using System.Globalization;
using System.Text;
using System.Xml.Linq;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Turns the text of a drawing into outlines of the shipped font.</summary>
/// <remarks>
/// A text element shows in whatever font the reader's machine has, at other widths, or not at all; office and print programs ignore fonts embedded in
/// SVG. Outlines look the same everywhere. Each glyph is defined once and used by reference. What the drawing says stands in its title, description and table.
/// </remarks>
internal static class SvgOutlines
{
    // Glyphs are defined at this size [px], with two decimals: 0.01 % of an em.
    private const float DefinedSize = 100;

    // Outlines by weight and character: the figures of a page say much the same.
    private static readonly ConcurrentDictionary<string, string> Known = new(StringComparer.Ordinal);

    private static readonly XNamespace Svg = "http://www.w3.org/2000/svg";

    /// <summary>The drawing's text; every id begins with the prefix.</summary>
    public static string Replace(string xml, string prefix) => Element(xml, prefix).ToString(SaveOptions.DisableFormatting).Replace("\r", "", StringComparison.Ordinal);

    /// <summary>The same as an element.</summary>
    public static XElement Element(string xml, string prefix)
    {
        XDocument document = XDocument.Parse(xml);
        XElement root = document.Root!;
        SortedDictionary<string, string> outlines = new(StringComparer.Ordinal);
        foreach (XElement text in root.Descendants(Svg + "text").ToList())
        {
            text.ReplaceWith(Outlined(text, prefix, outlines));
        }

        foreach (XElement clip in root.Descendants(Svg + "clipPath"))
        {
            Prefix(clip, "id", prefix);
        }

        foreach (XElement element in root.Descendants().Where(e => e.Attribute("clip-path") is not null))
        {
            element.SetAttributeValue("clip-path", element.Attribute("clip-path")!.Value.Replace("url(#", $"url(#{prefix}-", StringComparison.Ordinal));
        }

        root.AddFirst(new XElement(Svg + "defs", outlines.Select(o => new XElement(Svg + "path", new XAttribute("id", o.Key), new XAttribute("d", o.Value)))));
        root.SetAttributeValue("viewBox", $"0 0 {root.Attribute("width")!.Value} {root.Attribute("height")!.Value}");
        root.Attribute(XNamespace.Xmlns + "xlink")?.Remove();
        return root;
    }

    private static XElement Outlined(XElement text, string prefix, SortedDictionary<string, string> outlines)
    {
        string content = text.Value.Trim();
        float size = float.Parse(text.Attribute("font-size")!.Value, CultureInfo.InvariantCulture);
        bool semiBold = text.Attribute("font-weight")?.Value is { } w && w != "normal" && w != "400";
        float[] xs = Numbers(text, "x"), ys = Numbers(text, "y");
        float scale = size / DefinedSize;
        float x0 = xs.Length > 0 ? xs[0] : 0, y0 = ys.Length > 0 ? ys[0] : 0;
        XElement group = new(Svg + "g");
        foreach (XAttribute attribute in text.Attributes().Where(a => a.Name.LocalName is "fill" or "fill-opacity" or "stroke" or "stroke-linejoin" or "stroke-miterlimit"))
        {
            group.SetAttributeValue(attribute.Name, attribute.Value);
        }

        if (text.Attribute("stroke-width") is { } width)
        {
            group.SetAttributeValue("stroke-width", Short(float.Parse(width.Value, CultureInfo.InvariantCulture) / scale));
        }

        group.SetAttributeValue("transform", $"{text.Attribute("transform")?.Value} translate({Short(x0)} {Short(y0)}) scale({Short(scale)})".Trim());
        int k = 0;
        foreach (Rune rune in content.EnumerateRunes())
        {
            float x = xs[Math.Min(k, xs.Length - 1)];
            k++;
            string glyph = (semiBold ? "b" : "r") + rune.Value.ToString("x", CultureInfo.InvariantCulture);
            if (!Known.TryGetValue(glyph, out string? outline))
            {
                Known[glyph] = outline = Outline(rune, semiBold);
            }

            if (outline.Length > 0)
            {
                string id = $"{prefix}-{glyph}";
                outlines[id] = outline;
                group.Add(new XElement(Svg + "use", new XAttribute("href", "#" + id), new XAttribute("x", Short((x - x0) / scale))));
            }
        }

        return group;
    }

    private static string Outline(Rune rune, bool semiBold)
    {
        using SKFont font = FigureFont.Font(DefinedSize, semiBold);
        using SKPath? path = font.GetGlyphPath(font.GetGlyph(rune.Value));
        if (path is null || path.IsEmpty)
        {
            return "";
        }

        StringBuilder d = new();
        using SKPath.RawIterator iterator = path.CreateRawIterator();
        SKPoint[] p = new SKPoint[4];
        for (SKPathVerb verb = iterator.Next(p); verb != SKPathVerb.Done; verb = iterator.Next(p))
        {
            _ = verb switch
            {
                SKPathVerb.Move => d.Append(CultureInfo.InvariantCulture, $"M{Point(p[0])}"),
                SKPathVerb.Line => d.Append(CultureInfo.InvariantCulture, $"L{Point(p[1])}"),
                SKPathVerb.Quad => d.Append(CultureInfo.InvariantCulture, $"Q{Point(p[1])} {Point(p[2])}"),
                SKPathVerb.Cubic => d.Append(CultureInfo.InvariantCulture, $"C{Point(p[1])} {Point(p[2])} {Point(p[3])}"),
                SKPathVerb.Close => d.Append('Z'),
                _ => throw new InvalidOperationException("A font outline holds lines and curves only."),
            };
        }

        return d.ToString();
    }

    private static string Point(SKPoint p) => $"{Short(p.X)} {Short(p.Y)}";

    private static string Short(float value) => (Math.Round(value, 3) + 0.0).ToString("0.###", CultureInfo.InvariantCulture);

    private static float[] Numbers(XElement element, string name) =>
        [.. element.Attribute(name)!.Value.Split(',', StringSplitOptions.TrimEntries | StringSplitOptions.RemoveEmptyEntries).Select(v => float.Parse(v, CultureInfo.InvariantCulture))];

    private static void Prefix(XElement element, string name, string prefix) =>
        element.SetAttributeValue(name, $"{prefix}-{element.Attribute(name)!.Value}");
}
