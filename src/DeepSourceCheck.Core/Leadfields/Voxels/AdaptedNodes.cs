using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// AdaptedNodes.cs - moves the nodes between tissues so that steps become slopes.
//   Of the eight voxels about a node, those of the tissue with the fewest are the minority (air is a tissue: the surface of the head adapts too). The node moves 0.33 of a
//   voxel towards the centroid of the minority's voxels, along each of the voxel axes off which it lies. Where several tissues have as few, the outermost kind is the minority:
//   scalp before bone before fluid before brain, air last; four against four (a flat interface) do not move it. Measured on the layered sphere beside moves of 0.33 in length
//   and other choices among equals: these are the more exact.
//   Elements that fall below a tenth of their volume at a corner take back half of the moves of their nodes, until all are sound.
// Source: [Camacho and others 1997]; [Wolters and others 2007].

/// <summary>The grid with nodes at interfaces moved.</summary>
public static class AdaptedNodes
{
    /// <summary>A move along an axis, at most [share of a voxel].</summary>
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
        byte[]? changed = null;
        for (int round = 0; TakeBack(mesh, shifts, round == MostRounds ? 0.0 : 0.5, ref changed); round++)
        {
        }

        return mesh.Adapted(shifts);
    }

    private static void Propose(HexMesh mesh, Vec3[] shifts)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        ReadOnlySpan<byte> cells = mesh.Volume.Cells;
        int[] ranks = Ranks(mesh.Volume.Tissues);
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
                        shifts[offset + n] = grid.ToWorld.ApplyLinear(Move(around, ranks));
                    }
                }
            }
        }
    }

    /// <summary>The move in voxels for the tissues about a node; voxel (dx, dy, dz) beside the node at place dx + 2 dy + 4 dz.</summary>
    /// <param name="around">Tissues of the eight voxels.</param>
    /// <param name="ranks">Of each tissue: among equals the lowest is the minority.</param>
    internal static Vec3 Move(ReadOnlySpan<byte> around, ReadOnlySpan<int> ranks)
    {
        int fewest = int.MaxValue, minority = -1;
        for (int v = 0; v < 8; v++)
        {
            int count = around.Count(around[v]);
            if (count < fewest || (count == fewest && ranks[around[v]] < ranks[minority]))
            {
                (fewest, minority) = (count, around[v]);
            }
        }

        if (fewest == 4)
        {
            return Vec3.Zero;
        }

        var sum = Vec3.Zero;
        for (int v = 0; v < 8; v++)
        {
            sum += around[v] == minority ? new Vec3((v & 1) - 0.5, (v >> 1 & 1) - 0.5, (v >> 2) - 0.5) : Vec3.Zero;
        }

        double largest = Math.Max(Math.Abs(sum.X), Math.Max(Math.Abs(sum.Y), Math.Abs(sum.Z)));
        return largest == 0 ? Vec3.Zero : Share / largest * sum;
    }

    /// <summary>The order of tissues among equals, from the kinds alone: labels and their order in the study do not matter. Tissues of one kind go by their conductivity.</summary>
    internal static int[] Ranks(IReadOnlyList<Tissue> tissues)
    {
        int[] order = [.. Enumerable.Range(0, tissues.Count)
            .OrderBy(t => tissues[t].Kind == TissueKind.Air ? int.MaxValue : (int)tissues[t].Kind).ThenBy(t => tissues[t].Conductivity)];
        var ranks = new int[tissues.Count];
        for (int k = 0; k < order.Length; k++)
        {
            ranks[order[k]] = k;
        }

        return ranks;
    }

    /// <summary>Shrinks the moves of the nodes of unsound elements; true if there were any.</summary>
    /// <param name="mesh">The plain grid.</param>
    /// <param name="shifts">Move of each node [m].</param>
    /// <param name="keep">What an unsound element's nodes keep of their moves.</param>
    /// <param name="changed">1 for nodes that the round before shrank: an element without any was sound then and is now. Null: none came before. Receives those of this round.</param>
    private static bool TakeBack(HexMesh mesh, Vec3[] shifts, double keep, ref byte[]? changed)
    {
        HexMesh moved = mesh.Adapted(shifts);
        byte[]? before = changed;
        var unsound = new byte[mesh.Nodes.Count];            // set to 1 from any slice: in whatever order, the same nodes
        Parallel.For(0, mesh.Volume.Grid.Nz, k => FindUnsound(moved, shifts, k, before, unsound));
        bool any = false;
        for (int node = 0; node < unsound.Length; node++)
        {
            if (unsound[node] != 0)
            {
                shifts[node] *= keep;
                any = true;
            }
        }

        changed = unsound;
        return any;
    }

    private static void FindUnsound(HexMesh moved, Vec3[] shifts, int k, byte[]? changed, byte[] unsound)
    {
        VoxelGrid grid = moved.Volume.Grid;
        double voxel = grid.ToWorld.Determinant;
        Span<Vec3> corners = stackalloc Vec3[HexElement.Corners];
        Span<int> nodes = stackalloc int[HexElement.Corners], bases = stackalloc int[HexElement.Corners / 2];
        for (int j = 0; j < grid.Ny; j++)
        {
            ReadOnlySpan<byte> row = moved.Volume.Cells.Slice(grid.Index(0, j, k), grid.Nx);
            int first = row.IndexOfAnyExcept((byte)0), last = row.LastIndexOfAnyExcept((byte)0);
            for (int pair = 0; first >= 0 && pair < bases.Length; pair++)
            {
                bases[pair] = moved.Nodes.Base(j + (pair & 1), k + (pair >> 1))!.Value;
            }

            for (int i = first; i >= 0 && i <= last; i++)
            {
                bool look = false;
                for (int c = 0; row[i] != 0 && c < HexElement.Corners; c++)
                {
                    int node = bases[c >> 1] + i + (c & 1);
                    nodes[c] = node;
                    look |= changed is null ? shifts[node] != Vec3.Zero : changed[node] != 0;
                }

                for (int c = 0; look && c < HexElement.Corners; c++)
                {
                    corners[c] = moved.Position(i + (c & 1), j + (c >> 1 & 1), k + (c >> 2), nodes[c]);
                }

                if (look && HexElement.LeastDeterminant(corners, voxel) < LeastDeterminant)
                {
                    foreach (int node in nodes)
                    {
                        unsound[node] = 1;
                    }
                }
            }
        }
    }
}
