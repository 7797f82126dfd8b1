using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Trials by region on a logarithmic axis, against the session.</summary>
public static class TrialsFigure
{
    // Up to so many regions the ends of each bar are labelled; beyond, they stand in the table.
    private const int RegionsWithEnds = 3;
    private const float RoomyRow = 54;
    private const float CompactRow = 32;
    private const float RegionGap = 14;
    private const float Heading = 22;

    /// <summary>The figure for one response and one rule; null where no region has a verdict by that rule.</summary>
    public static Figure? Make(Assessment assessment, ResponseResult response, string rule, string name)
    {
        RegionAnswer[] regions = [.. response.Regions.Select(r => new RegionAnswer(assessment, response.Response, r, rule)).Where(a => a.Answers.Count > 0)];
        if (regions.Length == 0)
        {
            return null;
        }

        ModalityAnswer[] all = [.. regions.SelectMany(r => r.Answers)];
        LogAxis axis = AxisOf(assessment, all);
        string title = Title(assessment, regions);
        string session = assessment.SessionTrials is { } s ? $" Shaded: more than the session's {Say.Plural(s, "trial")}{(Say.Averages(assessment.Study.Protocol) is { Length: > 0 } each ? $" for {each}" : "")}." : " The study states no session.";
        return new Figure(
            name, title,
            "Accepted trials against region",
            $"{response.Response.Name}; rule: {RuleWords(assessment, response.Response, rule)}; {Say.Direction(response.Response.Direction)}; {Say.Strength(response)} in each dipole in turn"
            + $"{Protocol(assessment)}. Mark: median over the region's dipoles; solid bar: 5 to 95 % of {Say.Spread(response.Response.Direction.Name)}, gaps at the quartiles.{session}",
            $"{title}. {string.Join(" ", all.Take(3).Select(a => $"{RegionAnswer.Words(a.Modality)}: {a.Line()}."))}",
            Table(regions), FullWidth: false,
            width => Draw(width, assessment, regions, axis));
    }

    /// <summary>The rule in words, with its numbers where it is a target of the study.</summary>
    internal static string RuleWords(Assessment assessment, Core.Studies.Response response, string rule) =>
        assessment.Study.Targets.FirstOrDefault(t => Names.Of(t) == rule) is { } target ? Say.Rule(target, response.Measured) : Say.RuleKey(rule);

    /// <summary>`; 11.1/s, 10 % rejected`, or empty.</summary>
    internal static string Protocol(Assessment assessment) => assessment.Study.Protocol is { } p
        ? $"; {Say.Stated(p.Rate)}/s{(p.RejectedFraction > 0 ? $", {Say.Percent(p.RejectedFraction)} rejected" : "")}"
        : "";

    /// <summary>Height of one verdict beside the strip [px].</summary>
    public const int StripRow = 84;

    /// <summary>The strip beside the verdicts of one region: one row a verdict, trials below, minutes above.</summary>
    /// <param name="assessment">The assessment.</param>
    /// <param name="region">The answer to draw.</param>
    /// <param name="width">Width [px].</param>
    /// <param name="named">True where the rows do not stand beside their verdicts and carry their names.</param>
    public static FigureSheet Strip(Assessment assessment, RegionAnswer region, int width, bool named)
    {
        LogAxis axis = AxisOf(assessment, region.Answers);
        const float Top = 44, Bottom = 40, Right = 34;
        int rowHeight = named ? 62 : StripRow;
        FigureSheet sheet = new(width, (int)(Top + Bottom) + rowHeight * region.Answers.Count, named ? 52 : 24, Right, Top, Bottom);
        double? session = OnTrials(sheet, axis, assessment);
        sheet.Under(pen =>
        {
            for (int k = 1; k < region.Answers.Count; k++)
            {
                pen.Line(pen.Left, pen.Top + k * rowHeight, pen.Right, pen.Top + k * rowHeight, Palette.Hair, 1);
            }
        });
        sheet.Over(pen =>
        {
            pen.Text("accepted trials", pen.Left, pen.Bottom + 34, FigurePen.Small, colour: Palette.Ink2);
            if (assessment.Study.Protocol is not null)
            {
                MinuteTicks(pen, assessment, axis, session is { } at ? pen.X(at) : float.NaN);
            }

            float plumb = float.NaN;
            if (session is { } x)
            {
                plumb = pen.X(x);
                string trials = named ? "" : $", {Say.Count(assessment.SessionTrials!.Value)} accepted trials{(SessionLine.IsShared(assessment) ? " each" : "")}";
                SessionLine.Draw(pen, plumb, 26, SessionLine.Label(assessment) + trials, halo: true);
            }

            for (int k = 0; k < region.Answers.Count; k++)
            {
                Row(pen, axis, region.Answers[k], roomy: true, pen.Top + k * rowHeight + (rowHeight - 48) / 2f, plumb, named);
            }
        });
        return sheet;
    }

