using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;

namespace DeepSourceCheck.Core.Planning;

/// <summary>
/// Regions that act at once: one source whose leadfield is the weighted sum over all their dipoles, the moment split equally over the regions and evenly over each region's dipoles.
/// </summary>
public sealed class SummedSource : ILeadfieldSource
{
    private readonly double[] _eeg, _meg;

    /// <param name="source">Leadfields of the single dipoles.</param>
    /// <param name="regions">The regions, each with at least one dipole.</param>
    /// <param name="cancellation">Stops between blocks.</param>
    public SummedSource(ILeadfieldSource source, IReadOnlyList<FilledRegion> regions, CancellationToken cancellation)
    {
        EegRows = source.EegRows;
        MegRows = source.MegRows;
        Method = source.Method;
        _eeg = new double[EegRows * 3];
        _meg = new double[MegRows * 3];
        var block = new LeadfieldBlock(EegRows, MegRows);
        foreach (FilledRegion region in regions)
        {
            double weight = 1.0 / regions.Count / region.Positions.Length;
            for (int from = 0; from < region.Positions.Length; from += LeadfieldBlock.Lanes)
            {
                cancellation.ThrowIfCancellationRequested();
                int n = Math.Min(LeadfieldBlock.Lanes, region.Positions.Length - from);
                block.Load(region.Positions.AsSpan(from, n), region.SourceIndices.Length == 0 ? default : region.SourceIndices.AsSpan(from, n));
                source.Fill(block);
                Add(block.Eeg, _eeg, n, weight);
                Add(block.Meg, _meg, n, weight);
            }
        }

        Region = new FilledRegion
        {
            Name = string.Join(" + ", regions.Select(r => r.Name)),
            Positions = [regions.Aggregate(Vec3.Zero, (sum, r) => sum + r.Centroid) / regions.Count],
            Rows = [0],
            PointNames = ["all"],
        };
    }

    /// <inheritdoc/>
    public int EegRows { get; }

    /// <inheritdoc/>
    public int MegRows { get; }

    /// <inheritdoc/>
    public LeadfieldMethod Method { get; }

    /// <summary>The one source, at the mean of the regions' centroids.</summary>
    public FilledRegion Region { get; }

    /// <inheritdoc/>
    public void Fill(LeadfieldBlock block)
    {
        Spread(_eeg, block.Eeg);
        Spread(_meg, block.Meg);
    }

    private static void Add(double[] lanes, double[] sum, int count, double weight)
    {
        for (int k = 0; k < sum.Length; k++)
        {
            for (int lane = 0; lane < count; lane++)
            {
                sum[k] += weight * lanes[k * LeadfieldBlock.Lanes + lane];
            }
        }
    }

    private static void Spread(double[] sum, double[] lanes)
    {
        for (int k = 0; k < sum.Length; k++)
        {
            lanes.AsSpan(k * LeadfieldBlock.Lanes, LeadfieldBlock.Lanes).Fill(sum[k]);
        }
    }
}
