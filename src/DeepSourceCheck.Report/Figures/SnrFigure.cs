using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Figures;

/// <summary>SNR of one trial by region, direction and modality, with the trials that it needs beneath on the same axis.</summary>
public static class SnrFigure
{
    // Beyond this many regions only the directions that decide are drawn; the table keeps all.
    private const int RegionsInFull = 3;
    private const float SubRow = 24;
    private const float DirectionGap = 6;
    private const float Heading = 22;

    /// <summary>The figure for one response; null without single-modality verdicts.</summary>
    public static Figure? Make(Assessment assessment, ResponseResult response, string name)
    {
        RegionAnswer[] regions = [.. response.Regions.Select(r => new RegionAnswer(assessment, response.Response, r)).Where(a => a.Answers.Any(x => x.Modality != Modality.Both))];
        if (regions.Length == 0)
        {
            return null;
        }

        DirectionName[] drawn = Directions(response, regions.Length > RegionsInFull);
        Panel[] panels = [.. regions.Select(r => new Panel(r, Rows(r, drawn))).Where(p => p.Rows.Length > 0)];
        if (panels.Length == 0)
        {
            return null;
        }

        double? ratio = RatioOf(assessment, response);
        string title = Title(response, regions);
        string measures = string.Join(", ", regions[0].Answers.Where(a => a.Modality != Modality.Both).Select(a => $"{Names.Of(a.Modality)} {a.Verdict.Measure}"));
        string some = drawn.Length < 6 && regions.Length > RegionsInFull ? " Three directions are drawn; the table holds all." : "";
        string session = ratio is not null && assessment.SessionTrials is { } s ? $" Shaded: needs more than the session's {Say.Count(s)} trials." : "";
        string trials = ratio is { } rho ? $" Trials on the same axis: {Say.Stated(rho * rho)}/SNR." : "";
        return new Figure(
            name, title,
            "SNR of one trial (dB) against direction",
            $"{response.Response.Name}; measure: {measures}; {Say.Strength(response)}. Mark: median over the region's dipoles; solid bar: 5 to 95 % of places and directions, gaps at the quartiles. "
            + $"Open mark: silent in the model, drawn at the published leak of realistic heads.{trials}{session}{some}",
            $"{title}. {string.Join(" ", regions[0].Answers.Where(a => a.Row?.SnrDb.P50 is not null).Take(3).Select(a => $"{RegionAnswer.Words(a.Modality)}: median {Say.Decibels(a.Row!.SnrDb.P50!.Value)} dB."))}",
            Table(regions), FullWidth: false,
            width => Draw(width, assessment, panels, ratio));
    }

    private static DirectionName[] Directions(ResponseResult response, bool few)
    {
        DirectionName verdict = response.Response.Direction.Name;
        DirectionName[] order =
        [
            DirectionName.Given, DirectionName.Tangential, DirectionName.StrongestTangential, DirectionName.QuasiRadial, DirectionName.Isotropic, DirectionName.Best,
        ];
        return few ? [.. order.Where(d => d == verdict || d is DirectionName.QuasiRadial or DirectionName.Best)] : [.. order.OrderBy(d => d == verdict ? 0 : 1)];
    }

    private static Row[] Rows(RegionAnswer region, DirectionName[] directions) =>
    [
        .. directions.Select(d => new Row(d, [.. region.Answers.Where(a => a.Modality != Modality.Both)
            .Select(a => region.Region.Find(a.Modality, d, a.Verdict.Measure)).OfType<MeasureResult>()])).Where(r => r.Figures.Length > 0),
    ];

    // Trials stand on the axis only where they follow from the SNR alone.
    private static double? RatioOf(Assessment assessment, ResponseResult response) =>
        assessment.Study.Targets.Count > 0 && assessment.Study.Targets[0] is AmplitudeRatioChoice a
        && response.Response.LockedArtefactEeg == 0 && response.Response.LockedArtefactMeg == 0 ? a.Ratio : null;

    private static string Title(ResponseResult response, RegionAnswer[] regions)
    {
        string direction = Say.Direction(response.Response.Direction.Name);
        double? eeg = regions[0].Of(Modality.Eeg)?.Row?.SnrDb.P50, meg = regions[0].Of(Modality.Meg)?.Row?.SnrDb.P50;
        string where = regions.Length > 1 ? $" in {regions[0].Region.Region}" : "";
        return (eeg, meg) switch
        {
            ({ } e, { } m) => Math.Abs(e - m) < 1
                ? $"EEG and MEG stand within 1 dB of each other{where}"
                : $"{(e > m ? "EEG" : "MEG")} stands {Say.Two(Math.Abs(e - m))} dB above {(e > m ? "MEG" : "EEG")}{where}, {direction} direction",
            ({ } e, null) => regions[0].Of(Modality.Meg) is null ? $"One EEG trial reaches {Say.Decibels(e)} dB{where}, {direction} direction" : $"MEG is silent{where}, {direction} direction; EEG is not",
            (null, { } m) => regions[0].Of(Modality.Eeg) is null ? $"One MEG trial reaches {Say.Decibels(m)} dB{where}, {direction} direction" : $"EEG is silent{where}, {direction} direction; MEG is not",
            _ => $"No figure{where} in the {direction} direction",
        };
    }