    /// <summary>Gives a sheet its axis of accepted trials and shades what lies beyond the session.</summary>
    /// <returns>Place of the session on the axis, or null where the study states none.</returns>
    internal static double? OnTrials(FigureSheet sheet, LogAxis axis, Assessment assessment)
    {
        sheet.Limits(axis.Low, axis.High, 0, 1);
        sheet.BottomAxis(axis.Ticks);
        double? session = assessment.SessionTrials is { } s and > 0 ? Math.Log10(s) : null;
        if (session is { } x)
        {
            sheet.Under(pen => pen.Rectangle(pen.X(x), pen.Top, pen.Right, pen.Bottom, Palette.Beyond));
        }

        return session;
    }

    private static LogAxis AxisOf(Assessment assessment, IReadOnlyList<ModalityAnswer> answers)
    {
        IEnumerable<double> counts = answers.Where(a => a.HasCount).SelectMany(a => new double?[] { a.Target?.Trials.P05, a.Trials, a.Target?.Trials.P95 }).OfType<double>();
        return new(counts.Append(assessment.SessionTrials ?? double.NaN).Where(c => c <= Say.MostTrials * 10.0));
    }

    private static string Title(Assessment assessment, RegionAnswer[] regions)
    {
        Modality[] modalities = [.. regions.SelectMany(r => r.Answers).Select(a => a.Modality).Where(m => m != Modality.Both).Distinct().Order()];
        if (assessment.SessionTrials is null)
        {
            return regions.Length == 1
                ? string.Join(", ", regions[0].Answers.Where(a => a.Modality != Modality.Both).Select(a => $"{Names.Of(a.Modality)}: {(a.HasCount ? Say.Plural(a.Trials!.Value, "trial") : a.Line())}"))
                : "Trials differ by region and modality; no session is stated";
        }

        string Fit(Modality m)
        {
            if (regions.All(r => r.Of(m) is null or { Outcome: Outcome.DoesNotApply }))
            {
                return $"the rule does not apply to {Names.Of(m)}";
            }

            int n = regions.Count(r => r.Of(m)?.Outcome == Outcome.Fits);
            return regions.Length == 1 ? $"{Names.Of(m)} {(n == 1 ? "fits the session" : "does not fit")}"
                : n == regions.Length ? $"{Names.Of(m)} fits in {(n == 2 ? "both" : $"all {n}")} regions"
                : n == 0 ? $"{Names.Of(m)} fits in {(regions.Length == 2 ? "neither" : $"none of {regions.Length}")}"
                : $"{Names.Of(m)} fits in {n} of {regions.Length} regions";
        }

        return string.Join("; ", modalities.Select(Fit));
    }

    private static FigureTable Table(RegionAnswer[] regions) => new(
        ["region", "modality", "measure", "trials, 5 %", "median", "95 %", "minutes, median"],
        [.. regions.SelectMany(r => r.Answers.Select(a => (IReadOnlyList<string>)
        [
            r.Region.Region, Names.Of(a.Modality), a.Verdict.Measure,
            Cell(a, a.Target?.Trials.P05), a.HasCount ? Say.Trials(a.Trials) : a.Line(), Cell(a, a.Target?.Trials.P95),
            a.HasCount && a.Minutes is { } m ? Say.Minutes(m) : "",
        ]))]);

