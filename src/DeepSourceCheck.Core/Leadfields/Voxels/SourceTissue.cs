using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>Where sources may stand in a mesh, grey and white matter, and how its nodes lie to that tissue.</summary>
/// <remarks>It depends on the head alone, never on a region. Immutable.</remarks>
public sealed class SourceTissue
{
    private const byte TouchesFlag = 1, WithinFlag = 2;

    private readonly byte[] _nodes;
    private readonly bool[] _isSource;

    /// <param name="mesh">Elements.</param>
    public SourceTissue(HexMesh mesh)
    {
        Mesh = mesh;
        VoxelGrid grid = mesh.Volume.Grid;
        RowGrid nodes = mesh.Nodes;
        _isSource = [.. mesh.Volume.Tissues.Select((tissue, index) => index > 0 && Admits(tissue.Kind))];
        var touching = new byte[nodes.Count];              // source elements around a node
        ReadOnlySpan<byte> cells = mesh.Volume.Cells;
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                for (int i = 0; i < grid.Nx; i++)
                {
                    if (_isSource[cells[grid.Index(i, j, k)]])
                    {
                        for (int pair = 0; pair < 4; pair++)
                        {
                            int at = nodes.IndexOf(i, j + (pair & 1), k + (pair >> 1));
                            touching[at]++;
                            touching[at + 1]++;
                        }
                    }
                }
            }
        }

        _nodes = touching;
        for (int n = 0; n < touching.Length; n++)
        {
            int count = touching[n];
            _nodes[n] = (byte)((count > 0 ? TouchesFlag : 0) | (count == TrilinearHexahedron.Corners ? WithinFlag : 0));
        }
    }

    /// <summary>Elements.</summary>
    public HexMesh Mesh { get; }

    /// <summary>True for the kinds of tissue in which a dipole may stand.</summary>
    public static bool Admits(TissueKind kind) => kind is TissueKind.Grey or TissueKind.White;

    /// <summary>True where a node belongs to an element of source tissue.</summary>
    public bool Touches(int node) => (_nodes[node] & TouchesFlag) != 0;

    /// <summary>True where all eight elements of a node are source tissue.</summary>
    public bool IsWithin(int node) => (_nodes[node] & WithinFlag) != 0;

    /// <summary>The voxel of source tissue that holds a point [m], by its position in memory.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The point stands in other tissue or outside the volume.</exception>
    public int VoxelAt(Vec3 position)
    {
        int voxel = Mesh.Volume.Grid.IndexAt(position);
        return voxel >= 0 && _isSource[Mesh.Volume.Cells[voxel]] ? voxel
            : throw new ArgumentOutOfRangeException(nameof(position), position, $"A dipole must stand in grey or white matter; this is {Mesh.Volume.At(position).Name}.");
    }
}
