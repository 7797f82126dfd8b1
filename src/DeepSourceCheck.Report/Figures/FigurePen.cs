using DeepSourceCheck.Core.Results;

using ScottPlot;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Where a text stands relative to its point.</summary>
public enum Anchor
{
    /// <summary>Begins at the point.</summary>
    Start,

    /// <summary>Centred on the point.</summary>
    Middle,

    /// <summary>Ends at the point.</summary>
    End,
}

/// <summary>Draws the marks of the figures on a rendered plot. Pixels from the top left; <see cref="X"/> and <see cref="Y"/> map the plot's axes.</summary>
public sealed class FigurePen
{
    /// <summary>Ticks, keys.</summary>
    public const float Small = 12;

    /// <summary>Figure labels.</summary>
    public const float Label = 13;

    private readonly SKCanvas _canvas;
    private readonly PixelRect _data;
    private readonly AxisLimits _limits;

    internal FigurePen(RenderPack pack)
    {
        _canvas = pack.Canvas;
        _data = pack.DataRect;
        _limits = pack.Plot.Axes.GetLimits();
    }

    /// <summary>Left edge of the plotting area [px].</summary>
    public float Left => _data.Left;

    /// <summary>Right edge of the plotting area [px].</summary>
    public float Right => _data.Right;

    /// <summary>Upper edge of the plotting area [px].</summary>
    public float Top => _data.Top;

    /// <summary>Lower edge of the plotting area [px].</summary>
    public float Bottom => _data.Bottom;

    /// <summary>Pixel of an abscissa.</summary>
    public float X(double x) => (float)(_data.Left + (x - _limits.Left) / (_limits.Right - _limits.Left) * (_data.Right - _data.Left));

    /// <summary>Pixel of an ordinate.</summary>
    public float Y(double y) => (float)(_data.Bottom - (y - _limits.Bottom) / (_limits.Top - _limits.Bottom) * (_data.Bottom - _data.Top));

    /// <summary>Width of a text [px].</summary>
    public static float Width(string text, float size, bool semiBold = false)
    {
        using SKFont font = FigureFont.Font(size, semiBold);
        return font.MeasureText(text);
    }

    /// <summary>The text, cut in its middle to fit a width [px].</summary>
    public static string Fit(string text, float width, float size, bool semiBold = false)
    {
        if (Width(text, size, semiBold) <= width)
        {
            return text;
        }

        for (int keep = text.Length - 1; keep > 2; keep--)
        {
            string cut = $"{text[..((keep + 1) / 2)].TrimEnd('-', ' ')}…{text[^(keep / 2)..].TrimStart('-', ' ')}";
            if (Width(cut, size, semiBold) <= width)
            {
                return cut;
            }
        }

        return "…";
    }

    /// <summary>A text on its base line, with a halo of the ground where it crosses marks.</summary>
    public void Text(string text, float x, float baseline, float size = Label, Anchor anchor = Anchor.Start, bool semiBold = false, SKColor? colour = null, bool halo = false)
    {
        using SKFont font = FigureFont.Font(size, semiBold);
        float width = font.MeasureText(text);
        float left = anchor switch { Anchor.Start => x, Anchor.Middle => x - width / 2, _ => x - width };
        if (halo)
        {
            using SKPaint around = Stroke(Palette.Ground, 4);
            around.StrokeJoin = SKStrokeJoin.Round;
            _canvas.DrawText(text, left, baseline, font, around);
        }

        using SKPaint paint = Fill(colour ?? Palette.Ink);
        _canvas.DrawText(text, left, baseline, font, paint);
    }

    /// <summary>A straight line.</summary>
    public void Line(float x0, float y0, float x1, float y1, SKColor colour, float width)
    {
        using SKPaint paint = Stroke(colour, width);
        _canvas.DrawLine(x0, y0, x1, y1, paint);
    }

    /// <summary>A filled rectangle.</summary>
    public void Rectangle(float left, float top, float right, float bottom, SKColor colour)
    {
        using SKPaint paint = Fill(colour);
        _canvas.DrawRect(SKRect.Create(left, top, right - left, bottom - top), paint);
    }

    /// <summary>A circle's outline.</summary>
    public void Ring(float x, float y, float radius, SKColor colour, float width)
    {
        using SKPaint paint = Stroke(colour, width);
        _canvas.DrawCircle(x, y, radius, paint);
    }

    /// <summary>A filled disc.</summary>
    public void Disc(float x, float y, float radius, SKColor colour)
    {
        using SKPaint paint = Fill(colour);
        _canvas.DrawCircle(x, y, radius, paint);
    }

