using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Where regions, sensors and head lie: outlines of the head from the front, the side and above.</summary>
public static class GeometryFigure
{
    private const int MostLabels = 12;

    // Dots of a region beyond this many would only thicken the blot.
    private const int MostDots = 300;

    private static readonly View[] Views =
    [
        // Each as its viewer sees it; words at the left, right, upper and lower edge.
        new("from the front", 1, v => -v.X, v => v.Z, v => v.Y, "right", "left"),
        new("from the left", 0, v => -v.Y, v => v.Z, v => -v.X, "front", "back"),
        new("from above", 2, v => v.X, v => v.Y, v => v.Z, "left", "right"),
    ];

    /// <summary>The figure of the study's scene; null where nothing is placed.</summary>
    public static Figure? Make(Assessment assessment, string name)
    {
        Scene scene = assessment.Scene;
        if (scene.Regions.Count == 0 && scene.Electrodes.Count == 0 && scene.CoilSites.Count == 0)
        {
            return null;
        }

        Placed[] regions = [.. scene.Regions.Where(r => r.Points.Count > 0).Select(r => Place(r, scene))];
        string title = Title(regions);
        string sensors = string.Join(" and ", new[]
        {
            scene.Electrodes.Count > 0 ? Say.Plural(scene.Electrodes.Count, "electrode") + " (rings)" : "",
            scene.CoilSites.Count > 0 ? Say.Plural(scene.CoilSites.Count, "coil site") + " (diamonds)" : "",
        }.Where(s => s.Length > 0));
        return new Figure(
            name, title,
            "Place of regions, sensors and head, in mm",
            $"Projections on three planes, one scale; dots: the regions' dipoles{(sensors.Length > 0 ? $"; {sensors}" : "")}; sensors on the far half are paler. {Surfaces(scene)}",
            $"{title}. {string.Join(" ", regions.Take(3).Select(r => $"{r.Name}: {(r.Depth is { } d ? $"{Say.Two(Si.ToMm(d))} mm below the scalp" : "centre at " + Mm(r.Centroid))}."))}",
            Table(regions), FullWidth: true,
            width => Draw(width, scene, regions));
    }

    private static string Surfaces(Scene scene)
    {
        if (scene.Outlines.Count > 0)
        {
            string[] names = [.. scene.Outlines.Select(o => o.Surface).Distinct().Select(n => n == "bone" ? "bone (shaded)" : n)];
            return $"Outlines: {string.Join(", ", names)} where planes through {Mm(scene.Cut)} mm cut the label volume; the brain's is smoothed, its folds left out. Sensors and regions off the plane are seen through it.";
        }

        return scene.Layers.Count > 0
            ? $"Circles: {string.Join(", ", scene.Layers.Select(l => $"{l.Tissue} {Say.Stated(Math.Round(Si.ToMm(l.Radius), 1))} mm"))} (outer radii); a real head departs from them by the misfit stated under Limits."
            : "The head's surfaces are not known: its leadfields were imported.";
    }

    private static Placed Place(SceneRegion region, Scene scene)
    {
        (string name, IReadOnlyList<Vec3> points, double? depth) = region;
        Vec3 sum = points.Aggregate(Vec3.Zero, (a, b) => a + b);
        Vec3 centroid = sum / points.Count;
        int step = Math.Max(1, points.Count / MostDots);
        double[] coils = scene.CoilSites.Count == 0 ? [] : [.. points.Where((_, k) => k % step == 0).Select(p => scene.CoilSites.Min(s => (s - p).Norm)).Order()];
        double? coil = coils.Length > 0 ? coils[coils.Length / 2] : null;
        return new(name, points, centroid, depth, coil);
    }

    private static string Title(Placed[] regions)
    {
        if (regions.Length == 0)
        {
            return "Head and sensors";
        }

        double[] depths = [.. regions.Select(r => r.Depth).OfType<double>()];
        double[] coils = [.. regions.Select(r => r.Coil).OfType<double>()];
        string what = regions.Length == 1 ? regions[0].Name + " lies" : "The regions lie";
        string depth = depths.Length > 0 ? $" {Span(depths)} mm below the scalp" : "";
        string coil = coils.Length > 0 ? $"{(depth.Length > 0 ? " and" : "")} {Span(coils)} mm from the nearest coil" : "";
        return depth.Length + coil.Length > 0 ? what + depth + coil : "Where the regions lie";
    }

    private static string Span(double[] metres)
    {
        string low = Say.Stated(Math.Round(Si.ToMm(metres.Min()))), high = Say.Stated(Math.Round(Si.ToMm(metres.Max())));
        return low == high ? low : $"{low} to {high}";
    }

    private static string Mm(Vec3 v) => Say.Vector(Math.Round(Si.ToMm(v.X), 1), Math.Round(Si.ToMm(v.Y), 1), Math.Round(Si.ToMm(v.Z), 1));

