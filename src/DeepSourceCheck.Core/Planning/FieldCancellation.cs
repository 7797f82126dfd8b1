using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Planning;

// FieldCancellation.cs - what is lost because regions that act together oppose each other.
//   P: power of the summed field in the verdict's measure and direction (mean over its set); P_i: the same for region i alone with the whole moment; w_i: its share.
//   loss = 10 log10( P / (sum |w_i| sqrt(P_i))^2 ) dB. Every measure is the square of a norm of the field, so by the triangle inequality the loss is at most 0;
//   0 where all fields are alike and in step.

/// <summary>Cancellation between regions that act together.</summary>
internal static class FieldCancellation
{
    /// <summary>One figure a modality, EEG first; empty for a single region.</summary>
    /// <param name="plan">What is read.</param>
    /// <param name="setup">The study.</param>
    /// <param name="summed">The regions together.</param>
    /// <param name="parts">The regions.</param>
    /// <param name="cancellation">Stops between blocks.</param>
    public static IReadOnlyList<CancellationResult> Of(
        EvaluationPlan plan, StudySetup setup, SummedSource summed, IReadOnlyList<FilledRegion> parts, CancellationToken cancellation)
    {
        if (parts.Count < 2)
        {
            return [];
        }

        IHead head = new SummedHead(setup.Head);
        var reader = new BlockReader(plan);
        BlockSignals whole = Load(plan, head, summed);
        (DirectionMode mode, LaneDirection[] set) = reader.DirectionsOf(plan.VerdictDirection, whole);
        LaneDirection[] directions = [.. set];
        double[] shares = Activation.Shares(plan.Response);
        BlockSignals[] alone = [.. parts.Select(p => Load(plan, head, new SummedSource(setup.Source, [p], [1.0], cancellation)))];
        var results = new List<CancellationResult>();
        foreach ((Modality modality, string? name) in new[] { (Modality.Eeg, plan.EegMeasure), (Modality.Meg, plan.MegMeasure) })
        {
            if (name is null)
            {
                continue;
            }

            IMeasure measure = plan.Measures.First(m => m.Modality == modality && m.Name == name);
            double together = Mean(measure, whole, mode, directions);
            double apart = alone.Select((a, k) => Math.Abs(shares[k]) * Math.Sqrt(Mean(measure, a, mode, directions))).Sum();
            results.Add(new CancellationResult(modality, name, Math.Min(0, 10 * Math.Log10(together / (apart * apart)))));
        }

        return results;
    }

    private static BlockSignals Load(EvaluationPlan plan, IHead head, SummedSource source)
    {
        var block = new LeadfieldBlock(source.EegRows, source.MegRows);
        var signals = new BlockSignals(plan.Space, head, plan.MegReported);
        block.Load(source.Region.Positions.AsSpan(0, 1), default);
        source.Fill(block);
        signals.Load(block);
        return signals;
    }

    private static double Mean(IMeasure measure, BlockSignals signals, DirectionMode mode, LaneDirection[] directions)
    {
        double sum = 0;
        foreach (LaneDirection u in directions)
        {
            signals.Ask(mode, u);
            sum += measure.Power(signals)[0];
        }

        return sum / directions.Length;
    }
}