    /// <summary>Many equal dots as one path.</summary>
    public void Dots(IEnumerable<SKPoint> points, float radius, SKColor colour)
    {
        using SKPath path = new();
        foreach (SKPoint p in points)
        {
            path.MoveTo(Tenth(p.X), Tenth(p.Y));
            path.LineTo(Tenth(p.X), Tenth(p.Y) + 0.1f);
        }

        using SKPaint paint = Stroke(colour, 2 * radius);
        paint.StrokeCap = SKStrokeCap.Round;
        _canvas.DrawPath(path, paint);

        static float Tenth(float v) => MathF.Round(v, 1);
    }

    /// <summary>A closed, filled area.</summary>
    public void Area(IReadOnlyList<SKPoint> points, SKColor colour)
    {
        using SKPath path = Path(points, close: true);
        using SKPaint paint = Fill(colour);
        _canvas.DrawPath(path, paint);
    }

    /// <summary>Closed lines as one shape, holes left open.</summary>
    /// <param name="lines">Corners of each line [px].</param>
    /// <param name="fill">What lies within, or null.</param>
    /// <param name="stroke">The lines.</param>
    /// <param name="width">Their width [px].</param>
    public void Outline(IEnumerable<IEnumerable<SKPoint>> lines, SKColor? fill, SKColor stroke, float width)
    {
        using SKPath path = new() { FillType = SKPathFillType.EvenOdd };
        foreach (IEnumerable<SKPoint> line in lines)
        {
            path.AddPoly([.. line.Select(p => new SKPoint(MathF.Round(p.X, 1), MathF.Round(p.Y, 1)))], close: true);
        }

        if (fill is { } inside)
        {
            using SKPaint paint = Fill(inside);
            _canvas.DrawPath(path, paint);
        }

        using SKPaint edge = Stroke(stroke, width);
        _canvas.DrawPath(path, edge);
    }

    /// <summary>A curve in its modality's line: EEG full, MEG dashed 9 4, both dash-dot 2 3 9 3.</summary>
    public void Curve(IReadOnlyList<SKPoint> points, Modality modality)
    {
        float[] pattern = modality switch { Modality.Eeg => [], Modality.Meg => [9, 4], _ => [2, 3, 9, 3] };
        using SKPaint paint = Stroke(Palette.Of(modality), 3);
        foreach (IReadOnlyList<SKPoint> piece in pattern.Length == 0 ? [points] : Dashes(points, pattern))
        {
            using SKPath path = Path(piece, close: false);
            _canvas.DrawPath(path, paint);
        }
    }

    /// <summary>A curve that belongs to no modality.</summary>
    /// <param name="points">Its points [px].</param>
    /// <param name="pattern">Lengths of dashes and gaps in turn [px]; empty for a full line.</param>
    /// <param name="colour">Colour.</param>
    /// <param name="width">Width [px].</param>
    public void Trace(IReadOnlyList<SKPoint> points, float[] pattern, SKColor colour, float width)
    {
        using SKPaint paint = Stroke(colour, width);
        foreach (IReadOnlyList<SKPoint> piece in pattern.Length == 0 || points.Count < 2 ? [points] : Dashes(points, pattern))
        {
            using SKPath path = Path(piece, close: false);
            _canvas.DrawPath(path, paint);
        }
    }

    /// <summary>The mark of a modality, with a 2 px outline of the ground: disc r 7, diamond of half-diagonal 9, square 14 with a round hole.</summary>
    /// <param name="modality">Which.</param>
    /// <param name="x">Centre [px].</param>
    /// <param name="y">Centre [px].</param>
    /// <param name="open">True for a figure at an assumption or a threshold.</param>
    /// <param name="scale">Size relative to the full mark.</param>
    public void Mark(Modality modality, float x, float y, bool open = false, float scale = 1)
    {
        using SKPaint outline = Stroke(Palette.Ground, 4 * scale);
        Shape(modality, x, y, scale, outline);
        using SKPaint inside = Fill(open ? Palette.Ground : Palette.Of(modality));
        Shape(modality, x, y, scale, inside);
        if (open)
        {
            using SKPaint edge = Stroke(Palette.Of(modality), 2);
            Shape(modality, x, y, scale, edge);
        }

        if (modality == Modality.Both)
        {
            Disc(x, y, 3 * scale, open ? Palette.Both : Palette.Ground);
        }
    }

