using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Html;

namespace DeepSourceCheck.Report.Figures;

/// <summary>A figure as the page shows it.</summary>
/// <param name="Wide">Drawing at page width.</param>
/// <param name="Narrow">Drawing at phone width.</param>
/// <param name="Height">Height of the wide drawing [px].</param>
internal sealed record PageDrawing(string Wide, string Narrow, int Height);

/// <summary>Every drawing that the files and the page need, begun at once and made on all processors.</summary>
/// <remarks>
/// A drawing depends on nothing but its figure: which thread makes it, and when, changes no byte. The wide drawing of the page and that of the file are one, rendered once. Drawings are held in
/// memory; whoever asks for one waits for it, and writes the files in their order.
/// </remarks>
internal sealed class FigureDrawings
{
    private readonly List<Task<(string File, string Page, int Height)>> _wide = [];
    private readonly List<Task<string>> _narrow = [];
    private readonly List<Task<byte[]>> _png = [];

    private FigureDrawings(IReadOnlyList<Figure> figures) => Figures = figures;

    /// <summary>The figures, in the order of the page.</summary>
    public IReadOnlyList<Figure> Figures { get; }

    /// <summary>Begins to draw.</summary>
    /// <param name="assessment">What the figures show.</param>
    /// <param name="files">True where <see cref="Svg"/> and <see cref="Png"/> will be asked for.</param>
    /// <param name="page">True where <see cref="Page"/> will be asked for.</param>
    /// <param name="cancel">What has not begun then never will; asking for it throws.</param>
    public static FigureDrawings Begin(Assessment assessment, bool files, bool page, CancellationToken cancel = default)
    {
        FigureFont.Register();
        var drawings = new FigureDrawings(FigureSet.All(assessment));
        for (int k = 0; k < drawings.Figures.Count; k++)
        {
            Figure figure = drawings.Figures[k];
            int index = k;
            drawings._wide.Add(Task.Run(() => Wide(figure, index, files, page), cancel));
            if (files)
            {
                drawings._png.Add(Task.Run(() => Pixels(figure), cancel));
            }

            if (page)
            {
                drawings._narrow.Add(Task.Run(() => Narrow(figure, index), cancel));
            }
        }

        return drawings;
    }

    /// <summary>Text of a figure's SVG file.</summary>
    public string Svg(int index) => Drawn(_wide[index]).File;

    /// <summary>Bytes of a figure's PNG file.</summary>
    public byte[] Png(int index) => Drawn(_png[index]);

    /// <summary>A figure as the page shows it.</summary>
    public PageDrawing Page(int index)
    {
        (_, string wide, int height) = Drawn(_wide[index]);
        return new(wide, Drawn(_narrow[index]), height);
    }

    // The drawing's own exception, not one about tasks.
    private static T Drawn<T>(Task<T> drawing) => drawing.GetAwaiter().GetResult();

    private static (string File, string Page, int Height) Wide(Figure figure, int index, bool files, bool page)
    {
        using FigureSheet sheet = figure.Draw(figure.FileWidth);
        string xml = sheet.SvgWithText();
        return (
            files ? FigureFile.Svg(figure, xml) : "",
            page ? InlineFigure.Svg(xml, $"f{index}w", figure.Alt, "normal") : "",
            sheet.Height);
    }

    private static string Narrow(Figure figure, int index)
    {
        using FigureSheet sheet = figure.Draw(Figure.PhoneWidth);
        return InlineFigure.Svg(sheet, $"f{index}n", figure.Alt, "narrow");
    }

    private static byte[] Pixels(Figure figure)
    {
        using FigureSheet sheet = figure.Draw(figure.FileWidth);
        return sheet.Png();
    }
}
