using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Trials by every rule of the study, one row each, on one logarithmic axis: median and 5 to 95 % over dipoles.</summary>
public static class RuleFigure
{
    private const int MostRegions = 12;

    /// <summary>The figure for one response; null with a single rule or no count.</summary>
    public static Figure? Make(Assessment assessment, ResponseResult response, string name)
    {
        if (assessment.Study.Targets.Count < 2)
        {
            return null;
        }

        RegionRows[] regions =
        [
            .. response.Regions.Take(MostRegions).Select(r => new RegionRows(r.Region, RuleRow.Of(assessment, response.Response, r))).Where(r => r.Rows.Any(row => Singles(row).Any())),
        ];
        if (regions.Length == 0)
        {
            return null;
        }

        ModalityAnswer[] all = [.. regions.SelectMany(r => r.Rows).SelectMany(Singles)];
        LogAxis axis = new(all.SelectMany(a => new double?[] { a.Target!.Trials.P05, a.Trials, a.Target.Trials.P95 }).OfType<double>().Append(assessment.SessionTrials ?? double.NaN));
        string title = Title(regions);
        string left = response.Regions.Count > MostRegions ? $" The first {MostRegions} of {response.Regions.Count} regions." : "";
        return new Figure(
            name, title,
            "Accepted trials against rule",
            $"{response.Response.Name}; {Say.Direction(response.Response.Direction)}; {Say.Moment(response.Response.Moment)}{TrialsFigure.Protocol(assessment)}. "
            + $"Mark: median over the region's dipoles; line: 5 to 95 % of them. Readable, detected and quiet are different promises.{left}",
            $"{title}. {string.Join(" ", regions[0].Rows.Select(r => $"{r.Label}: {string.Join(", ", Singles(r).Select(a => $"{Names.Of(a.Modality)} {Say.Trials(a.Trials)}"))}."))}",
            Table(response, regions), FullWidth: false,
            width => Draw(width, assessment, regions, axis));
    }

    private static IEnumerable<ModalityAnswer> Singles(RuleRow row) => row.Answer.Answers.Where(a => a.Modality != Modality.Both && a is { HasCount: true, Trials: not null });

    private static string Title(RegionRows[] regions)
    {
        foreach (Modality modality in new[] { Modality.Eeg, Modality.Meg })
        {
            long[] counts = [.. regions[0].Rows.SelectMany(Singles).Where(a => a.Modality == modality).Select(a => a.Trials!.Value)];
            if (counts.Length > 1)
            {
                return $"By rule, {Names.Of(modality)} needs {Say.Trials(counts.Min())} to {Say.Trials(counts.Max())} trials";
            }
        }

        return "Only one rule gives a count";
    }

    private static FigureTable Table(ResponseResult response, RegionRows[] regions) => new(
        ["region", "rule", "promise", "modality", "trials, 5 %", "trials, median", "trials, 95 %", "presented", "minutes"],
        [.. from region in regions
            from row in region.Rows
            from a in row.Answer.Answers
            select (IReadOnlyList<string>)
            [
                region.Region, Say.Rule(row.Target, response.Response.Measured), row.Promise, Names.Of(a.Modality),
                a.HasCount ? Say.Trials(a.Target!.Trials.P05) : "", a.HasCount ? Say.Trials(a.Trials) : a.Line(), a.HasCount ? Say.Trials(a.Target!.Trials.P95) : "",
                a.HasCount && a.Target!.Presented?.P50 is { } presented ? Say.Trials(presented) : "", a.HasCount && a.Minutes is { } m ? Say.Minutes(m) : "",
            ]]);

    private static FigureSheet Draw(int width, Assessment assessment, RegionRows[] regions, LogAxis axis) => TrialRows.Draw(width, assessment, axis,
        [.. regions.Select(region => new TrialRows.Group(region.Region, [.. region.Rows.Select(row => new TrialRows.Entry(row.Label, (pen, y) => Marks(pen, axis, row, y)))]))], 0.4f);

    // EEG in the upper half of the row, MEG in the lower: their labels never meet.
    private static void Marks(FigurePen pen, LogAxis axis, RuleRow row, float top)
    {
        foreach (Modality modality in new[] { Modality.Eeg, Modality.Meg })
        {
            float y = top + (modality == Modality.Eeg ? 13 : 31);
            if (row.Answer.Of(modality) is not { } answer)
            {
                continue;
            }

            if (!answer.HasCount || answer.Trials is not { } trials)
            {
                string none = answer.NoCount;
                pen.Text($"{Names.Of(modality)} {none}", pen.Right - 4, y + 4, FigurePen.Small, Anchor.End, halo: true);
                continue;
            }

            float x = At(trials), low = At(answer.Target!.Trials.P05 ?? trials), high = answer.Target.Trials.P95 is { } most ? At(most) : pen.Right;
            pen.Line(low, y, high, y, Palette.Of(modality), 3);
            pen.Mark(modality, x, y, scale: 0.85f);
            string words = Say.Trials(trials);
            float left = Math.Min(low, x) - 9, right = Math.Max(high, x) + 9, room = FigurePen.Width(words, FigurePen.Small);
            bool after = right + room <= pen.Right + 26 || left - room < pen.Left;
            pen.Text(words, after ? right : left, y + 4, FigurePen.Small, after ? Anchor.Start : Anchor.End, halo: true);
        }

        float At(long count) => pen.X(Math.Clamp(Math.Log10(count), axis.Low, axis.High));
    }

    private sealed record RegionRows(string Region, IReadOnlyList<RuleRow> Rows);
}
