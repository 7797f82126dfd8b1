using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Trials of the study and of its variants, one row each, as a bar from the study's count to the variant's.</summary>
public static class VariantFigure
{
    private const int MostRegions = 12;

    /// <summary>The figure for one response; null where there is no variant or no verdict.</summary>
    public static Figure? Make(Assessment assessment, ResponseResult response, string name)
    {
        if (assessment.Variants.Count == 0)
        {
            return null;
        }

        RegionRows[] regions =
        [
            .. response.Regions.Take(MostRegions).Select(r => new RegionRows(r.Region, VariantRow.Of(assessment, response, r))).Where(r => r.Rows.Any(Counted)),
        ];
        if (regions.Length == 0)
        {
            return null;
        }

        LogAxis axis = new(regions.SelectMany(r => r.Rows).SelectMany(Singles).Select(a => (double)a.Trials!.Value).Append(assessment.SessionTrials ?? double.NaN));
        string title = Title(regions);
        string left = response.Regions.Count > MostRegions ? $" The first {MostRegions} of {response.Regions.Count} regions." : "";
        return new Figure(
            name, title,
            "Accepted trials against variant",
            $"{response.Response.Name}; rule: {TrialsFigure.RuleWords(assessment, response.Response, regions[0].Rows[0].Answer!.Rule)}; {Say.Direction(response.Response.Direction)}; {Say.Strength(response)}"
            + $"{TrialsFigure.Protocol(assessment)}, where the variant does not say otherwise. Mark: median over the region's dipoles; line: from the study's count; number behind: change of the SNR in dB.{left}",
            $"{title}. {string.Join(" ", regions[0].Rows.Take(3).Select(r => $"{r.Name}: {string.Join(", ", Singles(r).Select(a => $"{Names.Of(a.Modality)} {Say.Trials(a.Trials)}"))}."))}",
            Table(regions), FullWidth: false,
            width => Draw(width, assessment, regions, axis));
    }

    private static bool Counted(VariantRow row) => Singles(row).Any();

    private static IEnumerable<ModalityAnswer> Singles(VariantRow row) =>
        row.Answer?.Answers.Where(a => a.Modality != Modality.Both && a is { HasCount: true, Trials: not null }) ?? [];

    private static string Title(RegionRows[] regions)
    {
        (string Name, Modality Modality, double Db)[] changes =
        [
            .. from region in regions
               from row in region.Rows
               from modality in new[] { Modality.Eeg, Modality.Meg }
               let db = row.Change(modality)
               where db is not null
               select (row.Name, modality, db.Value),
        ];
        if (changes.Length == 0)
        {
            return "The variants have no figure to compare";
        }

        (string variant, Modality by, double most) = changes.MaxBy(c => Math.Abs(c.Db));
        return Math.Abs(most) < 0.05 ? "The variants change nothing" : $"{Names.Of(by)} changes most in '{variant}': {Say.SignedDecibels(most)} dB";
    }

    private static FigureTable Table(RegionRows[] regions) => new(
        ["region", "variant", "modality", "trials, median", "change, dB"],
        [.. from region in regions
            from row in region.Rows
            from answer in row.Answer?.Answers ?? []
            select (IReadOnlyList<string>)
            [
                region.Region, row.Name, Names.Of(answer.Modality), answer.HasCount ? Say.Trials(answer.Trials) : answer.Line(), row.Change(answer.Modality) is { } db ? Say.SignedDecibels(db) : "",
            ]]);

    private static FigureSheet Draw(int width, Assessment assessment, RegionRows[] regions, LogAxis axis) => TrialRows.Draw(width, assessment, axis,
        [.. regions.Select(region => new TrialRows.Group(region.Region, [.. region.Rows.Select(row => new TrialRows.Entry(row.Name, (pen, y) => Marks(pen, axis, row, y)))]))], 0.34f);

    // EEG in the upper half of the row, MEG in the lower: their labels never meet.
    private static void Marks(FigurePen pen, LogAxis axis, VariantRow row, float top)
    {
        foreach (Modality modality in new[] { Modality.Eeg, Modality.Meg })
        {
            float y = top + (modality == Modality.Eeg ? 13 : 31);
            if (row.Answer is null || row.Answer.Of(modality) is not { } answer)
            {
                continue;
            }

            if (!answer.HasCount || answer.Trials is not { } trials)
            {
                pen.Text($"{Names.Of(modality)} {answer.NoCount}", pen.Right - 4, y + 4, FigurePen.Small, Anchor.End, halo: true);
                continue;
            }

            float x = pen.X(Math.Clamp(Math.Log10(trials), axis.Low, axis.High));
            float from = row.Study?.Of(modality) is { HasCount: true, Trials: { } n } ? pen.X(Math.Clamp(Math.Log10(n), axis.Low, axis.High)) : x;
            pen.Line(from, y, x, y, Palette.Of(modality), 3);
            pen.Mark(modality, x, y, scale: 0.85f);
            string words = row.Change(modality) is { } db ? $"{Say.Trials(trials)}  {Say.SignedDecibels(db)} dB" : Say.Trials(trials);
            float left = Math.Min(from, x) - 9, right = Math.Max(from, x) + 9, room = FigurePen.Width(words, FigurePen.Small);
            bool after = right + room <= pen.Right + 26 || left - room < pen.Left;
            pen.Text(words, after ? right : left, y + 4, FigurePen.Small, after ? Anchor.Start : Anchor.End, halo: true);
        }
    }

    private sealed record RegionRows(string Region, IReadOnlyList<VariantRow> Rows);
}
