using ScottPlot;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>The font that ships with the program, so that figures never depend on the fonts of the machine.</summary>
public static class FigureFont
{
    /// <summary>Family name under which the plotting library finds it.</summary>
    public const string Family = "DeepSourceCheck Figures";

    private static readonly Lazy<(SKTypeface Regular, SKTypeface SemiBold)> Faces = new(Load);

    /// <summary>Weight 400.</summary>
    public static SKTypeface Regular => Faces.Value.Regular;

    /// <summary>Weight 600.</summary>
    public static SKTypeface SemiBold => Faces.Value.SemiBold;

    /// <summary>Makes the family known to the plotting library; any number of times, from any thread.</summary>
    public static void Register() => _ = Faces.Value;

    /// <summary>A font of one of the two weights, sub-pixel placed and unhinted: the same at any scale.</summary>
    public static SKFont Font(float size, bool semiBold) =>
        new(semiBold ? SemiBold : Regular, size) { Subpixel = true, Hinting = SKFontHinting.None, LinearMetrics = true, Edging = SKFontEdging.Antialias };

    private static (SKTypeface Regular, SKTypeface SemiBold) Load()
    {
        (SKTypeface, SKTypeface) faces = (Read("fonts/figures-regular.ttf"), Read("fonts/figures-semibold.ttf"));
        Fonts.FontResolvers.Insert(0, new Resolver(faces.Item1, faces.Item2));
        return faces;
    }

    private static SKTypeface Read(string resource)
    {
        using Stream stream = typeof(FigureFont).Assembly.GetManifestResourceStream(resource)
            ?? throw new InvalidOperationException($"The program was built without its font {resource}.");
        using SKData data = SKData.Create(stream);
        return SKTypeface.FromData(data) ?? throw new InvalidOperationException($"The font {resource} cannot be read.");
    }

    private sealed class Resolver(SKTypeface regular, SKTypeface semiBold) : IFontResolver
    {
        public SKTypeface? CreateTypeface(string fontName, FontWeight weight, FontSlant slant, FontSpacing spacing) =>
            fontName == Family ? weight >= FontWeight.SemiBold ? semiBold : regular : null;

        public SKTypeface? CreateTypeface(string fontName, bool bold, bool italic) =>
            fontName == Family ? bold ? semiBold : regular : null;
    }
}