    /// <summary>Small open marks without outline, for sensors: rings for EEG, diamonds for MEG.</summary>
    public void Sensors(Modality modality, IEnumerable<SKPoint> places, SKColor colour)
    {
        const float Ring = 3.2f, HalfDiagonal = 4.1f;
        using SKPaint edge = Stroke(colour, 1.1f);
        using SKPath diamonds = new();
        foreach (SKPoint place in places)
        {
            SKPoint p = new(MathF.Round(place.X, 1), MathF.Round(place.Y, 1));
            if (modality == Modality.Eeg)
            {
                _canvas.DrawCircle(p, Ring, edge);
            }
            else
            {
                diamonds.AddPoly([new(p.X, p.Y - HalfDiagonal), new(p.X + HalfDiagonal, p.Y), new(p.X, p.Y + HalfDiagonal), new(p.X - HalfDiagonal, p.Y)], close: true);
            }
        }

        if (!diamonds.IsEmpty)
        {
            _canvas.DrawPath(diamonds, edge);
        }
    }

    /// <summary>The spread over places: a solid bar with hard ends and gaps at the quartiles.</summary>
    public void PlaceBar(Modality modality, float low, float high, float y, float? lowerQuartile = null, float? upperQuartile = null)
    {
        float left = Math.Min(low, high), right = Math.Max(low, high);
        if (right - left < 3)
        {
            left = (left + right) / 2 - 1.5f;
            right = left + 3;
        }

        Rectangle(left, y - 2.5f, right, y + 2.5f, Palette.Of(modality));
        foreach (float? quartile in new[] { lowerQuartile, upperQuartile })
        {
            if (quartile is { } q && q - left > 4 && right - q > 4)
            {
                Rectangle(q - 0.75f, y - 2.5f, q + 0.75f, y + 2.5f, Palette.Ground);
            }
        }
    }

    /// <summary>The plumb line: the session's limit.</summary>
    public void PlumbLine(float x, float top, float bottom)
    {
        Line(x, top, x, bottom, Palette.Ink, 2);
        Area([new(x - 5, bottom), new(x + 5, bottom), new(x, bottom + 9)], Palette.Ink);
    }

    private void Shape(Modality modality, float x, float y, float scale, SKPaint paint)
    {
        switch (modality)
        {
            case Modality.Eeg:
                _canvas.DrawCircle(x, y, 7 * scale, paint);
                break;
            case Modality.Meg:
                float d = 9 * scale;
                using (SKPath path = Path([new(x, y - d), new(x + d, y), new(x, y + d), new(x - d, y)], close: true))
                {
                    _canvas.DrawPath(path, paint);
                }

                break;
            default:
                _canvas.DrawRect(SKRect.Create(x - 7 * scale, y - 7 * scale, 14 * scale, 14 * scale), paint);
                break;
        }
    }

    private static SKPath Path(IReadOnlyList<SKPoint> points, bool close)
    {
        SKPath path = new();
        path.AddPoly([.. points], close);
        return path;
    }

    // Dashes are cut here, by arc length: vector files then need no dash support, and every renderer draws the same.
    private static List<IReadOnlyList<SKPoint>> Dashes(IReadOnlyList<SKPoint> points, float[] pattern)
    {
        List<IReadOnlyList<SKPoint>> pieces = [];
        List<SKPoint> piece = [points[0]];
        int part = 0;
        float left = pattern[0];
        for (int k = 1; k < points.Count; k++)
        {
            SKPoint a = points[k - 1];
            float length = SKPoint.Distance(a, points[k]), done = 0;
            while (length - done > left)
            {
                done += left;
                float t = done / length;
                SKPoint cut = new(a.X + t * (points[k].X - a.X), a.Y + t * (points[k].Y - a.Y));
                if (part % 2 == 0)
                {
                    piece.Add(cut);
                    pieces.Add(piece);
                }

                piece = [cut];
                part = (part + 1) % pattern.Length;
                left = pattern[part];
            }

            left -= length - done;
            if (part % 2 == 0)
            {
                piece.Add(points[k]);
            }
        }

        if (part % 2 == 0 && piece.Count > 1)
        {
            pieces.Add(piece);
        }

        return pieces;
    }

    private static SKPaint Fill(SKColor colour) => new() { Color = colour, IsAntialias = true, Style = SKPaintStyle.Fill };

    private static SKPaint Stroke(SKColor colour, float width) => new() { Color = colour, IsAntialias = true, Style = SKPaintStyle.Stroke, StrokeWidth = width };
}
