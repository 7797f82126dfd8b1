using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report.Answers;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>How detection grows with trials: the power of the very test that the verdicts stand on, never of an amplitude ratio, which has none.</summary>
public static class PowerFigure
{
    // Two short lines of text beside the last mark [px].
    private const float LabelRoom = 112;

    // Trials at which a test has its false-alarm rate for a power: next to none.
    private const double Nothing = 1e-9;

    // A joint curve this close to the best single one would only hide it.
    private const double JointGainDrawn = 0.9;

    /// <summary>The figure for the first region of a response; null where no modality has an SNR.</summary>
    public static Figure? Make(Assessment assessment, ResponseResult response, string name)
    {
        (RegionResult Region, VerdictResult[] Drawn) found = response.Regions.Select(r => (r, r.Verdicts.Where(v => v.Power is not null).OrderBy(v => v.Modality).ToArray())).FirstOrDefault(r => r.Item2.Length > 0);
        if (found.Drawn is null)
        {
            return null;
        }

        Line[] all = [.. found.Drawn.Select(v => new Line(v, v.Power!, DetectionCurve.Trials(v.Power!.Median, v.Power.Asked)))];
        DetectionCurve any = all[0].Curve;
        double power = any.Asked;
        double best = all.Where(l => l.Modality != Modality.Both).Select(l => l.Target).DefaultIfEmpty(double.PositiveInfinity).Min();
        Line[] lines = [.. all.Where(l => l.Modality != Modality.Both || l.Target < JointGainDrawn * best)];
        if (lines.Length == 0)
        {
            return null;
        }

        double? perMinute = assessment.Study.Protocol is { } p ? 60 * p.Rate * (1 - p.RejectedFraction) : null;
        string title = Title(assessment, lines, power, perMinute);
        string joint = all.Length > lines.Length ? " Both together stay within 10 % of the better one and are not drawn." : "";
        string from = any.Stated ? "the study's detection target" : "the study states no detection target: a false-alarm rate of 0.01 and the mark at 90 % are common practice";
        string fixedBefore = assessment.Study.Targets.OfType<DetectionChoice>().FirstOrDefault() is { Looks: > 1 } ? "" : ", channel, latency and polarity fixed beforehand";
        string tests = lines.Select(l => l.Curve.Test).Distinct().Count() == 1 ? any.Test : string.Join("; ", lines.Select(l => $"{RegionAnswer.Words(l.Modality)}: {l.Curve.Test}"));
        return new Figure(
            name, title,
            $"Power of detection (%) against {(perMinute is null ? "accepted trials" : "minutes of recording")}",
            $"{response.Response.Name}, {found.Region.Region}; test: {tests}{fixedBefore} ({from}); "
            + $"read: {string.Join(", ", lines.Select(l => $"{RegionAnswer.Words(l.Modality)} {l.Verdict.Measure}"))}; "
            + $"{Say.Direction(response.Response.Direction)}; {Say.Strength(response)}{TrialsFigure.Protocol(assessment)}. Line: median dipole; band: 5 to 95 % of {Say.Spread(response.Response.Direction.Name)}.{joint} "
            + "An amplitude ratio has no power: its counts stand in the figure of trials.",
            $"{title}. {string.Join(" ", lines.Take(3).Select(l => $"{RegionAnswer.Words(l.Modality)}: {Say.Percent(power)} after {Span(l.Target, perMinute)}."))}",
            Table(lines, perMinute), FullWidth: false,
            width => Draw(width, assessment, lines, power, perMinute));
    }

    // A crossing that was found by halving may lie a rounding above a whole count.
    private static long Whole(double trials) => (long)Math.Max(1, Math.Ceiling(trials * (1 - 1e-12)));

    private static string Span(double trials, double? perMinute) => trials > Say.MostTrials ? $"more than {Say.Count(Say.MostTrials)} trials"
        : perMinute is { } r ? $"{Say.Minutes(Whole(trials) / r)} min" : Say.Plural(Whole(trials), "trial");

    private static string Title(Assessment assessment, Line[] lines, double power, double? perMinute)
    {
        if (assessment.SessionTrials is { } session)
        {
            return $"At the session's end the power is {string.Join(", ", lines.Select(l => $"{Share(l.Curve.Median(session))} for {Name(l.Modality)}"))}";
        }

        return string.Join("; ", lines.Select(l => $"{Name(l.Modality)}: {Say.Percent(power)} after {Span(l.Target, perMinute)}"));
    }

    private static string Share(double power) => power >= 0.995 ? "over 99 %" : power < 0.005 ? "under 1 %" : Say.Percent(Math.Round(power, 2));

    private static string Name(Modality m) => m == Modality.Both ? "both" : Names.Of(m);

    private static FigureTable Table(Line[] lines, double? perMinute)
    {
        double[] powers = [0.5, 0.8, 0.9, 0.95, 0.99];
        return new(
            ["modality", "power", "trials, median dipole", "minutes"],
            [.. lines.SelectMany(l => powers.Select(p =>
            {
                double trials = DetectionCurve.Trials(l.Curve.Median, p);
                return (IReadOnlyList<string>)[Names.Of(l.Modality), Say.Percent(p), Count(trials), perMinute is { } r && trials <= Say.MostTrials ? Say.Minutes(Whole(trials) / r) : ""];
            }))]);
    }

