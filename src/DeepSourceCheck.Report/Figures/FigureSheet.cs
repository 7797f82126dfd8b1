using System.Text;

using ScottPlot;
using ScottPlot.TickGenerators;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>One drawing at one width: a plot with its axes, and the layers below and above its grid.</summary>
public sealed class FigureSheet : IDisposable
{
    private readonly Plot _plot = new();

    /// <summary>A sheet of a size in pixels; the padding is what lies around the plotting area.</summary>
    public FigureSheet(int width, int height, float left, float right, float top, float bottom)
    {
        FigureFont.Register();
        Width = width;
        Height = height;
        _plot.FigureBackground.Color = Colour(Palette.Ground);
        _plot.DataBackground.Color = Colors.Transparent;
        _plot.Layout.Fixed(new PixelPadding(left, right, bottom, top));
        _plot.Axes.Frameless();
        _plot.HideGrid();
        _plot.HideLegend();
    }

    /// <summary>Width [px].</summary>
    public int Width { get; }

    /// <summary>Height [px].</summary>
    public int Height { get; }

    /// <summary>Sets the range of both axes.</summary>
    public void Limits(double left, double right, double bottom, double top) => _plot.Axes.SetLimits(left, right, bottom, top);

    /// <summary>The lower axis: line, ticks with labels, and a grid line at each tick.</summary>
    public void BottomAxis(IReadOnlyList<(double Position, string Label)> ticks) => Axis(_plot.Axes.Bottom, ticks);

    /// <summary>The left axis, as <see cref="BottomAxis"/>.</summary>
    public void LeftAxis(IReadOnlyList<(double Position, string Label)> ticks) => Axis(_plot.Axes.Left, ticks);

    /// <summary>Draws below the grid.</summary>
    public void Under(Action<FigurePen> draw)
    {
        List<IRenderAction> actions = _plot.RenderManager.RenderActions;
        int at = actions.FindIndex(a => a is ScottPlot.Rendering.RenderActions.RenderGridsBelowPlottables);
        actions.Insert(at, new Layer(draw));
    }

    /// <summary>Draws above everything.</summary>
    public void Over(Action<FigurePen> draw) => _plot.RenderManager.RenderActions.Add(new Layer(draw));

    /// <summary>The drawing as SVG whose text is outlines of the shipped font.</summary>
    /// <param name="prefix">Begins every id, so that several drawings can stand in one page.</param>
    public string Svg(string prefix) => SvgOutlines.Replace(SvgWithText(), prefix);

    /// <summary>The drawing as SVG whose text is still text: what <see cref="SvgOutlines"/> starts from.</summary>
    internal string SvgWithText()
    {
        using MemoryStream stream = new();
        using (SKCanvas canvas = SKSvgCanvas.Create(SKRect.Create(Width, Height), stream))
        {
            _plot.Render(canvas, new PixelRect(0, Width, Height, 0));
        }

        return Encoding.UTF8.GetString(stream.ToArray());
    }

    /// <summary>The drawing as PNG at twice the size.</summary>
    public byte[] Png()
    {
        const int Scale = 2;
        using SKSurface surface = SKSurface.Create(new SKImageInfo(Width * Scale, Height * Scale, SKColorType.Rgba8888, SKAlphaType.Premul));
        surface.Canvas.Scale(Scale);
        _plot.Render(surface.Canvas, new PixelRect(0, Width, Height, 0));
        using SKImage image = surface.Snapshot();
        using SKData data = image.Encode(SKEncodedImageFormat.Png, 100);
        return data.ToArray();
    }

    /// <inheritdoc/>
    public void Dispose() => _plot.Dispose();

    private static ScottPlot.Color Colour(SKColor c) => new(c.Red, c.Green, c.Blue, c.Alpha);

    private void Axis(IAxis axis, IReadOnlyList<(double Position, string Label)> ticks)
    {
        axis.IsVisible = true;
        axis.FrameLineStyle.IsVisible = true;
        axis.FrameLineStyle.Color = Colour(Palette.Edge);
        axis.FrameLineStyle.Width = 1;
        axis.MajorTickStyle.Color = Colour(Palette.Edge);
        axis.MajorTickStyle.Length = 4;
        axis.MajorTickStyle.Width = 1;
        axis.TickLabelStyle.FontName = FigureFont.Family;
        axis.TickLabelStyle.FontSize = FigurePen.Small;
        axis.TickLabelStyle.ForeColor = Colour(Palette.Ink2);
        axis.TickGenerator = new NumericManual([.. ticks.Select(t => t.Position)], [.. ticks.Select(t => t.Label)]);
        _plot.Grid.IsVisible = true;
        _plot.Grid.MajorLineColor = Colour(Palette.Hair);
        _plot.Grid.MajorLineWidth = 1;
        (axis is IXAxis ? _plot.Grid.YAxisStyle : _plot.Grid.XAxisStyle).IsVisible &= Shown(axis is IXAxis ? _plot.Axes.Left : _plot.Axes.Bottom);
        (axis is IXAxis ? _plot.Grid.XAxisStyle : _plot.Grid.YAxisStyle).IsVisible = true;
    }

    private static bool Shown(IAxis axis) => axis.TickGenerator is NumericManual;

    private sealed class Layer(Action<FigurePen> draw) : IRenderAction
    {
        public void Render(RenderPack rp)
        {
            rp.Canvas.Save();
            draw(new FigurePen(rp));
            rp.Canvas.Restore();
        }
    }
}
