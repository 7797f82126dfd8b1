using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

using SkiaSharp;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Trials against the number of electrodes, as the greedy choice adds one after the other.</summary>
public static class ElectrodesFigure
{
    /// <summary>The figure for the first region whose electrodes were chosen; null where none was, or no set reaches the target.</summary>
    public static Figure? Make(Assessment assessment, ResponseResult response, string rule, string name)
    {
        if (response.Regions.FirstOrDefault(r => r.Electrodes is not null) is not { Electrodes: { } chosen } region || AttributionWords.Milestones(chosen, rule) is not [var least, ..] milestones)
        {
            return null;
        }

        (int Electrodes, long Trials)[] points = [.. chosen.Steps.Select((s, k) => (k + 1, AttributionWords.Trials(s.Trials, rule))).Where(p => p.Item2 is not null).Select(p => (p.Item1, p.Item2!.Value))];
        string title = milestones.Count == 1 ? $"{Say.Plural(least.Electrodes, "electrode")} need {Say.Plural(least.Trials, "trial")}"
            : $"Trials go from {Say.Count(least.Trials)} with {Say.Count(least.Electrodes)} electrodes to {Say.Count(milestones[^1].Trials)} with {Say.Count(milestones[^1].Electrodes)}";
        string best = chosen.Derivations.Count > 0 ? $" Best two: {chosen.Derivations[0].Name}." : "";
        return new Figure(
            name, title,
            "Trials (log) against number of electrodes",
            $"{response.Response.Name}, {region.Region}; {Say.RuleKey(rule)}; matched filter of the chosen electrodes, {Say.Direction(chosen.Direction)} direction; {Say.Strength(response)}{TrialsFigure.Protocol(assessment)}. "
            + $"Mark: median over {Say.Plural(chosen.Dipoles, "dipole")} and their directions. Each electrode is the one that adds most; whatever the reference, the choice is the same.{best}",
            $"{title}. {string.Join(" ", milestones.Take(4).Select(p => $"{Say.Plural(p.Electrodes, "electrode")}: {Say.Plural(p.Trials, "trial")}."))}",
            new FigureTable(["electrodes", "added", "trials, median"], [.. chosen.Steps.Select((s, k) => (IReadOnlyList<string>)[Say.Count(k + 1), s.Electrode, k == 0 ? "" : Say.Trials(AttributionWords.Trials(s.Trials, rule))])]),
            FullWidth: false,
            width => Draw(width, assessment, response.SessionTrials, points, milestones, chosen));
    }

    private static FigureSheet Draw(int width, Assessment assessment, long? sessionTrials, (int Electrodes, long Trials)[] points, IReadOnlyList<(int Electrodes, long Trials)> milestones, SensorChoiceResult chosen)
    {
        const float Left = 78, Right = 24, Top = 26, Bottom = 46, Height = 224;
        long? session = sessionTrials is > 0 and var s ? s : null;
        LogAxis axis = new([.. points.Select(p => (double)p.Trials), session ?? double.NaN]);
        int most = Math.Max(4, chosen.Steps.Count);
        FigureSheet sheet = new(width, (int)(Top + Height + Bottom), Left, Right, Top, Bottom);
        sheet.Limits(1, most + 0.5, axis.Low, axis.High);
        int step = most <= 10 ? 1 : most <= 20 ? 2 : most <= 40 ? 4 : 8;
        sheet.BottomAxis([.. Enumerable.Range(1, most).Where(k => k % step == 0).Select(k => ((double)k, Say.Count(k)))]);
        sheet.LeftAxis(axis.Ticks);
        sheet.Under(pen =>
        {
            if (session is { } n)
            {
                pen.Rectangle(pen.Left, pen.Top, pen.Right, pen.Y(Math.Log10(n)), Palette.Beyond);
            }
        });
        sheet.Over(pen =>
        {
            pen.Text("trials", pen.Left - 6, pen.Top - 8, FigurePen.Small, Anchor.End, colour: Palette.Ink2);
            pen.Text("electrodes", pen.Left, pen.Bottom + 36, FigurePen.Small, colour: Palette.Ink2);
            if (session is { } n)
            {
                float y = pen.Y(Math.Log10(n));
                pen.Line(pen.Left, y, pen.Right, y, Palette.Ink, 2);
                pen.Text(FigurePen.Fit(SessionLine.Label(assessment), pen.Right - pen.Left, FigurePen.Small), pen.Right, y - 5, FigurePen.Small, Anchor.End, halo: true);
            }

            SKPoint[] curve = [.. points.Select(p => new SKPoint(pen.X(p.Electrodes), pen.Y(Math.Log10(p.Trials))))];
            pen.Curve(curve, Modality.Eeg);
            foreach (SKPoint point in curve)
            {
                pen.Mark(Modality.Eeg, point.X, point.Y, scale: 0.5f);
            }

            // Counts at doubling numbers stand far enough apart at any width.
            for (int k = 0; k < milestones.Count; k++)
            {
                (float x, float y) = (pen.X(milestones[k].Electrodes), pen.Y(Math.Log10(milestones[k].Trials)) - 10);
                if (k > 0 && k + 1 < milestones.Count && milestones[k + 1].Electrodes < 1.5 * milestones[k].Electrodes)
                {
                    continue;
                }

                string words = k == 0 ? $"{Say.Count(milestones[k].Trials)}: {chosen.Steps[0].Electrode}, {chosen.Steps[1].Electrode}" : Say.Count(milestones[k].Trials);
                bool last = k > 0 && k + 1 == milestones.Count;
                pen.Text(words, k == 0 ? x - 4 : last ? pen.Right : x, k == 0 ? y - 8 : y, FigurePen.Small, k == 0 ? Anchor.Start : last ? Anchor.End : Anchor.Middle, halo: true);
            }
        });
        return sheet;
    }
}