    private static FigureTable Table(RegionAnswer[] regions) => new(
        ["region", "modality", "direction", "measure", "SNR dB, 5 %", "25 %", "median", "75 %", "95 %", "note"],
        [.. regions.SelectMany(r => r.Answers.SelectMany(a => r.Region.Results.Where(x => x.Modality == a.Modality && x.Measure == a.Verdict.Measure)).Select(x => (IReadOnlyList<string>)
        [
            r.Region.Region, Names.Of(x.Modality), Say.Direction(x.Direction), x.Measure,
            Db(x.SnrDb.P05), Db(x.SnrDb.P25), Db(x.SnrDb.P50), Db(x.SnrDb.P75), Db(x.SnrDb.P95),
            x.AtLeak is { } leak ? $"{x.Reason}; at leak {Say.Stated(leak.Leak)}: {Db(leak.SnrDb.P50)} dB" : x.Reason ?? "",
        ]))]);

    private static string Db(double? db) => db is { } v ? Say.Decibels(v) : "";

    private static FigureSheet Draw(int width, Assessment assessment, Panel[] panels, double? ratio)
    {
        bool narrow = width < 480;
        float left = narrow ? 16 : Gutter(panels), top = 30, bottom = ratio is null ? 42 : 60;
        const float Right = 24;
        double[] values = [.. panels.SelectMany(p => p.Rows).SelectMany(r => r.Figures).SelectMany(Ends)];
        double? need = ratio is { } rho && assessment.SessionTrials is { } s and > 0 ? 10 * Math.Log10(rho * rho / s) : null;
        (double low, double high, double step) = Range([.. values, .. need is { } n ? [n] : Array.Empty<double>()]);
        float rows = panels.Sum(p => Heading + p.Rows.Sum(r => Height(r, narrow))) + 10;
        FigureSheet sheet = new(width, (int)(top + rows + bottom), left, Right, top, bottom);
        sheet.Limits(low, high, 0, 1);
        List<(double, string)> ticks = [];
        for (double db = Math.Ceiling(low / step) * step; db <= high + 1e-9; db += step)
        {
            ticks.Add((db, Say.Stated(db)));
        }

        sheet.BottomAxis(ticks);
        sheet.Under(pen =>
        {
            if (need is { } x)
            {
                pen.Rectangle(pen.Left, pen.Top, pen.X(x), pen.Bottom, Palette.Beyond);
            }
        });
        sheet.Over(pen =>
        {
            if (need is { } x)
            {
                pen.PlumbLine(pen.X(x), pen.Top - 8, pen.Bottom + 2);
                bool leftwards = pen.X(x) > (pen.Left + pen.Right) / 2;
                pen.Text($"session: {Say.Count(assessment.SessionTrials!.Value)} trials", pen.X(x) + (leftwards ? -6 : 6), pen.Top - 12, FigurePen.Label, leftwards ? Anchor.End : Anchor.Start, true);
            }

            AxisWords(pen, ticks, ratio, narrow);
            float y = pen.Top + 4;
            foreach (Panel panel in panels)
            {
                pen.Text(FigurePen.Fit(panel.Region.Region.Region, narrow ? width - 32 : left - 24, FigurePen.Label, true), 16, y + 14, semiBold: true, halo: true);
                y += Heading;
                foreach (Row row in panel.Rows)
                {
                    bool verdict = row.Direction == panel.Region.Response.Direction.Name;
                    float inner = row.Figures.Length * SubRow;
                    if (narrow)
                    {
                        pen.Text(Words(row.Direction, panel), 16, y + 14, FigurePen.Small, semiBold: verdict, colour: verdict ? null : Palette.Ink2, halo: true);
                        y += 17;
                    }
                    else
                    {
                        pen.Text(Words(row.Direction, panel), 16, y + inner / 2 + 4, FigurePen.Label, semiBold: verdict, colour: verdict ? null : Palette.Ink2);
                    }

                    foreach (MeasureResult figure in row.Figures)
                    {
                        Draw(pen, figure, y + SubRow / 2 - 3);
                        y += SubRow;
                    }

                    y += DirectionGap;
                }
            }
        });
        return sheet;
    }

