using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Reads chunks of dipoles, block by block, into a tally and, where asked, into dipole results. One a thread: keeps its buffers.</summary>
internal sealed class ChunkReader
{
    private readonly IHead _head;
    private readonly ILeadfieldSource _source;
    private readonly RegionTally _tally;
    private readonly LeadfieldBlock _block;
    private readonly BlockSignals _signals;
    private readonly BlockReader _reader;

    /// <param name="plan">What is read.</param>
    /// <param name="head">Head.</param>
    /// <param name="source">Leadfields.</param>
    /// <param name="tally">Receives every figure.</param>
    /// <param name="keep">Whether results are kept dipole by dipole.</param>
    public ChunkReader(EvaluationPlan plan, IHead head, ILeadfieldSource source, RegionTally tally, bool keep)
    {
        _head = head;
        _source = source;
        _tally = tally;
        _block = new LeadfieldBlock(source.EegRows, source.MegRows);
        _signals = new BlockSignals(plan.Space, head, plan.MegReported);
        _reader = new BlockReader(plan);
        if (plan.View.Errors is { } errors)
        {
            _signals.Build(errors);
        }

        Results = !keep ? null : new DipoleChunk
        {
            Response = plan.Response.Name,
            Region = "",
            Count = 0,
            Points = new string[RegionRun.ChunkSize],
            Positions = new Vec3[RegionRun.ChunkSize],
            Directions = new Vec3[3 * RegionRun.ChunkSize],
            SingularValues = new Vec3[RegionRun.ChunkSize],
            States = new SplitState[RegionRun.ChunkSize],
            SnrDb = [.. plan.Columns.Select(_ => new double[RegionRun.ChunkSize])],
        };
    }

    /// <summary>Results of the chunk read last, overwritten by the next; null where they are not kept.</summary>
    public DipoleChunk? Results { get; }

    /// <summary>Reads one chunk.</summary>
    /// <param name="region">The region.</param>
    /// <param name="start">Its first dipole.</param>
    /// <param name="count">Number of dipoles.</param>
    /// <param name="draw">Draw of a filter's errors.</param>
    public void Read(FilledRegion region, int start, int count, int draw)
    {
        for (int done = 0; done < count; done += LeadfieldBlock.Lanes)
        {
            int n = Math.Min(LeadfieldBlock.Lanes, count - done);
            Load(region, start + done, n);
            _signals.Misbuilt?.Load(_block, draw);
            _reader.Read(_signals, n, (start + done) / LeadfieldBlock.Lanes, _tally, Results?.SnrDb, done);
            _tally.Profile?.Read(_signals, region.CorticalPlaces.AsSpan(start + done, n));
            Summarise(n);
            Keep(done, n);
        }

        if (Results is { } results)
        {
            results.Region = region.Name;
            results.Count = count;
            region.Positions.AsSpan(start, count).CopyTo(results.Positions);
            for (int k = 0; k < count; k++)
            {
                results.Points[k] = RegionRun.PointName(region, start + k);
            }
        }
    }

    private void Load(FilledRegion region, int first, int count)
    {
        ReadOnlySpan<int> sources = region.SourceIndices.Length == 0 ? default : region.SourceIndices.AsSpan(first, count);
        _block.Load(region.Positions.AsSpan(first, count), sources);
        _source.Fill(_block);
        _signals.Load(_block);
    }

    private void Keep(int first, int lanes)
    {
        SplitBlock split = _signals.Split;
        for (int lane = 0; Results is not null && lane < lanes; lane++)
        {
            for (int k = 0; k < 3; k++)
            {
                Results.Directions[3 * (first + lane) + k] = split.V(k, lane);
            }

            Results.SingularValues[first + lane] = new(split.S(0, lane), split.S(1, lane), split.S(2, lane));
            Results.States[first + lane] = split.States[lane];
        }
    }

    private void Summarise(int lanes)
    {
        for (int lane = 0; lane < lanes; lane++)
        {
            switch (_signals.Split.States[lane])
            {
                case SplitState.Undefined:
                    _tally.Undefined++;
                    continue;
                case SplitState.Degenerate:
                    _tally.Degenerate++;
                    break;
            }

            _tally.WeakestOverStrongest.Add(_signals.Split.S(2, lane) / _signals.Split.S(0, lane));
            if (_head.Outward(_block.Positions[lane]) is { } outward)
            {
                Vec3 v3 = _signals.Split.V(2, lane);
                _tally.AngleToRadial.Add(Math.Atan2(Vec3.Cross(v3, outward).Norm, Math.Abs(Vec3.Dot(v3, outward))));
            }
        }
    }
}
