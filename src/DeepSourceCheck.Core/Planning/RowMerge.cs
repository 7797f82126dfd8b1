using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Planning;

/// <summary>One table from the rows of all plans of a response: every target from the plan on which it stands, everything else from the plan of the peak.</summary>
internal static class RowMerge
{
    /// <summary>Merges.</summary>
    /// <param name="read">Rows of each plan; plans on d^2 follow those of the peak with the same measures.</param>
    public static IReadOnlyList<MeasureResult> Of(IReadOnlyList<(EvaluationPlan Plan, IReadOnlyList<MeasureResult> Rows)> read)
    {
        var rows = new List<MeasureResult>(read[0].Rows);
        foreach ((EvaluationPlan plan, IReadOnlyList<MeasureResult> own) in read.Skip(1))
        {
            foreach (MeasureResult row in own)
            {
                int at = rows.FindIndex(r => r.Modality == row.Modality && r.Direction == row.Direction && r.Measure == row.Measure);
                if (at < 0)
                {
                    rows.Add(row);
                }
                else
                {
                    rows[at] = Taken(rows[at], row, plan);
                }
            }
        }

        // Stable: the order of measures within a modality and direction stays that in which they were added.
        return read.Count == 1 ? rows : [.. rows.OrderBy(r => r.Modality).ThenBy(r => read[0].Plan.Directions.ToList().IndexOf(r.Direction))];
    }

    private static MeasureResult Taken(MeasureResult row, MeasureResult other, EvaluationPlan plan)
    {
        double? perMoment = row.Peak?.Value / plan.Response.Moment;
        LeakResult? leak = row.AtLeak is { } own && other.AtLeak is { } seen ? own with { Targets = [.. own.Targets.Select((t, k) => plan.Counts(k) ? seen.Targets[k] : t)] } : row.AtLeak;
        return row with
        {
            Targets = [.. row.Targets.Select((t, k) => plan.Counts(k) ? other.Targets[k] with { SmallestAmplitude = other.Targets[k].SmallestMoment * perMoment } : t)],
            AtLeak = leak,
        };
    }
}
