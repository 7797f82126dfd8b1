using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>The trilinear hexahedra of a head: every voxel that is not air is an element, its corners are nodes.</summary>
/// <remarks>
/// Node (x, y, z) is the corner between voxels (x-1, y-1, z-1) and (x, y, z): at voxel coordinates (x - 1/2, y - 1/2, z - 1/2). Corner c of element (i, j, k) is node
/// (i + (c and 1), j + (c / 2 and 1), k + c / 4). On an adapted grid nodes are moved by <see cref="Shift"/>; the numbering stays. Immutable.
/// </remarks>
public sealed class HexMesh
{
    private readonly Vec3[]? _shifts;

    /// <param name="volume">The head; at least one voxel is not air.</param>
    /// <param name="nodes">Its nodes.</param>
    /// <param name="shifts">Move of each node [m] in world axes, or null for the plain grid.</param>
    private HexMesh(TissueVolume volume, RowGrid nodes, Vec3[]? shifts) => (Volume, Nodes, _shifts) = (volume, nodes, shifts);

    /// <summary>The head.</summary>
    public TissueVolume Volume { get; }

    /// <summary>Its nodes.</summary>
    public RowGrid Nodes { get; }

    /// <summary>True where nodes were moved.</summary>
    public bool IsAdapted => _shifts is not null;

    /// <summary>The plain grid of a head.</summary>
    /// <exception cref="ArgumentException">Every voxel is air.</exception>
    public static HexMesh Plain(TissueVolume volume)
    {
        VoxelGrid grid = volume.Grid;
        int ny = grid.Ny + 1, nz = grid.Nz + 1;
        var first = new int[ny * nz];
        var end = new int[ny * nz];
        Array.Fill(first, int.MaxValue);
        ReadOnlySpan<byte> cells = volume.Cells;
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                ReadOnlySpan<byte> row = cells.Slice(grid.Index(0, j, k), grid.Nx);
                int from = row.IndexOfAnyExcept((byte)0);
                if (from < 0)
                {
                    continue;
                }

                int to = row.LastIndexOfAnyExcept((byte)0) + 2;      // nodes from..to-1
                for (int corner = 0; corner < 4; corner++)
                {
                    int at = j + (corner & 1) + ny * (k + corner / 2);
                    first[at] = Math.Min(first[at], from);
                    end[at] = Math.Max(end[at], to);
                }
            }
        }

        int[] length = [.. first.Zip(end, (a, b) => Math.Max(0, b - a))];
        return length.Any(n => n > 0) ? new(volume, new RowGrid(grid.Nx + 1, ny, nz, first, length), null)
            : throw new ArgumentException("Every voxel is air.", nameof(volume));
    }

    /// <summary>The same grid with moved nodes.</summary>
    /// <param name="shifts">Move of each node [m] in world axes.</param>
    public HexMesh Adapted(Vec3[] shifts) => shifts.Length == Nodes.Count ? new(Volume, Nodes, shifts)
        : throw new ArgumentException($"{shifts.Length} moves for {Nodes.Count} nodes.", nameof(shifts));

    /// <summary>Place of node (x, y, z), number <paramref name="index"/> [m].</summary>
    public Vec3 Position(int x, int y, int z, int index)
    {
        Vec3 plain = Volume.Grid.ToWorld.Apply(new(x - 0.5, y - 0.5, z - 0.5));
        return _shifts is null ? plain : plain + _shifts[index];
    }

    /// <summary>Move of a node [m]; zero on the plain grid.</summary>
    public Vec3 Shift(int index) => _shifts is null ? Vec3.Zero : _shifts[index];
}
