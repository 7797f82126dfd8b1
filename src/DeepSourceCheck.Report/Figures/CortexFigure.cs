using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>SNR of one trial over the cortex: against depth below the inner skull, and against the angle at which the cortex stands to it.</summary>
public static class CortexFigure
{
    /// <summary>What the figure draws: the mean over channels, for comparing modalities; the table holds the best channel too.</summary>
    public const string Measure = Names.ChannelMean;

    // A median of fewer points is no median of a population.
    private const int LeastPoints = 10;
    private const float Plot = 210, PanelGap = 34, Below = 64;

    /// <summary>The figure for the first region of a response that has a profile; null where none has one, or no bin has enough points.</summary>
    public static Figure? Make(ResponseResult response, string name)
    {
        if (response.Regions.FirstOrDefault(r => r.Profile is not null) is not { Profile: { } profile } region)
        {
            return null;
        }

        Panel depth = new("depth below the inner skull, mm", [.. profile.ByDepth.Where(b => b.Points >= LeastPoints)], Si.ToMm);
        Panel angle = new("angle of the source to the inner skull's normal, degrees", [.. profile.ByAngle.Where(b => b.Points >= LeastPoints)], Si.ToDegrees);
        if (depth.Bins.Count == 0 || angle.Bins.Count == 0)
        {
            return null;
        }

        string title = Title(profile, depth.Bins);
        int left = profile.ByDepth.Where(b => b.Points < LeastPoints).Sum(b => b.Points);
        return new Figure(
            name, title,
            "SNR of one trial (dB) against depth and source angle",
            $"{response.Response.Name}, {region.Region}; measure: {Measure}; {Say.Strength(response)} along the cortex's own normal at each point. Line: median over the points of a bin, mark at its middle; band: quartiles. "
            + $"0 degrees: the cortex lies flat under the skull (radial); 90: it stands upright (tangential). Shallow cortex is mostly flat, deep cortex upright: the depth panel shows both effects, the table depth on upright cortex (60 degrees and more) alone. {Say.Count(profile.ByDepth.Sum(b => (long)b.Points))} points"
            + $"{(profile.WithoutNormal > 0 ? $"; {Say.Plural(profile.WithoutNormal, "more point")} where the cortex has no clear normal are left out" : "")}"
            + $"{(left > 0 ? $"; bins of fewer than {LeastPoints} points stand in the table alone" : "")}.",
            $"{title}. {string.Join(" ", Modalities(depth.Bins).Select(m => $"{Names.Of(m)}: {Db(depth.Bins[0], m)} dB at {Edges(depth.Bins[0], depth.Unit)} mm, {Db(depth.Bins[^1], m)} dB at {Edges(depth.Bins[^1], depth.Unit)} mm."))}",
            Table(profile), FullWidth: false,
            width => Draw(width, [depth, angle]));
    }

    /// <summary>Which modality loses more from the first to the last bin of depth: on upright cortex, so that the angle plays no part, where there is enough of it.</summary>
    private static string Title(CorticalProfile profile, IReadOnlyList<ProfileBin> all)
    {
        ProfileBin[] upright = [.. profile.UprightByDepth.Where(b => b.Points >= LeastPoints)];
        IReadOnlyList<ProfileBin> bins = upright.Length > 1 ? upright : all;
        string where = upright.Length > 1 ? "On upright cortex " : "";
        (Modality Modality, double Fall)[] falls =
        [
            .. Modalities(bins).Select(m => (m, Fall: Of(bins[0], m)?.P50 - Of(bins[^1], m)?.P50)).Where(f => f.Fall is not null).Select(f => (f.m, f.Fall!.Value)),
        ];
        string span = $"from {Say.Stated(Math.Round(Si.ToMm((bins[0].From + bins[0].To) / 2), 1))} to {Say.Stated(Math.Round(Si.ToMm((bins[^1].From + bins[^1].To) / 2), 1))} mm of depth";
        return falls.Length switch
        {
            0 => "SNR over the cortex",
            1 => $"{where}{Names.Of(falls[0].Modality)} {Change(falls[0].Fall)} {span}",
            _ => $"{where}{Names.Of(falls[0].Modality)} {Change(falls[0].Fall)}, {Names.Of(falls[1].Modality)} {Change(falls[1].Fall)} {span}",
        };

        static string Change(double fall) => $"{(fall >= 0 ? "falls" : "rises")} by {Say.Two(Math.Abs(fall))} dB";
    }

