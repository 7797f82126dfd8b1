using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

// MedianSearch.cs - the dipoles and directions that stand at the medians of the verdicts.
//   The run keeps counts, no dipoles. So the region is streamed again, from its start, until every median has met a value of its class: soon, since many do.
//   All verdicts share one pass; threads take chunk after chunk. A verdict's witness is its first match in the order of dipoles, directions and fallbacks, whichever
//   thread finds it: a chunk is left out only where a match in an earlier one is known.

/// <summary>Streams a region again until the medians of its verdicts are met.</summary>
/// <param name="plan">What was read.</param>
/// <param name="head">Head.</param>
/// <param name="source">Leadfields.</param>
/// <param name="region">The region.</param>
/// <param name="tally">What the run found.</param>
/// <param name="direction">Direction of the verdicts.</param>
internal sealed class MedianSearch(
    EvaluationPlan plan, IHead head, ILeadfieldSource source, FilledRegion region, RegionTally tally, DirectionName direction)
{
    private readonly Lock _gate = new();
    private int _claimed;

    /// <summary>What a verdict stands on.</summary>
    /// <param name="Measure">Measure.</param>
    /// <param name="Rule">Index of the rule.</param>
    internal readonly record struct Question(IMeasure Measure, int Rule);

    /// <summary>Searches.</summary>
    /// <param name="questions">One a verdict.</param>
    /// <param name="cancellation">Stops between chunks.</param>
    /// <returns>One witness a question; null where the median is silent or undefined.</returns>
    public MedianWitness?[] Find(IReadOnlyList<Question> questions, CancellationToken cancellation)
    {
        Hunt[] hunts = [.. questions.Select(q => new Hunt(plan, tally.Cell(direction, q.Measure), q))];
        int once = (region.Positions.Length + RegionRun.ChunkSize - 1) / RegionRun.ChunkSize, chunks = once * plan.Passes;
        int threads = RegionRun.Threads(chunks);
        Parallel.For(0, threads, new ParallelOptions { MaxDegreeOfParallelism = threads, CancellationToken = cancellation }, _ => Search(hunts, once, chunks, cancellation));
        return [.. hunts.Select(h => h.Found)];
    }

    private void Search(Hunt[] hunts, int once, int chunks, CancellationToken cancellation)
    {
        var block = new LeadfieldBlock(source.EegRows, source.MegRows);
        var signals = new BlockSignals(plan.Space, head, plan.MegReported);
        var reader = new BlockReader(plan);
        if (plan.View.Errors is { } errors)
        {
            signals.Build(errors);
        }

        for (int chunk; (chunk = Interlocked.Increment(ref _claimed) - 1) < chunks;)
        {
            cancellation.ThrowIfCancellationRequested();
            List<Hunt> open = OpenBefore(hunts, chunk);
            if (open.Count == 0)
            {
                return;
            }

            int first = chunk % once * RegionRun.ChunkSize, end = Math.Min(first + RegionRun.ChunkSize, region.Positions.Length);
            for (int from = first; from < end && open.Count > 0; from += LeadfieldBlock.Lanes)
            {
                int n = Math.Min(LeadfieldBlock.Lanes, end - from);
                block.Load(region.Positions.AsSpan(from, n), region.SourceIndices.Length == 0 ? default : region.SourceIndices.AsSpan(from, n));
                source.Fill(block);
                signals.Load(block);
                signals.Misbuilt?.Load(block, chunk / once);
                Match(open, chunk, chunk / once, from, n, signals, reader);
            }
        }
    }

    private List<Hunt> OpenBefore(Hunt[] hunts, int chunk)
    {
        lock (_gate)
        {
            return [.. hunts.Where(h => h.Sought && chunk < h.Chunk)];
        }
    }

    private void Match(List<Hunt> open, int chunk, int draw, int from, int count, BlockSignals signals, BlockReader reader)
    {
        (DirectionMode mode, LaneDirection[] directions) = reader.DirectionsOf(direction, signals);
        int stride = tally.Strides[plan.Directions.ToList().IndexOf(direction)];
        for (int k = DirectionSets.Start(from / LeadfieldBlock.Lanes, stride); k < directions.Length; k += stride)
        {
            LaneDirection u = directions[k];
            signals.Ask(mode, u);
            for (int h = open.Count - 1; h >= 0; h--)
            {
                if (Matched(open[h], from, count, signals, reader, mode, u) is { } witness)
                {
                    lock (_gate)
                    {
                        open[h].Take(witness with { Draw = draw }, chunk);
                    }

                    open.RemoveAt(h);
                }
            }
        }
    }

    private MedianWitness? Matched(Hunt hunt, int from, int count, BlockSignals signals, BlockReader reader, DirectionMode mode, LaneDirection u)
    {
        foreach (IMeasure read in hunt.Readings)
        {
            Vector512<double> power = read.Power(signals) * Vector512.Create(plan.Gain);
            ArtefactScale noise = read.InverseVariance(signals);
            Vector512<double> artefact = reader.ArtefactPower(noise);
            for (int lane = 0; lane < count; lane++)
            {
                if (hunt.IsMedian(power[lane], artefact[lane], noise.Eeg[lane]))
                {
                    return MedianWitness.Of(plan, signals, read, mode, u, lane, RegionRun.PointName(region, from + lane), region.Positions[from + lane], power[lane], artefact[lane], noise.Eeg[lane]);
                }
            }
        }

        return null;
    }

    /// <summary>The search for one median.</summary>
    private sealed class Hunt
    {
        private readonly QuantileStore _store;
        private readonly double _median;
        private readonly ITargetRule? _rule;

        public Hunt(EvaluationPlan plan, MeasureTally cell, Question question)
        {
            _store = cell.Counted(question.Rule);
            _median = _store.NearestRankFromTop(0.5) ?? 0;
            _rule = cell.Effective[question.Rule] is null ? null : plan.RulesOf(question.Measure)[question.Rule];
            Readings = _rule is null ? [question.Measure] : [question.Measure, .. plan.Fallbacks(question.Measure)];
        }

        /// <summary>False where the median is silent or undefined.</summary>
        public bool Sought => _median > 0;

        /// <summary>The measure, then the single readings that it may fall back to.</summary>
        public IMeasure[] Readings { get; }

        /// <summary>Chunk of the first match that is known.</summary>
        public int Chunk { get; private set; } = int.MaxValue;

        /// <summary>That match.</summary>
        public MedianWitness? Found { get; private set; }

        public bool IsMedian(double power, double artefact, double inverseVariance) =>
            _store.Matches(_median, _rule?.EffectivePower(power, artefact, inverseVariance) ?? power);

        public void Take(MedianWitness witness, int chunk)
        {
            if (chunk < Chunk)
            {
                (Found, Chunk) = (witness, chunk);
            }
        }
    }
}