    private static string Count(double trials) => trials > Say.MostTrials ? Say.OutOfReach : Say.Count(Whole(trials));

    private static FigureSheet Draw(int width, Assessment assessment, Line[] lines, double power, double? perMinute)
    {
        double unit = perMinute ?? 1;
        double first = lines.Min(l => Math.Max(0.5, DetectionCurve.Trials(l.Curve.Strong ?? l.Curve.Median, Math.Max(0.1, 2 * l.Curve.Median(Nothing)))));
        double last = lines.Max(l => Math.Min(Say.MostTrials, DetectionCurve.Trials(l.Curve.Median, 0.98)));
        LogAxis axis = new([first / unit, last / unit, (assessment.SessionTrials ?? double.NaN) / unit]);
        // Where the marks stand too close for words beside them, the words go above the plot.
        double[] shownAt = [.. lines.Where(l => l.Target <= Say.MostTrials).Select(l => Math.Log10(l.Target / unit)).Order()];
        bool narrow = width < 480 || shownAt.Zip(shownAt.Skip(1)).Any(p => (p.Second - p.First) * (width - 76) / (axis.High - axis.Low) < LabelRoom);
        int keyRows = narrow ? lines.Length : lines.Count(l => l.Target > Say.MostTrials);
        const float Left = 52, Right = 24, Bottom = 46;
        float top = 30 + (keyRows > 0 ? 10 : 0) + 20 * keyRows;
        if (!narrow)
        {
            double furthest = lines.Where(l => l.Target <= Say.MostTrials).Select(l => Math.Log10(l.Target / unit)).DefaultIfEmpty(axis.Low).Max();
            axis.MakeRoom(furthest, LabelRoom / (width - Left - Right));
        }

        FigureSheet sheet = new(width, (int)(top + 224 + Bottom), Left, Right, top, Bottom);
        sheet.Limits(axis.Low, axis.High, 0, 1.04);
        sheet.BottomAxis(axis.Ticks);
        sheet.LeftAxis([(0, "0"), (0.5, "50"), (1, "100 %")]);
        double? session = assessment.SessionTrials is { } s and > 0 ? Math.Log10(s / unit) : null;
        sheet.Under(pen =>
        {
            if (session is { } x)
            {
                pen.Rectangle(pen.X(x), pen.Top, pen.Right, pen.Bottom, Palette.Beyond);
            }
        });
        sheet.Over(pen =>
        {
            pen.Text(perMinute is null ? "accepted trials" : "minutes of recording", pen.Left, pen.Bottom + 36, FigurePen.Small, colour: Palette.Ink2);
            foreach (Line line in lines)
            {
                if (line.Curve is { Weak: { } low, Strong: { } high })
                {
                    pen.Area([.. Points(pen, axis, high, unit), .. Points(pen, axis, low, unit).Reverse()], Palette.Of(line.Modality).WithAlpha(56));
                }
            }

            foreach (Line line in lines)
            {
                pen.Curve([.. Points(pen, axis, line.Curve.Median, unit)], line.Modality);
            }

            if (session is { } x)
            {
                SessionLine.Draw(pen, pen.X(x), 8, SessionLine.Label(assessment));
            }

            int row = 0;
            foreach (Line line in lines.OrderBy(l => l.Target))
            {
                double at = Math.Log10(line.Target / unit);
                bool shown = at <= axis.High && line.Target <= Say.MostTrials;
                if (shown)
                {
                    pen.Mark(line.Modality, pen.X(at), pen.Y(power));
                }

                string name = $"{Name(line.Modality)}: {Say.Percent(power)}", after = $"after {Span(line.Target, perMinute)}";
                if (narrow || !shown)
                {
                    // Above the plot, the mark before the words.
                    float y = pen.Top - 40 - 20 * (keyRows - 1 - row++);
                    pen.Mark(line.Modality, 24, y - 4, scale: 0.75f);
                    pen.Text(line.Target > Say.MostTrials ? $"{name} is {Say.OutOfReach}" : $"{name} {after}", 40, y, FigurePen.Label);
                }
                else
                {
                    pen.Text(name, pen.X(at) + 14, pen.Y(power) + 24, FigurePen.Label, halo: true);
                    pen.Text(after, pen.X(at) + 14, pen.Y(power) + 41, FigurePen.Label, halo: true);
                }
            }
        });
        return sheet;
    }

    private static IEnumerable<SKPoint> Points(FigurePen pen, LogAxis axis, Func<double, double> curve, double unit)
    {
        const int Steps = 160;
        return Enumerable.Range(0, Steps + 1).Select(k =>
        {
            double x = axis.Low + (axis.High - axis.Low) * k / Steps;
            return new SKPoint(pen.X(x), pen.Y(curve(Math.Pow(10, x) * unit)));
        });
    }

    private sealed record Line(VerdictResult Verdict, DetectionCurve Curve, double Target)
    {
        public Modality Modality => Verdict.Modality;
    }
}