    private static string Cell(ModalityAnswer answer, long? count) => answer.Outcome is Outcome.Silent or Outcome.DoesNotApply ? "" : Say.Trials(count);

    private static FigureSheet Draw(int width, Assessment assessment, RegionAnswer[] regions, LogAxis axis)
    {
        const float Gutter = 52, Right = 30, Top = 44, Bottom = 46;
        bool roomy = regions.Length <= RegionsWithEnds;
        float subRow = roomy ? RoomyRow : CompactRow;
        float rows = regions.Sum(r => Heading + r.Answers.Count * subRow) + (regions.Length - 1) * RegionGap + 10;
        FigureSheet sheet = new(width, (int)(Top + rows + Bottom), Gutter, Right, Top, Bottom);
        double? session = OnTrials(sheet, axis, assessment);
        sheet.Over(pen =>
        {
            pen.Text("accepted trials", 16, pen.Bottom + 36, FigurePen.Small, colour: Palette.Ink2);
            if (assessment.Study.Protocol is not null)
            {
                MinuteTicks(pen, assessment, axis, session is { } at ? pen.X(at) : float.NaN);
            }

            float plumb = float.NaN;
            if (session is { } x)
            {
                plumb = pen.X(x);
                SessionLine.Draw(pen, plumb, 24, SessionLine.Label(assessment));
            }

            float y = pen.Top + 4;
            foreach (RegionAnswer region in regions)
            {
                pen.Text(FigurePen.Fit(region.Region.Region, width - 32, FigurePen.Label, true), 16, y + 13, semiBold: true, halo: true);
                y += Heading;
                foreach (ModalityAnswer answer in region.Answers)
                {
                    Row(pen, axis, answer, roomy, y, plumb);
                    y += subRow;
                }

                y += RegionGap;
            }
        });
        return sheet;
    }

    private static void Row(FigurePen pen, LogAxis axis, ModalityAnswer answer, bool roomy, float top, float plumb, bool named = true)
    {
        float y = top + (roomy ? 26 : 12);
        if (named)
        {
            pen.Text(answer.Modality == Modality.Both ? "both" : Names.Of(answer.Modality), 16, y + 4, FigurePen.Small, colour: Palette.Ink2);
        }

        if (!answer.HasCount || answer.Trials is not { } trials)
        {
            TargetResult? leak = answer.Row?.AtLeak?.Targets.FirstOrDefault(t => t.Rule == answer.Verdict.Rule);
            string words = answer.Outcome != Outcome.Silent ? answer.NoCount
                : leak is null ? "silent in this direction"
                : $"silent in this direction; at leak {Say.Stated(answer.Row!.AtLeak!.Leak)}: {Say.Trials(leak.Trials.P50)}";
            if (leak?.Trials.P50 is { } atLeak && Math.Log10(atLeak) <= axis.High && Math.Log10(atLeak) >= axis.Low)
            {
                float x = pen.X(Math.Log10(atLeak));
                pen.Mark(answer.Modality, x, y, open: true);
                Beside(pen, words, x - 10, x + 10, y, plumb);
            }
            else
            {
                float end = pen.Right - 4, room = FigurePen.Width(words, FigurePen.Small);
                bool crosses = plumb > end - room - 6 && plumb < end + 6;
                pen.Text(words, crosses && plumb - room - 10 > pen.Left ? plumb - 10 : end, y + 4, FigurePen.Small, Anchor.End, halo: true);
            }

            return;
        }

        CountPercentiles n = answer.Target!.Trials;
        float middle = pen.X(Math.Log10(trials));
        float low = n.P05 is { } a ? pen.X(Math.Log10(a)) : middle;
        float high = n.P95 is { } b ? Math.Min(pen.X(Math.Log10(b)), pen.Right) : pen.Right;
        pen.PlaceBar(answer.Modality, low, high, y + 14, Quartile(n.P25), Quartile(n.P75));
        pen.Mark(answer.Modality, middle, y, scale: roomy ? 1 : 0.9f);
        if (!roomy)
        {
            Beside(pen, Say.Trials(trials), Math.Min(low, middle - 9), Math.Max(high, middle + 9), y, plumb);
            return;
        }

        pen.Text(Say.Trials(trials), middle, y - 13, FigurePen.Label, Anchor.Middle, semiBold: true, halo: true);
        if (n.P05 is { } from && n.P95 is { } to && from < to)
        {
            Ends(pen, Say.Trials(from), Say.Trials(to), Math.Min(low, middle - 6) - 6, Math.Max(high, middle + 6) + 6, y + 18, plumb);
        }

        float? Quartile(long? count) => count is { } c ? pen.X(Math.Log10(c)) : null;
    }

