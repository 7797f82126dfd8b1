using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>What the rows of a head of voxels take: from counts alone, before anything is allocated.</summary>
/// <remarks>
/// Memory: volume and distances, stencils and levels of the grid, sixteen right-hand sides a thread, and the rows that are kept. Time: set-up a node, solve a node and right-hand side, loads of
/// dipoles a dipole and row. Measured on two processors, peak of the whole process:
/// 0.41 GB for 430,000 nodes, 2.6 GB for 3.3 million and 4.2 GB for 4.8 million; 10, 94 and 108 s of processor time for 355, 355 and 266 right-hand sides.
/// </remarks>
internal static class VoxelCost
{
    // Bytes: a voxel of the box (labels, two distances, work of the checks); a node (stencils, levels, numbering); a node and thread (six vectors of sixteen single-precision lanes, levels added);
    // a kept value. A dipole's load touches some 27 nodes, and neighbours share most of them.
    private const double BytesAVoxel = 16, BytesANode = 300, BytesANodeAndThread = 300, BytesAKeptValue = 4, NodesADipole = 8;

    // Seconds on one processor.
    private const double SecondsANode = 2e-6, SecondsANodeAndRow = 8e-8, SecondsADipoleAndRow = 4e-9;

    /// <summary>The cost of a head.</summary>
    /// <param name="volume">The head with its margin.</param>
    /// <param name="rows">Right-hand sides: electrodes and coil channels.</param>
    /// <param name="dipoles">Dipoles in all regions.</param>
    /// <param name="reusable">True where rows of every node that a source could use are kept as far as they fit.</param>
    public static LeadfieldCost Of(TissueVolume volume, long rows, long dipoles, bool reusable)
    {
        // Grey and white matter have about a tenth more nodes than voxels.
        bool[] isSource = [.. volume.Tissues.Select(t => VoxelHead.IsSource(t.Kind))];
        long all = 0;
        foreach (byte cell in volume.Cells)
        {
            all += isSource[cell] ? 1 : 0;
        }

        all += all / 10;
        double needed = dipoles * NodesADipole;
        double kept = reusable && all * rows * BytesAKeptValue <= RowSolver.MostRowBytes ? all : needed;
        return Of(volume.Grid.Count, HexMesh.Plain(volume).Nodes.Count, rows, dipoles, kept, Environment.ProcessorCount);
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
        double bytes = voxels * BytesAVoxel + nodes * (BytesANode + BytesANodeAndThread * busy) + Math.Min(nodes, kept) * rows * BytesAKeptValue;
        double seconds = nodes * SecondsANode + nodes * (double)rows * SecondsANodeAndRow / Math.Max(1, busy) + dipoles * (double)rows * SecondsADipoleAndRow / processors;
        return new(bytes < long.MaxValue ? (long)bytes : long.MaxValue, seconds);
    }
}
