using System.Runtime.InteropServices;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>Which nodes share a row of the stiffness matrix: those with the same eight conductivities about them; nodes of a moved or anisotropic element have a row of their own.</summary>
internal sealed class NodeClasses
{
    private readonly double[] _conductivities;
    private readonly byte[] _classOfTissue;
    private readonly bool[]? _special;
    private readonly List<ulong> _octets = [];

    /// <param name="mesh">Elements.</param>
    /// <param name="tensors">Conductivity tensors, or null.</param>
    public NodeClasses(HexMesh mesh, ConductivityTensors? tensors)
    {
        _conductivities = [.. mesh.Volume.Tissues.Select(t => t.Conductivity).Prepend(0.0).Distinct()];
        _classOfTissue = [.. mesh.Volume.Tissues.Select((t, n) => n == 0 ? (byte)0 : (byte)Array.IndexOf(_conductivities, t.Conductivity))];
        _special = mesh.IsAdapted || tensors is { Count: > 0 } ? Special(mesh, tensors) : null;
        Index = GC.AllocateUninitializedArray<int>(mesh.Nodes.Count, pinned: true);
        Sort(mesh);
    }

    /// <summary>Row of each node: rows below <see cref="Shared"/> are shared, those above belong to one node each, in the order of the nodes.</summary>
    public int[] Index { get; }

    /// <summary>Shared rows, number of.</summary>
    public int Shared => _octets.Count;

    /// <summary>Rows that belong to one node, number of.</summary>
    public int Own { get; private set; }

    /// <summary>Conductivity [S/m] of the eight voxels about the nodes of a shared row; voxel (dx, dy, dz) beside the node at place dx + 2 dy + 4 dz.</summary>
    public double Conductivity(int shared, int voxel) => _conductivities[(byte)(_octets[shared] >> (8 * voxel))];

    /// <summary>True where an element has moved nodes or a tensor.</summary>
    public bool IsSpecial(int voxel) => _special is not null && _special[voxel];

    private static bool[] Special(HexMesh mesh, ConductivityTensors? tensors)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        var special = new bool[grid.Count];
        for (int voxel = 0; voxel < special.Length; voxel++)
        {
            if (mesh.Volume.Cells[voxel] == 0)
            {
                continue;
            }

            bool moved = false;
            if (mesh.IsAdapted)
            {
                (int i, int j, int k) = grid.Voxel(voxel);
                for (int line = 0; line < 4; line++)
                {
                    int node = mesh.Nodes.Base(j + (line & 1), k + (line >> 1))!.Value + i;
                    moved |= mesh.Shift(node) != Vec3.Zero || mesh.Shift(node + 1) != Vec3.Zero;
                }
            }

            special[voxel] = moved || (tensors is not null && tensors.TryGet(voxel, out _));
        }

        return special;
    }

    private void Sort(HexMesh mesh)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        ReadOnlySpan<byte> cells = mesh.Volume.Cells;
        Dictionary<ulong, int> known = [];
        ulong lastOctet = ulong.MaxValue;
        int lastRow = 0;
        Span<int> lines = stackalloc int[4];
        for (int z = 0; z < mesh.Nodes.Nz; z++)
        {
            for (int y = 0; y < mesh.Nodes.Ny; y++)
            {
                (int first, int length, int offset) = mesh.Nodes.Row(y, z);
                for (int line = 0; line < 4; line++)
                {
                    int j = y - 1 + (line & 1), k = z - 1 + (line >> 1);
                    lines[line] = (uint)j < (uint)grid.Ny && (uint)k < (uint)grid.Nz ? grid.Index(0, j, k) : -1;
                }

                for (int n = 0; n < length; n++)
                {
                    (ulong octet, bool special) = Octet(cells, lines, first + n, grid.Nx);
                    if (special)
                    {
                        Index[offset + n] = ~Own++;
                        continue;
                    }

                    if (octet != lastOctet)
                    {
                        ref int row = ref CollectionsMarshal.GetValueRefOrAddDefault(known, octet, out bool there);
                        if (!there)
                        {
                            row = _octets.Count;
                            _octets.Add(octet);
                        }

                        (lastOctet, lastRow) = (octet, row);
                    }

                    Index[offset + n] = lastRow;
                }
            }
        }

        for (int node = 0; node < Index.Length; node++)
        {
            Index[node] = Index[node] < 0 ? Shared + ~Index[node] : Index[node];
        }
    }

    private (ulong Octet, bool Special) Octet(ReadOnlySpan<byte> cells, Span<int> lines, int x, int nx)
    {
        ulong octet = 0;
        bool special = false;
        for (int line = 0; line < 4; line++)
        {
            for (int dx = 0; dx < 2 && lines[line] >= 0; dx++)
            {
                int i = x - 1 + dx;
                if ((uint)i < (uint)nx)
                {
                    int voxel = lines[line] + i;
                    octet |= (ulong)_classOfTissue[cells[voxel]] << (8 * (dx + 2 * line));
                    special |= IsSpecial(voxel);
                }
            }
        }

        return (octet, special);
    }
}
