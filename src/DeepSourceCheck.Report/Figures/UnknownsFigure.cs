using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Figures;

/// <summary>What each unknown does to the trials on its own, the one that moves them most first, under all of them together.</summary>
public static class UnknownsFigure
{
    private const int MostRegions = 2;
    private const float Heading = 26, Row = 30, Gap = 18;

    /// <summary>The figure for one response; null where the study states no unknowns or nothing is within reach.</summary>
    public static Figure? Make(Assessment assessment, ResponseResult response, string name)
    {
        Panel[] panels =
        [
            .. from region in response.Regions.Take(MostRegions)
               from spread in region.Unknowns?.Verdicts ?? []
               where spread.Modality != Modality.Both && spread.Rule == region.Verdicts[0].Rule && spread.Trials.P50 is not null and <= Say.MostTrials
               select new Panel(region.Region, spread),
        ];
        if (panels.Length == 0)
        {
            return null;
        }

        LogAxis axis = new(panels.SelectMany(p => p.Counts).Select(c => (double)c).Append(assessment.SessionTrials ?? double.NaN));
        Panel worst = panels.Where(p => p.Spread.Ranking.Count > 0).MaxBy(p => p.Spread.Ranking[0].LogVariance) ?? panels[0];
        string title = worst.Spread.Ranking is [var most, ..]
            ? $"{Names.Of(worst.Spread.Modality)}: {UnknownWords.Name(most.Unknown)} moves trials most, {UnknownWords.Trials(most.Fewest, most.Most)}"
            : "No unknown moves the trials";
        string left = response.Regions.Count > MostRegions ? $" The first {MostRegions} of {response.Regions.Count} regions." : "";
        return new Figure(
            name, title,
            "Accepted trials against unknown",
            $"{response.Response.Name}; rule: {TrialsFigure.RuleWords(assessment, response.Response, panels[0].Spread.Rule)}; {Say.Direction(response.Response.Direction)}; {Say.Strength(response)}{TrialsFigure.Protocol(assessment)}. "
            + $"Bar: 5 to 95 % of the trials as that unknown alone varies, the others at their typical values; all together: {Say.Count(response.Regions.First(r => r.Unknowns is not null).Unknowns!.Samples)} draws, mark at the median. "
            + $"Every count is the median over the region's places and directions.{left}",
            $"{title}. {string.Join(" ", panels.Take(2).Select(p => $"{p.Region}, {Names.Of(p.Spread.Modality)}, all together: {UnknownWords.Trials(p.Spread.Trials.P05, p.Spread.Trials.P95)} trials."))}",
            Table(assessment, response, panels), FullWidth: false,
            width => Draw(width, assessment, response, panels, axis));
    }

    private static FigureTable Table(Assessment assessment, ResponseResult response, Panel[] panels) => new(
        ["region", "modality", "unknown", "range", "trials, 5 to 95 %"],
        [.. panels.SelectMany(p => new[] { (IReadOnlyList<string>)[p.Region, Names.Of(p.Spread.Modality), "all together", "", UnknownWords.Trials(p.Spread.Trials.P05, p.Spread.Trials.P95)] }
            .Concat(p.Spread.Ranking.Select(e => (IReadOnlyList<string>)
                [p.Region, Names.Of(p.Spread.Modality), UnknownWords.Name(e.Unknown), UnknownWords.Range(e.Unknown, assessment.Study, response.Response), UnknownWords.Trials(e.Fewest, e.Most)])))]);

    private static FigureSheet Draw(int width, Assessment assessment, ResponseResult response, Panel[] panels, LogAxis axis)
    {
        const float Right = 40, Top = 40, Bottom = 46;
        bool narrow = width < 500;
        string Label(UnknownEffect e) => narrow ? UnknownWords.Name(e.Unknown) : $"{UnknownWords.Name(e.Unknown)}, {UnknownWords.Range(e.Unknown, assessment.Study, response.Response)}";
        float gutter = Math.Min(0.42f * width, 16 + panels.SelectMany(p => p.Spread.Ranking).Select(e => FigurePen.Width(Label(e), FigurePen.Small)).DefaultIfEmpty(80).Max() + 16);
        float rows = panels.Sum(p => Heading + (1 + p.Spread.Ranking.Count) * Row) + (panels.Length - 1) * Gap + 10;
        FigureSheet sheet = new(width, (int)(Top + rows + Bottom), gutter, Right, Top, Bottom);
        double? session = TrialsFigure.OnTrials(sheet, axis, assessment);
        sheet.Over(pen =>
        {
            pen.Text("accepted trials", 16, pen.Bottom + 36, FigurePen.Small, colour: Palette.Ink2);
            if (session is { } x)
            {
                SessionLine.Draw(pen, pen.X(x), 20, SessionLine.Label(assessment));
            }

            float y = pen.Top + 4;
            foreach (Panel panel in panels)
            {
                VerdictSpread spread = panel.Spread;
                pen.Text(FigurePen.Fit($"{Names.Of(spread.Modality)}, {panel.Region}", width - 32, FigurePen.Label, true), 16, y + 15, semiBold: true, halo: true);
                y += Heading;
                Bar(pen, axis, gutter, "all together", spread.Modality, spread.Trials.P05, spread.Trials.P95, spread.Trials.P50, y);
                y += Row;
                foreach (UnknownEffect effect in spread.Ranking)
                {
                    Bar(pen, axis, gutter, Label(effect), spread.Modality, effect.Fewest, effect.Most, null, y);
                    y += Row;
                }

                y += Gap;
            }
        });
        return sheet;
    }

    private static void Bar(FigurePen pen, LogAxis axis, float gutter, string label, Modality modality, long? fewest, long? most, long? median, float top)
    {
        float middle = top + Row / 2;
        pen.Text(FigurePen.Fit(label, gutter - 26, FigurePen.Small), 16, middle + 4, FigurePen.Small, colour: Palette.Ink2);
        if (fewest is not { } low)
        {
            pen.Text(Say.OutOfReach, pen.Right - 4, middle + 4, FigurePen.Small, Anchor.End, halo: true);
            return;
        }

        float X(double count) => pen.X(Math.Clamp(Math.Log10(count), axis.Low, axis.High));
        float from = X(low), to = most is { } high ? X(high) : pen.Right;
        pen.Line(from, middle, Math.Max(to, from + 2), middle, Palette.Of(modality), median is null ? 6 : 3);
        if (median is { } m)
        {
            pen.Mark(modality, X(m), middle, scale: 0.85f);
        }

        string words = UnknownWords.Trials(fewest, most);
        float room = FigurePen.Width(words, FigurePen.Small);
        bool after = to + 9 + room <= pen.Right + 36 || from - 9 - room < pen.Left;
        pen.Text(words, after ? to + 9 : from - 9, middle + 4, FigurePen.Small, after ? Anchor.Start : Anchor.End, halo: true);
    }

    private sealed record Panel(string Region, VerdictSpread Spread)
    {
        public IEnumerable<long> Counts => new[] { Spread.Trials.P05, Spread.Trials.P50, Spread.Trials.P95 }.Concat(Spread.Ranking.SelectMany(e => new[] { e.Fewest, e.Most }))
            .OfType<long>().Where(c => c <= Say.MostTrials);
    }
}
