using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;

namespace DeepSourceCheck.Core.Planning;

/// <summary>
/// Regions that act at once: one source whose leadfield is the weighted sum over all their dipoles, the moment split over the regions and evenly over each region's dipoles.
/// </summary>
/// <remarks>See <see cref="Activation"/> for what shares and lags do to the weights.</remarks>
public sealed class SummedSource : ILeadfieldSource
{
    // Relative; the leadfields themselves are exact to some 1e-14 and sums of thousands of terms add little.
    private const double Rounding = 1e-12;

    private readonly double[] _eeg, _meg;

    /// <param name="source">Leadfields of the single dipoles.</param>
    /// <param name="regions">The regions, each with at least one dipole.</param>
    /// <param name="weights">Signed weight of each region in the moment.</param>
    /// <param name="cancellation">Stops between blocks.</param>
    public SummedSource(ILeadfieldSource source, IReadOnlyList<FilledRegion> regions, IReadOnlyList<double> weights, CancellationToken cancellation)
    {
        EegRows = source.EegRows;
        MegRows = source.MegRows;
        Method = source.Method;
        _eeg = new double[EegRows * 3];
        _meg = new double[MegRows * 3];
        double[] eegSize = new double[_eeg.Length], megSize = new double[_meg.Length];
        var block = new LeadfieldBlock(EegRows, MegRows);
        for (int part = 0; part < regions.Count; part++)
        {
            FilledRegion region = regions[part];
            double weight = weights[part] / region.Positions.Length;
            for (int from = 0; from < region.Positions.Length; from += LeadfieldBlock.Lanes)
            {
                cancellation.ThrowIfCancellationRequested();
                int n = Math.Min(LeadfieldBlock.Lanes, region.Positions.Length - from);
                block.Load(region.Positions.AsSpan(from, n), region.SourceIndices.Length == 0 ? default : region.SourceIndices.AsSpan(from, n));
                source.Fill(block);
                Add(block.Eeg, _eeg, eegSize, n, weight);
                Add(block.Meg, _meg, megSize, n, weight);
            }
        }

        Silence(_eeg, eegSize);
        Silence(_meg, megSize);

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

    // What is left of terms that cancel, below their rounding, is no field.
    private static void Silence(double[] sum, double[] size)
    {
        for (int k = 0; k < sum.Length; k++)
        {
            sum[k] = Math.Abs(sum[k]) > Rounding * size[k] ? sum[k] : 0;
        }
    }

    private static void Add(double[] lanes, double[] sum, double[] size, int count, double weight)
    {
        for (int k = 0; k < sum.Length; k++)
        {
            for (int lane = 0; lane < count; lane++)
            {
                double term = weight * lanes[k * LeadfieldBlock.Lanes + lane];
                sum[k] += term;
                size[k] += Math.Abs(term);
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