    private static IEnumerable<Modality> Modalities(IReadOnlyList<ProfileBin> bins) => bins[0].Figures.Select(f => f.Modality).Distinct().Order();

    private static Percentiles? Of(ProfileBin bin, Modality modality) => bin.Figures.FirstOrDefault(f => f.Modality == modality && f.Measure == Measure)?.SnrDb;

    private static string Db(ProfileBin bin, Modality modality) => Of(bin, modality)?.P50 is { } db ? Say.Decibels(db) : "no";

    internal static string Edges(ProfileBin bin, Func<double, double> unit) => $"{Say.Stated(Math.Round(unit(bin.From), 3))} to {Say.Stated(Math.Round(unit(bin.To), 3))}";

    /// <summary>A row a bin, modality and measure.</summary>
    internal static FigureTable Table(CorticalProfile profile) => new(
        ["bin", "points", "modality", "measure", "SNR dB, 25 %", "median", "75 %"],
        [
            .. Rows(profile.ByDepth, b => $"{Edges(b, Si.ToMm)} mm"), .. Rows(profile.UprightByDepth, b => $"{Edges(b, Si.ToMm)} mm, upright"), .. Rows(profile.ByAngle, b => $"{Edges(b, Si.ToDegrees)} degrees"),
        ]);

    private static IEnumerable<IReadOnlyList<string>> Rows(IReadOnlyList<ProfileBin> bins, Func<ProfileBin, string> name) =>
        bins.SelectMany(b => b.Figures.Select(f => (IReadOnlyList<string>)[name(b), Say.Count(b.Points), Names.Of(f.Modality), f.Measure, Cell(f.SnrDb.P25), Cell(f.SnrDb.P50), Cell(f.SnrDb.P75)]));

    private static string Cell(double? db) => db is { } v ? Say.Decibels(v) : "";

    private static FigureSheet Draw(int width, Panel[] panels)
    {
        const float Left = 52, Right = 52, Top = 18;
        bool stacked = width < 480;
        Percentiles[] all = [.. panels.SelectMany(p => p.Bins).SelectMany(b => Modalities(panels[0].Bins).Select(m => Of(b, m))).OfType<Percentiles>()];
        (double low, double high, double step) = Range([.. all.SelectMany(p => new[] { p.P25, p.P50, p.P75 }).OfType<double>()]);
        float height = Top + (stacked ? 2 * (Plot + Below) : Plot + Below);
        FigureSheet sheet = new(width, (int)height, Left, Right, Top, Below);
        sheet.Limits(0, 1, 0, 1);
        float inner = width - Left - Right, each = stacked ? inner : (inner - PanelGap) / 2;
        sheet.Over(pen =>
        {
            for (int k = 0; k < panels.Length; k++)
            {
                float left = Left + (stacked ? 0 : k * (each + PanelGap)), top = Top + (stacked ? k * (Plot + Below) : 0);
                DrawPanel(pen, panels[k], new SKRect(left, top, left + each, top + Plot), low, high, step, ticks: stacked || k == 0, names: stacked || k == panels.Length - 1);
            }
        });
        return sheet;
    }

