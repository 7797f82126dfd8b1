using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>What the rows of a head of voxels take: from counts alone, before anything is allocated.</summary>
/// <remarks>
/// Memory: volume and distances, stencils and levels of the grid, sixteen right-hand sides a thread, and the rows that are kept. Time: set-up a node, solve a node and right-hand side, loads of
/// dipoles a dipole and row. Measured on two processors, peak of the whole process:
/// 0.41 GB for 430,000 nodes, 2.6 GB for 3.3 million and 4.2 GB for 4.8 million; 10, 94 and 108 s of processor time for 355, 355 and 266 right-hand sides.
/// </remarks>
internal sealed class VoxelCost
{
    // Bytes: a voxel of the box (labels, two distances, work of the checks); a node (stencils, levels, numbering); a node and thread (six vectors of sixteen single-precision lanes, levels added);
    // and the rows that are kept. A dipole's load touches some 27 nodes, and neighbours share most of them.
    private const double BytesAVoxel = 16, BytesANode = 300, BytesANodeAndThread = 300, NodesADipole = 8;

    // Seconds on one processor.
    private const double SecondsANode = 2e-6, SecondsANodeAndRow = 8e-8, SecondsADipoleAndRow = 4e-9;

    private readonly long _voxels, _nodes;

    /// <param name="volume">The head with its margin.</param>
    public VoxelCost(TissueVolume volume)
    {
        HexMesh mesh = HexMesh.Plain(volume);
        var tissue = new SourceTissue(mesh);
        (_voxels, _nodes) = (volume.Grid.Count, mesh.Nodes.Count);
        SourceNodes = Enumerable.Range(0, mesh.Nodes.Count).Count(tissue.Touches);
    }

    /// <summary>Nodes that a source could use: those of which rows are kept as far as they fit.</summary>
    public int SourceNodes { get; }

    /// <summary>The cost of leadfields.</summary>
    /// <param name="rows">Right-hand sides: electrodes and coil channels.</param>
    /// <param name="dipoles">Dipoles in all regions.</param>
    /// <param name="reusable">True where rows of every node that a source could use are kept as far as they fit.</param>
    public LeadfieldCost Of(int rows, long dipoles, bool reusable) => Of(_voxels, _nodes, rows, dipoles, Kept(rows, dipoles, reusable), Environment.ProcessorCount);

    /// <summary>Of that, the memory of the rows [bytes]: it stays after the solution.</summary>
    public long RowBytes(int rows, long dipoles, bool reusable) => TransferRows.ValuesFor((long)Kept(rows, dipoles, reusable), rows) * sizeof(float);

    /// <summary>The cost of two solutions, one after the other with the same matrix, where the rows of the first stay while the second is solved for.</summary>
    public LeadfieldCost Of((int Rows, long Dipoles, bool Reusable) first, (int Rows, long Dipoles, bool Reusable) second)
    {
        LeadfieldCost a = Of(first.Rows, first.Dipoles, first.Reusable), b = Of(second.Rows, second.Dipoles, second.Reusable);
        long keptByFirst = RowBytes(first.Rows, first.Dipoles, first.Reusable);
        return new(Math.Max(a.Bytes, b.Bytes + keptByFirst), a.Seconds + b.Seconds);
    }

    /// <summary>The same from numbers.</summary>
    /// <param name="voxels">Voxels of the box around the head.</param>
    /// <param name="nodes">Nodes of the finite elements.</param>
    /// <param name="rows">Right-hand sides.</param>
    /// <param name="dipoles">Dipoles in all regions.</param>
    /// <param name="kept">Nodes whose rows are kept.</param>
    /// <param name="processors">Processors that solve, each its own sixteen right-hand sides.</param>
    public static LeadfieldCost Of(long voxels, long nodes, long rows, long dipoles, double kept, int processors)
    {
        double busy = Math.Min(processors, Math.Ceiling(rows / 16.0));
        double bytes = voxels * BytesAVoxel + nodes * (BytesANode + BytesANodeAndThread * busy) + TransferRows.ValuesFor((long)Math.Min(nodes, kept), rows) * (double)sizeof(float);
        double seconds = nodes * SecondsANode + nodes * (double)rows * SecondsANodeAndRow / Math.Max(1, busy) + dipoles * (double)rows * SecondsADipoleAndRow / processors;
        return new(bytes < long.MaxValue ? (long)bytes : long.MaxValue, seconds);
    }

    private double Kept(int rows, long dipoles, bool reusable) =>
        reusable && TransferRows.BytesFor(SourceNodes, rows) <= RowSolver.MostRowBytes ? SourceNodes : Math.Min(SourceNodes, dipoles * NodesADipole);
}
