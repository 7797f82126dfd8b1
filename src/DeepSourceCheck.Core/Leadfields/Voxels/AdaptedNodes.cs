using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// AdaptedNodes.cs - moves the nodes between tissues so that steps become slopes.
//   Of the eight voxels about a node, those of the tissue with the fewest are the minority (air is a tissue: the surface of the head adapts too). The node moves 0.33 of a
//   voxel towards the centroid of the minority's voxels, in voxel axes. Equal shares (a flat interface) and several tissues with as few do not move it.
//   Elements that fall below a tenth of their volume at a corner take back half of the moves of their nodes, until all are sound.
// Source: [Camacho and others 1997]; [Wolters and others 2007].

/// <summary>The grid with nodes at interfaces moved.</summary>
public static class AdaptedNodes
{
    /// <summary>Length of a move [share of a voxel].</summary>
    public const double Share = 0.33;

    /// <summary>Least determinant of an element's map at its corners and Gauss points, relative to an undeformed voxel.</summary>
    public const double LeastDeterminant = 0.1;

    private const int MostRounds = 8;

    /// <summary>The mesh with its interface nodes moved.</summary>
    /// <param name="mesh">A plain grid.</param>
    public static HexMesh Adapt(HexMesh mesh)
    {
        var shifts = new Vec3[mesh.Nodes.Count];
        Propose(mesh, shifts);
        for (int round = 0; TakeBack(mesh, shifts, round == MostRounds ? 0.0 : 0.5); round++)
        {
        }

        return mesh.Adapted(shifts);
    }

    private static void Propose(HexMesh mesh, Vec3[] shifts)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        ReadOnlySpan<byte> cells = mesh.Volume.Cells;
        Span<byte> around = stackalloc byte[8];
        for (int z = 0; z < mesh.Nodes.Nz; z++)
        {
            for (int y = 0; y < mesh.Nodes.Ny; y++)
            {
                (int first, int length, int offset) = mesh.Nodes.Row(y, z);
                for (int n = 0; n < length; n++)
                {
                    for (int v = 0; v < 8; v++)
                    {
                        (int i, int j, int k) = (first + n - 1 + (v & 1), y - 1 + (v >> 1 & 1), z - 1 + (v >> 2));
                        bool inside = (uint)i < (uint)grid.Nx && (uint)j < (uint)grid.Ny && (uint)k < (uint)grid.Nz;
                        around[v] = inside ? cells[grid.Index(i, j, k)] : (byte)0;
                    }

                    if (around.ContainsAnyExcept(around[0]))
                    {
                        shifts[offset + n] = grid.ToWorld.ApplyLinear(Move(around));
                    }
                }
            }
        }
    }

    /// <summary>The move in voxels for the tissues about a node; voxel (dx, dy, dz) beside the node at place dx + 2 dy + 4 dz.</summary>
    internal static Vec3 Move(ReadOnlySpan<byte> around)
    {
        int fewest = int.MaxValue, minority = -1;
        for (int v = 0; v < 8; v++)
        {
            int count = around.Count(around[v]);
            if (count < fewest)
            {
                (fewest, minority) = (count, around[v]);
            }
            else if (count == fewest && around[v] != minority)
            {
                minority = -1;
            }
        }

        var sum = Vec3.Zero;
        for (int v = 0; v < 8; v++)
        {
            sum += around[v] == minority ? new Vec3((v & 1) - 0.5, (v >> 1 & 1) - 0.5, (v >> 2) - 0.5) : Vec3.Zero;
        }

        return sum == Vec3.Zero ? Vec3.Zero : Share / sum.Norm * sum;
    }

    /// <summary>Shrinks the moves of the nodes of unsound elements; true if there were any.</summary>
    private static bool TakeBack(HexMesh mesh, Vec3[] shifts, double keep)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        HexMesh moved = mesh.Adapted(shifts);
        var unsound = new HashSet<int>();
        Span<Vec3> corners = stackalloc Vec3[HexElement.Corners];
        Span<int> nodes = stackalloc int[HexElement.Corners];
        for (int voxel = 0; voxel < grid.Count; voxel++)
        {
            if (mesh.Volume.Cells[voxel] == 0)
            {
                continue;
            }

            (int i, int j, int k) = grid.Voxel(voxel);
            bool any = false;
            for (int c = 0; c < HexElement.Corners; c++)
            {
                int y = j + (c >> 1 & 1), z = k + (c >> 2), x = i + (c & 1);
                nodes[c] = mesh.Nodes.Base(y, z)!.Value + x;
                any |= shifts[nodes[c]] != Vec3.Zero;
            }

            for (int c = 0; any && c < HexElement.Corners; c++)
            {
                corners[c] = moved.Position(i + (c & 1), j + (c >> 1 & 1), k + (c >> 2), nodes[c]);
            }

            if (any && HexElement.LeastDeterminant(corners, grid.ToWorld.Determinant) < LeastDeterminant)
            {
                unsound.UnionWith(nodes.ToArray());
            }
        }

        foreach (int node in unsound)
        {
            shifts[node] *= keep;
        }

        return unsound.Count > 0;
    }
}