    private static void DrawPanel(FigurePen pen, Panel panel, SKRect area, double low, double high, double step, bool ticks, bool names)
    {
        double from = panel.Bins[0].From, to = panel.Bins[^1].To;
        float X(double value) => (float)(area.Left + (value - from) / (to - from) * area.Width);
        float Y(double db) => (float)(area.Bottom - (db - low) / (high - low) * area.Height);
        for (double db = Math.Ceiling(low / step) * step; db <= high + 1e-9; db += step)
        {
            pen.Line(area.Left, Y(db), area.Right, Y(db), Palette.Hair, 1);
            if (ticks)
            {
                pen.Text(Say.Stated(db), area.Left - 6, Y(db) + 4, FigurePen.Small, Anchor.End, colour: Palette.Ink2);
            }
        }

        if (ticks)
        {
            pen.Text("dB", area.Left - 6, area.Top - 5, FigurePen.Small, Anchor.End, colour: Palette.Ink2);
        }

        pen.Line(area.Left, area.Bottom, area.Right, area.Bottom, Palette.Edge, 1);
        int every = panel.Bins.Count > 8 ? 2 : 1;
        for (int k = 0; k <= panel.Bins.Count; k += every)
        {
            double edge = k < panel.Bins.Count ? panel.Bins[k].From : to;
            pen.Line(X(edge), area.Bottom, X(edge), area.Bottom + 4, Palette.Edge, 1);
            pen.Text(Say.Stated(Math.Round(panel.Unit(edge), 1)), X(edge), area.Bottom + 17, FigurePen.Small, Anchor.Middle, colour: Palette.Ink2);
        }

        string[] words = Broken(panel.Words, area.Width);
        for (int k = 0; k < words.Length; k++)
        {
            pen.Text(words[k], area.Left, area.Bottom + 36 + 16 * k, FigurePen.Small, colour: Palette.Ink2);
        }

        List<(Modality Modality, float Y)> ends = [];
        foreach (Modality modality in Modalities(panel.Bins))
        {
            (double At, Percentiles Snr)[] points = [.. panel.Bins.Select(b => ((b.From + b.To) / 2, Of(b, modality))).Where(p => p.Item2?.P50 is not null).Select(p => (p.Item1, p.Item2!))];
            if (points.Length == 0)
            {
                continue;
            }

            pen.Area(
                [.. points.Select(p => new SKPoint(X(p.At), Y(p.Snr.P75 ?? p.Snr.P50!.Value))), .. points.Reverse().Select(p => new SKPoint(X(p.At), Y(p.Snr.P25 ?? p.Snr.P50!.Value)))],
                Palette.Of(modality).WithAlpha(56));
            pen.Curve([.. points.Select(p => new SKPoint(X(p.At), Y(p.Snr.P50!.Value)))], modality);
            foreach ((double at, Percentiles snr) in points)
            {
                pen.Mark(modality, X(at), Y(snr.P50!.Value), scale: 0.6f);
            }

            ends.Add((modality, Y(points[^1].Snr.P50!.Value)));
        }

        // Names at the ends of the lines, a line of text apart at least.
        float last = float.NegativeInfinity;
        foreach ((Modality modality, float y) in ends.OrderBy(e => e.Y))
        {
            last = Math.Max(y + 4, last + 15);
            if (names)
            {
                pen.Text(Names.Of(modality), area.Right + 6, last, FigurePen.Label, semiBold: true, halo: true);
            }
        }
    }

    // In one line where it fits, else in two.
    private static string[] Broken(string words, float width)
    {
        if (FigurePen.Width(words, FigurePen.Small) <= width)
        {
            return [words];
        }

        int middle = Enumerable.Range(1, words.Length - 2).Where(k => words[k] == ' ').MinBy(k => Math.Abs(k - words.Length / 2));
        return [words[..middle], words[(middle + 1)..]];
    }

    private static (double Low, double High, double Step) Range(double[] values)
    {
        double low = values.DefaultIfEmpty(-20).Min() - 1, high = values.DefaultIfEmpty(0).Max() + 1;
        double step = new[] { 1.0, 2, 5, 10, 20, 50, 100 }.First(s => s >= 100 || (high - low) / s <= 5);
        return (low, high, step);
    }

    private sealed record Panel(string Words, IReadOnlyList<ProfileBin> Bins, Func<double, double> Unit);
}