    private static FigureTable Table(Placed[] regions) => new(
        ["region", "centre of its dipoles, mm", "below the scalp, mm (median)", "nearest coil, mm (median)"],
        [.. regions.Select(r => (IReadOnlyList<string>)
        [
            r.Name, Mm(r.Centroid), r.Depth is { } d ? Say.Stated(Math.Round(Si.ToMm(d), 1)) : "not known", r.Coil is { } c ? Say.Stated(Math.Round(Si.ToMm(c), 1)) : "",
        ])]);

    private static FigureSheet Draw(int width, Scene scene, Placed[] regions)
    {
        bool stacked = width < 800;
        Vec3 centre = scene.Centre ?? Middle(scene);
        double reach = Reach(scene, centre);
        float panel = stacked ? width : width / 3f;
        const float Margin = 26, Head = 26, Foot = 22;
        float half = (panel - 2 * Margin) / 2;
        double scale = half / reach;
        float panelHeight = Head + 2 * half + Foot;
        float labels = 0;
        if (regions.Length > 0)
        {
            labels = 24 + 18 * (float)Math.Ceiling(Math.Min(regions.Length, MostLabels + 1) / (double)KeyColumns(width));
        }

        int height = (int)((stacked ? Views.Length * (panelHeight + 8) : panelHeight) + labels + 30);
        FigureSheet sheet = new(width, height, 0, 0, 0, 0);
        sheet.Limits(0, width, 0, height);
        sheet.Over(pen =>
        {
            for (int k = 0; k < Views.Length; k++)
            {
                float left = stacked ? 0 : k * panel, top = stacked ? k * (panelHeight + 8) : 0;
                DrawView(pen, Views[k], scene, regions, centre, scale, left + panel / 2, top + Head + half, half, left + 8, top + 16);
            }

            float y = height - labels - 12;
            ScaleBar(pen, 16, y, scale);
            Key(pen, regions, width, y + 26);
        });
        return sheet;
    }

    private static void DrawView(
        FigurePen pen, View view, Scene scene, Placed[] regions, Vec3 centre, double scale, float cx, float cy, float half, float nameX, float nameY)
    {
        float X(Vec3 p) => cx + (float)(view.Right(p - centre) * scale);
        float Y(Vec3 p) => cy - (float)(view.Up(p - centre) * scale);
        pen.Text(view.Name, nameX, nameY, FigurePen.Label, semiBold: true);
        foreach (HeadOutline outline in scene.Outlines.Where(o => o.Axis == view.Axis))
        {
            bool scalp = outline.Surface == "scalp";
            pen.Outline(outline.Lines.Select(line => line.Select(p => new SKPoint(X(p), Y(p)))), outline.Surface == "bone" ? Palette.Beyond : null, scalp ? Palette.Ink2 : Palette.Edge, scalp ? 1.6f : 0.8f);
        }

        foreach ((string tissue, double radius) in scene.Layers)
        {
            pen.Ring(cx, cy, (float)(radius * scale), tissue == scene.Layers[^1].Tissue ? Palette.Ink2 : Palette.Edge, tissue == scene.Layers[^1].Tissue ? 1.6f : 0.8f);
        }

        Sensors(pen, scene, view, centre, X, Y);
        foreach (Placed region in regions)
        {
            int step = Math.Max(1, region.Points.Count / MostDots);
            pen.Dots(region.Points.Where((_, k) => k % step == 0).Select(p => new SKPoint(X(p), Y(p))), 1.1f, Palette.Ink);
        }

        Numbers(pen, [.. regions.Take(MostLabels)], X, Y, cx);
        float low = (float)(Lowest(scene, view, centre) * scale) + 18;
        pen.Text(view.LeftWord, cx - half, cy + low, FigurePen.Small, colour: Palette.Ink2);
        pen.Text(view.RightWord, cx + half, cy + low, FigurePen.Small, Anchor.End, colour: Palette.Ink2);
    }

    // The far half first; sensors in front of the regions step back, so that the regions can be read.
    private static void Sensors(FigurePen pen, Scene scene, View view, Vec3 centre, Func<Vec3, float> x, Func<Vec3, float> y)
    {
        const double RimShare = 0.8;
        byte Strength(Vec3 p)
        {
            Vec3 v = p - centre;
            double across = Math.Sqrt(view.Right(v) * view.Right(v) + view.Up(v) * view.Up(v));
            return (byte)(view.Toward(v) < 0 ? 80 : across < RimShare * v.Norm ? 140 : 255);
        }

        foreach (byte strength in new byte[] { 80, 140, 255 })
        {
            pen.Sensors(Modality.Meg, scene.CoilSites.Where(p => Strength(p) == strength).Select(p => new SKPoint(x(p), y(p))), Palette.Meg.WithAlpha(strength));
            pen.Sensors(Modality.Eeg, scene.Electrodes.Where(e => Strength(e.Position) == strength).Select(e => new SKPoint(x(e.Position), y(e.Position))), Palette.Eeg.WithAlpha(strength));
        }
    }