    // Labels of a bar's ends beside it; where the sheet or the plumb line leaves no room there, both in one line below the bar.
    private static void Ends(FigurePen pen, string from, string to, float left, float right, float y, float plumb)
    {
        float before = FigurePen.Width(from, FigurePen.Small), after = FigurePen.Width(to, FigurePen.Small);
        bool room = right + after <= pen.Right + 28 && left - before >= pen.Left - 24;
        bool clear = !(plumb > left - before - 3 && plumb < left + 3) && !(plumb > right - 3 && plumb < right + after + 3);
        if (room && clear)
        {
            pen.Text(from, left, y, FigurePen.Small, Anchor.End, colour: Palette.Ink2, halo: true);
            pen.Text(to, right, y, FigurePen.Small, colour: Palette.Ink2, halo: true);
            return;
        }

        string both = $"{from} to {to}";
        float half = FigurePen.Width(both, FigurePen.Small) / 2;
        float x = Math.Clamp((left + right) / 2, pen.Left - 20 + half, pen.Right + 26 - half);
        float beyond = plumb + half + 6;
        if (plumb > x - half - 4 && plumb < x + half + 4 && beyond + half <= pen.Right + 26)
        {
            x = beyond;
        }

        pen.Text(both, x, y + 13, FigurePen.Small, Anchor.Middle, colour: Palette.Ink2, halo: true);
    }

    // On the side that keeps clear of the edge and, if it can, of the plumb line.
    private static void Beside(FigurePen pen, string text, float from, float to, float y, float plumb)
    {
        float room = FigurePen.Width(text, FigurePen.Small) + 8;
        bool fitsAfter = to + room + 8 <= pen.Right, fitsBefore = from - room - 8 >= pen.Left;
        bool crossesAfter = plumb > to && plumb < to + room, crossesBefore = plumb < from && plumb > from - room;
        bool after = fitsAfter && (!crossesAfter || !fitsBefore || crossesBefore) || !fitsBefore;
        pen.Text(text, after ? to + 8 : from - 8, y + 4, FigurePen.Small, after ? Anchor.Start : Anchor.End, halo: true);
    }

    private static void MinuteTicks(FigurePen pen, Assessment assessment, LogAxis axis, float plumb)
    {
        Core.Studies.Protocol p = assessment.Study.Protocol!;
        double perMinute = Math.Log10(60 * p.Rate * (1 - p.RejectedFraction));
        pen.Line(pen.Left, pen.Top, pen.Right, pen.Top, Palette.Edge, 1);
        float last = float.NegativeInfinity;
        for (int e = (int)Math.Ceiling(axis.Low - perMinute); e <= axis.High - perMinute; e++)
        {
            float x = pen.X(e + perMinute);
            string text = float.IsNegativeInfinity(last) ? $"{LogAxis.Label(e)} min" : LogAxis.Label(e);
            float half = FigurePen.Width(text, FigurePen.Small) / 2;
            if (x - half < last + 12 || x + half > pen.Right + 12 || x - half < 0)
            {
                continue;
            }

            pen.Line(x, pen.Top, x, pen.Top - 4, Palette.Edge, 1);
            // The plumb line would run through the number: the tick stands alone.
            if (plumb > x - half - 3 && plumb < x + half + 3)
            {
                continue;
            }

            pen.Text(text, x, pen.Top - 8, FigurePen.Small, Anchor.Middle, colour: Palette.Ink2, halo: true);
            last = x + half;
        }
    }
}
