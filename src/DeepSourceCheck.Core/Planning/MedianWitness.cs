using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>The dipole and direction that stand at the median count: the one whose chain `why` prints.</summary>
/// <param name="Point">Name of the point.</param>
/// <param name="Position">Place [m].</param>
/// <param name="Direction">Unit vector; the zero vector where the measure has no single best direction.</param>
/// <param name="Power">Power SNR of one trial.</param>
/// <param name="Artefact">Artefact power over noise power of the convention.</param>
/// <param name="EegChannel">EEG channel that was read, counted among the used ones; -1 for none or a derivation.</param>
/// <param name="EegRow">Its leadfield over its noise [1/(A m)], one value an axis.</param>
/// <param name="MegChannel">MEG channel that was read; -1 for none.</param>
/// <param name="MegRow">Its leadfield over its noise [1/(A m)]; zero where the direction is silent.</param>
/// <param name="Read">The measure that was read: the verdict's, or the single reading that a pair falls back to where a locked artefact buries the other.</param>
internal sealed record MedianWitness(
    IMeasure Read, string Point, Vec3 Position, Vec3 Direction, double Power, double Artefact, int EegChannel, Vec3 EegRow, int MegChannel, Vec3 MegRow)
{
    /// <summary>Streams the region again until the median is met.</summary>
    /// <param name="plan">What was read.</param>
    /// <param name="head">Head.</param>
    /// <param name="source">Leadfields.</param>
    /// <param name="region">The region.</param>
    /// <param name="tally">What the run found.</param>
    /// <param name="measure">Measure of the verdict.</param>
    /// <param name="direction">Direction of the verdict.</param>
    /// <param name="rule">Index of the rule.</param>
    /// <param name="cancellation">Stops between blocks.</param>
    /// <returns>Null where the median is silent or undefined.</returns>
    public static MedianWitness? Find(
        EvaluationPlan plan, IHead head, ILeadfieldSource source, FilledRegion region, RegionTally tally, IMeasure measure, DirectionName direction, int rule,
        CancellationToken cancellation)
    {
        MeasureTally cell = tally.Cell(direction, measure);
        QuantileStore store = cell.Effective?[rule] ?? cell.Power;
        if (store.NearestRankFromTop(0.5) is not { } median || median <= 0)
        {
            return null;
        }

        var block = new LeadfieldBlock(source.EegRows, source.MegRows);
        var signals = new BlockSignals(plan.Space, head, plan.MegReported);
        var reader = new BlockReader(plan);
        for (int from = 0; from < region.Positions.Length; from += LeadfieldBlock.Lanes)
        {
            cancellation.ThrowIfCancellationRequested();
            int n = Math.Min(LeadfieldBlock.Lanes, region.Positions.Length - from);
            block.Load(region.Positions.AsSpan(from, n), region.SourceIndices.Length == 0 ? default : region.SourceIndices.AsSpan(from, n));
            source.Fill(block);
            signals.Load(block);
            (DirectionMode mode, LaneDirection[] directions) = reader.DirectionsOf(direction, signals);
            int stride = tally.Strides[plan.Directions.ToList().IndexOf(direction)];
            for (int k = DirectionSets.Start(from / LeadfieldBlock.Lanes, stride); k < directions.Length; k += stride)
            {
                LaneDirection u = directions[k];
                signals.Ask(mode, u);
                foreach (IMeasure read in cell.Effective is null ? [measure] : plan.Fallbacks(measure).Prepend(measure))
                {
                    Vector512<double> power = read.Power(signals) * Vector512.Create(plan.Gain);
                    Vector512<double> artefact = reader.ArtefactPower(read.InverseVariance(signals));
                    for (int lane = 0; lane < n; lane++)
                    {
                        double value = cell.Effective is null ? power[lane] : plan.Rules[rule].EffectivePower(power[lane], artefact[lane]);
                        if (store.Matches(median, value))
                        {
                            return Describe(plan, signals, read, mode, u, lane, RegionRun.PointName(region, from + lane), region.Positions[from + lane], power[lane], artefact[lane]);
                        }
                    }
                }
            }
        }

        return null;
    }

    private static MedianWitness Describe(
        EvaluationPlan plan, BlockSignals signals, IMeasure measure, DirectionMode mode, LaneDirection u, int lane, string point, Vec3 position, double power, double artefact)
    {
        int derivation = measure switch { DerivationMeasure d => d.Index, PairMeasure p => p.DerivationIndex, _ => -1 };
        bool readsEeg = measure.Modality != Modality.Meg && measure is DerivationMeasure or BestChannelMeasure or PairMeasure;
        bool readsMeg = measure.Modality != Modality.Eeg && measure is BestChannelMeasure or PairMeasure;
        int eeg = -1, meg = -1;
        Vec3 eegRow = default, megRow = default;
        if (readsEeg && measure.Modality != Modality.Meg)
        {
            if (derivation < 0)
            {
                signals.BestChannel(Modality.Eeg, out Vector512<double> index);
                eeg = (int)index[lane];
            }

            eegRow = signals.ReadingRow(Modality.Eeg, derivation, eeg, lane);
        }

        if (readsMeg)
        {
            Vector512<double> audible = signals.BestChannel(Modality.Meg, out Vector512<double> index);
            meg = (int)index[lane];
            megRow = audible[lane] > 0 ? signals.ReadingRow(Modality.Meg, -1, meg, lane) : default;     // silent: zero, not its rounding
        }

        Vec3 direction = mode != DirectionMode.Best ? new(u.X[lane], u.Y[lane], u.Z[lane])
            : measure is DerivationMeasure or BestChannelMeasure ? (measure.Modality == Modality.Eeg ? eegRow : megRow).Unit() : default;
        return new MedianWitness(measure, point, position, direction, power, artefact, eeg, eegRow, meg, megRow);
    }
}