    private static void AxisWords(FigurePen pen, List<(double Position, string Label)> ticks, double? ratio, bool narrow)
    {
        if (narrow)
        {
            pen.Text(ratio is null ? "dB, SNR of one trial" : "dB, SNR of one trial; below: trials needed", pen.Left, pen.Bottom + (ratio is null ? 36 : 52), FigurePen.Small, colour: Palette.Ink2);
        }
        else
        {
            pen.Text("SNR of one trial, dB", 16, pen.Bottom + 17, FigurePen.Small, colour: Palette.Ink2);
        }

        if (ratio is not { } rho)
        {
            return;
        }

        if (!narrow)
        {
            pen.Text("trials needed", 16, pen.Bottom + 35, FigurePen.Small, colour: Palette.Ink2);
        }

        foreach ((double db, _) in ticks)
        {
            double trials = Math.Max(1, Math.Ceiling(rho * rho / Math.Pow(10, db / 10) * (1 - 1e-14)));
            pen.Text(Rounded(trials), pen.X(db), pen.Bottom + 35, FigurePen.Small, Anchor.Middle, colour: Palette.Ink2);
        }
    }

    private static string Rounded(double trials) => trials switch
    {
        < 1e6 => Say.Count((long)trials),
        < 1e9 => $"{Say.Stated(Math.Round(trials / 1e6, 1))} million",
        _ => $"{Say.Stated(Math.Round(trials / 1e9, 1))} billion",
    };

    private static void Draw(FigurePen pen, MeasureResult figure, float y)
    {
        if (figure.SnrDb.P50 is { } median)
        {
            float low = pen.X(figure.SnrDb.P05 ?? median), high = pen.X(figure.SnrDb.P95 ?? median);
            pen.PlaceBar(figure.Modality, low, high, y + 11, Pixel(figure.SnrDb.P25), Pixel(figure.SnrDb.P75));
            pen.Mark(figure.Modality, pen.X(median), y, scale: 0.75f);
            return;
        }

        string name = Names.Of(figure.Modality);
        if (figure.AtLeak is { SnrDb.P50: { } atLeak } leak)
        {
            float x = pen.X(atLeak);
            if (leak.SnrDb is { P05: { } a, P95: { } b })
            {
                pen.PlaceBar(figure.Modality, pen.X(a), pen.X(b), y + 11);
            }

            pen.Mark(figure.Modality, x, y, open: true, scale: 0.75f);
            string text = $"silent; at leak {Say.Stated(leak.Leak)}";
            bool after = x + 14 + FigurePen.Width(text, FigurePen.Small) < pen.Right;
            pen.Text(text, after ? x + 12 : x - 12, y + 4, FigurePen.Small, after ? Anchor.Start : Anchor.End, halo: true);
            return;
        }

        pen.Text($"{name}: {(figure.Reason is null ? "no figure" : "silent or not defined")}", pen.Left + 6, y + 4, FigurePen.Small, colour: Palette.Ink2, halo: true);

        float? Pixel(double? db) => db is { } v ? pen.X(v) : null;
    }

    private static float Gutter(Panel[] panels) =>
        Math.Clamp(panels.Max(p => FigurePen.Width(p.Region.Region.Region, FigurePen.Label, true)) + 30, 156, 216);

    private static string Words(DirectionName direction, Panel panel) =>
        direction == DirectionName.Given && panel.Region.Response.Direction.Vector is not null
            ? "given " + Say.Direction(panel.Region.Response.Direction)["along ".Length..] : Say.Direction(direction);

    private static float Height(Row row, bool narrow) => row.Figures.Length * SubRow + DirectionGap + (narrow ? 17 : 0);

    private static IEnumerable<double> Ends(MeasureResult row)
    {
        Percentiles p = row.SnrDb.P50 is null && row.AtLeak is { } leak ? leak.SnrDb : row.SnrDb;
        return new[] { p.P05, p.P50, p.P95 }.OfType<double>();
    }

    private static (double Low, double High, double Step) Range(double[] values)
    {
        double low = values.Length > 0 ? values.Min() : -40, high = values.Length > 0 ? values.Max() : 0;
        low -= 0.05 * (high - low) + 1;
        high += 0.05 * (high - low) + 1;
        double step = new[] { 1.0, 2, 5, 10, 20, 50, 100 }.First(s => s >= 100 || (high - low) / s <= 5);
        return (low, high, step);
    }

    private sealed record Row(DirectionName Direction, MeasureResult[] Figures);

    private sealed record Panel(RegionAnswer Region, Row[] Rows);
}
