using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Planning;

/// <summary>
/// Streams the dipoles of one region through leadfield, split and measures, on all processors. The leadfield is never held: a block of eight dipoles passes every stage.
/// </summary>
/// <remarks>Dipoles are cut into chunks of fixed size, tallies add up in any order, chunks are written in theirs: the same bytes for any number of threads.</remarks>
internal sealed class RegionRun(EvaluationPlan plan, IHead head, ILeadfieldSource source)
{
    private const int BlocksAChunk = 32;

    /// <summary>Dipoles of a chunk.</summary>
    public const int ChunkSize = BlocksAChunk * LeadfieldBlock.Lanes;

    /// <summary>Reads every dipole of a region.</summary>
    /// <param name="region">The region.</param>
    /// <param name="sink">Takes dipole results, or null.</param>
    /// <param name="progress">Told the number of dipoles that are done.</param>
    /// <param name="cancellation">Stops between chunks.</param>
    public RegionTally Run(FilledRegion region, IDipoleSink? sink, Action<long>? progress, CancellationToken cancellation)
    {
        int dipoles = region.Positions.Length;
        int chunks = (dipoles + ChunkSize - 1) / ChunkSize;
        int workers = Math.Max(1, Math.Min(Environment.ProcessorCount, chunks));
        var idle = new System.Collections.Concurrent.ConcurrentBag<Worker>();
        var made = new List<Worker>();
        int wave = workers * (sink is null ? 64 : 16);          // with a sink a wave's formatted rows are held until they are written
        byte[]?[] formatted = new byte[wave][];
        for (int from = 0; from < chunks; from += wave)
        {
            int to = Math.Min(chunks, from + wave);
            Parallel.For(from, to, new ParallelOptions { MaxDegreeOfParallelism = workers, CancellationToken = cancellation }, chunk =>
            {
                if (!idle.TryTake(out Worker? worker))
                {
                    worker = new Worker(plan, head, source, dipoles);
                    lock (made)
                    {
                        made.Add(worker);
                    }
                }

                int start = chunk * ChunkSize;
                DipoleChunk? results = worker.Run(region, start, Math.Min(ChunkSize, dipoles - start), sink is not null);
                formatted[chunk - from] = results is null ? null : sink!.Format(results);
                idle.Add(worker);
            });
            for (int k = 0; sink is not null && k < to - from; k++)
            {
                sink.Append(formatted[k]!);
                formatted[k] = null;
            }

            progress?.Invoke(Math.Min((long)to * ChunkSize, dipoles));
        }

        RegionTally total = made.Count > 0 ? made[0].Tally : new RegionTally(plan, dipoles);
        foreach (Worker worker in made.Skip(1))
        {
            total.Merge(worker.Tally);
        }

        return total;
    }

    private sealed class Worker(EvaluationPlan plan, IHead head, ILeadfieldSource source, long dipoles)
    {
        private readonly LeadfieldBlock _block = new(source.EegRows, source.MegRows);
        private readonly BlockSignals _signals = new(plan.Space, head, plan.MegReported);
        private readonly BlockReader _reader = new(plan);

        public RegionTally Tally { get; } = new(plan, dipoles);

        public DipoleChunk? Run(FilledRegion region, int start, int count, bool keep)
        {
            double[][]? snr = keep ? [.. plan.Columns.Select(_ => new double[count])] : null;
            var directions = new Vec3[keep ? 3 * count : 0];
            var values = new Vec3[keep ? count : 0];
            var states = new SplitState[keep ? count : 0];
            for (int done = 0; done < count; done += LeadfieldBlock.Lanes)
            {
                int n = Math.Min(LeadfieldBlock.Lanes, count - done);
                ReadOnlySpan<int> sources = region.SourceIndices.Length == 0 ? default : region.SourceIndices.AsSpan(start + done, n);
                _block.Load(region.Positions.AsSpan(start + done, n), sources);
                source.Fill(_block);
                _signals.Load(_block);
                _reader.Read(_signals, n, (start + done) / LeadfieldBlock.Lanes, Tally, snr, done);
                Summarise(n);
                for (int lane = 0; keep && lane < n; lane++)
                {
                    for (int k = 0; k < 3; k++)
                    {
                        directions[3 * (done + lane) + k] = _signals.Split.V(k, lane);
                    }

                    values[done + lane] = new(_signals.Split.S(0, lane), _signals.Split.S(1, lane), _signals.Split.S(2, lane));
                    states[done + lane] = _signals.Split.States[lane];
                }
            }

            return keep ? new DipoleChunk
            {
                Response = plan.Response.Name,
                Region = region.Name,
                Count = count,
                Points = [.. Enumerable.Range(start, count).Select(k => PointName(region, k))],
                Positions = region.Positions[start..(start + count)],
                Directions = directions,
                SingularValues = values,
                States = states,
                SnrDb = snr!,
            } : null;
        }

        private void Summarise(int lanes)
        {
            for (int lane = 0; lane < lanes; lane++)
            {
                switch (_signals.Split.States[lane])
                {
                    case SplitState.Undefined:
                        Tally.Undefined++;
                        continue;
                    case SplitState.Degenerate:
                        Tally.Degenerate++;
                        break;
                }

                Tally.WeakestOverStrongest.Add(_signals.Split.S(2, lane) / _signals.Split.S(0, lane));
                if (head.Outward(_block.Positions[lane]) is { } outward)
                {
                    Vec3 v3 = _signals.Split.V(2, lane);
                    Tally.AngleToRadial.Add(Math.Atan2(Vec3.Cross(v3, outward).Norm, Math.Abs(Vec3.Dot(v3, outward))));
                }
            }
        }
    }

    /// <summary>Name of a kept point: the study's, or its row in the region.</summary>
    internal static string PointName(FilledRegion region, int k) =>
        region.PointNames.Length > 0 ? region.PointNames[k] : region.Rows[k].ToString(System.Globalization.CultureInfo.InvariantCulture);
}