    // Numbers stand in a column at each side, joined to their region: deep regions lie too close together for labels at the place.
    private static void Numbers(FigurePen pen, Placed[] regions, Func<Vec3, float> x, Func<Vec3, float> y, float cx)
    {
        const float Step = 15, Offset = 62;
        var numbered = regions.Select((r, k) => (Number: k + 1, X: x(r.Centroid), Y: y(r.Centroid))).ToList();
        foreach (bool right in new[] { false, true })
        {
            var side = numbered.Where(n => n.X >= cx == right).OrderBy(n => n.Y).ToList();
            if (side.Count == 0)
            {
                continue;
            }

            float top = side.Average(n => n.Y) - Step * (side.Count - 1) / 2;
            float column = right ? Math.Max(cx + Offset, side.Max(n => n.X) + 22) : Math.Min(cx - Offset, side.Min(n => n.X) - 22);
            for (int k = 0; k < side.Count; k++)
            {
                float ty = top + k * Step;
                pen.Line(side[k].X, side[k].Y, column + (right ? -3 : 3), ty, Palette.Ink, 1);
                pen.Text(side[k].Number.ToString(System.Globalization.CultureInfo.InvariantCulture), column, ty + 4, FigurePen.Small, right ? Anchor.Start : Anchor.End, semiBold: true, halo: true);
            }
        }
    }

    private static double Lowest(Scene scene, View view, Vec3 centre) =>
        All(scene).Concat(Corners(scene)).Select(p => -view.Up(p - centre)).Concat(scene.Layers.Select(l => l.Radius)).Max();

    private static int KeyColumns(int width) => width < 800 ? 1 : 3;

    private static void Key(FigurePen pen, Placed[] regions, int width, float top)
    {
        int columns = KeyColumns(width);
        int shown = Math.Min(regions.Length, MostLabels);
        int perColumn = (int)Math.Ceiling((shown + (regions.Length > shown ? 1 : 0)) / (double)columns);
        float columnWidth = (width - 32f) / columns;
        for (int k = 0; k <= shown; k++)
        {
            float x = 16 + k / Math.Max(1, perColumn) * columnWidth, y = top + k % Math.Max(1, perColumn) * 18;
            if (k == shown)
            {
                if (regions.Length > shown)
                {
                    pen.Text($"and {regions.Length - shown} more, in the table", x, y, FigurePen.Label, colour: Palette.Ink2);
                }

                break;
            }

            string number = (k + 1).ToString(System.Globalization.CultureInfo.InvariantCulture);
            string depth = regions[k].Depth is { } d ? $", {Say.Stated(Math.Round(Si.ToMm(d)))} mm deep" : "";
            pen.Text(number, x + 16, y, FigurePen.Label, Anchor.End, semiBold: true);
            float room = columnWidth - 48 - FigurePen.Width(depth, FigurePen.Label);
            pen.Text(FigurePen.Fit(regions[k].Name, room, FigurePen.Label) + depth, x + 24, y);
        }
    }

    private static void ScaleBar(FigurePen pen, float x, float y, double scale)
    {
        float length = (float)(0.05 * scale);
        pen.Line(x, y - 4, x + length, y - 4, Palette.Ink, 2);
        pen.Text("50 mm", x + length + 8, y, FigurePen.Small);
    }

    private static Vec3 Middle(Scene scene)
    {
        Vec3[] all = [.. All(scene).Concat(Corners(scene))];
        return new(
            (all.Min(p => p.X) + all.Max(p => p.X)) / 2, (all.Min(p => p.Y) + all.Max(p => p.Y)) / 2, (all.Min(p => p.Z) + all.Max(p => p.Z)) / 2);
    }

    private static double Reach(Scene scene, Vec3 centre) => All(scene).Concat(Corners(scene)).Select(p => p - centre)
        .Select(p => Math.Max(Math.Max(Math.Abs(p.X), Math.Abs(p.Y)), Math.Abs(p.Z)))
        .Concat(scene.Layers.Select(l => l.Radius)).Append(0.03).Max() * 1.04;

    private static IEnumerable<Vec3> All(Scene scene) =>
        scene.Electrodes.Select(e => e.Position).Concat(scene.CoilSites).Concat(scene.Regions.SelectMany(r => r.Points));

    private static IEnumerable<Vec3> Corners(Scene scene) => scene.Outlines.SelectMany(o => o.Lines).SelectMany(line => line);

    private sealed record View(string Name, int Axis, Func<Vec3, double> Right, Func<Vec3, double> Up, Func<Vec3, double> Toward, string LeftWord, string RightWord);

    private sealed record Placed(string Name, IReadOnlyList<Vec3> Points, Vec3 Centroid, double? Depth, double? Coil);
}
