using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>A place in the conductor: an element and natural coordinates in it.</summary>
/// <param name="I">Voxel along the first axis.</param>
/// <param name="J">Voxel along the second axis.</param>
/// <param name="K">Voxel along the third axis.</param>
/// <param name="Natural">Natural coordinates from 0 to 1, without unit.</param>
/// <param name="Distance">How far the place lies from the point that was asked for [m]; 0 where that lies in the conductor.</param>
public readonly record struct ElementPlace(int I, int J, int K, Vec3 Natural, double Distance);

/// <summary>Finds the element that holds a point, or the nearest place of the conductor where none does. Works on adapted, oblique and non-cubic grids.</summary>
public sealed class NearestElement
{
    /// <summary>Nodes are moved by less than this share of a voxel.</summary>
    private const double LargestShift = 0.5;

    private readonly HexMesh _mesh;
    private readonly Affine _toVoxels;
    private readonly bool[] _admitted;
    private readonly double _thickness, _reach;

    /// <param name="mesh">Elements.</param>
    /// <param name="admits">Which kinds of tissue count; air never does.</param>
    public NearestElement(HexMesh mesh, Func<TissueKind, bool> admits)
    {
        _mesh = mesh;
        VoxelGrid grid = mesh.Volume.Grid;
        _toVoxels = grid.ToWorld.Inverse();
        _admitted = [.. mesh.Volume.Tissues.Select((tissue, index) => index > 0 && admits(tissue.Kind))];

        // Planes of voxels stand 1/|row of the inverse| apart.
        _thickness = 1 / Math.Max(_toVoxels.Row0.Norm, Math.Max(_toVoxels.Row1.Norm, _toVoxels.Row2.Norm));
        Vec3 a = grid.ToWorld.Column(0), b = grid.ToWorld.Column(1), c = grid.ToWorld.Column(2);
        _reach = (0.5 + LargestShift) * Math.Max(Math.Max((a + b + c).Norm, (a + b - c).Norm), Math.Max((a - b + c).Norm, (a - b - c).Norm));
    }

    /// <summary>The place of the admitted tissue nearest to a point [m]; the first element in memory among equals.</summary>
    /// <exception cref="ArgumentException">The point is not finite, or no voxel is admitted.</exception>
    public ElementPlace Find(Vec3 point)
    {
        if (!point.IsFinite)
        {
            throw new ArgumentException("The point has a coordinate that is not a number.", nameof(point));
        }

        VoxelGrid grid = _mesh.Volume.Grid;
        (double x, double y, double z) = _toVoxels.Apply(point);
        int i0 = Nearest(x, grid.Nx), j0 = Nearest(y, grid.Ny), k0 = Nearest(z, grid.Nz);
        int most = Math.Max(grid.Nx, Math.Max(grid.Ny, grid.Nz));
        ElementPlace? best = null;
        for (int shell = 0; shell <= most; shell++)
        {
            if (best is { } found && (shell - 1 - LargestShift) * _thickness > found.Distance)
            {
                break;
            }

            for (int k = Math.Max(0, k0 - shell); k <= Math.Min(grid.Nz - 1, k0 + shell); k++)
            {
                for (int j = Math.Max(0, j0 - shell); j <= Math.Min(grid.Ny - 1, j0 + shell); j++)
                {
                    bool whole = Math.Abs(k - k0) == shell || Math.Abs(j - j0) == shell;
                    int stride = whole || shell == 0 ? 1 : 2 * shell;
                    for (int i = i0 - shell; i <= i0 + shell; i += stride)
                    {
                        if ((uint)i < (uint)grid.Nx && _admitted[_mesh.Volume.Cells[grid.Index(i, j, k)]])
                        {
                            Consider(point, i, j, k, ref best);
                        }
                    }
                }
            }
        }

        return best ?? throw new ArgumentException("The head has no voxel of the tissues asked for.", nameof(point));
    }

    private void Consider(Vec3 point, int i, int j, int k, ref ElementPlace? best)
    {
        if (best is { } found && (found.Distance == 0 || (point - _mesh.Volume.Grid.Centre(i, j, k)).Norm - _reach > found.Distance))
        {
            return;
        }

        Span<int> nodes = stackalloc int[TrilinearHexahedron.Corners];
        Span<Vec3> places = stackalloc Vec3[TrilinearHexahedron.Corners];
        TrilinearHexahedron.Load(_mesh, i, j, k, nodes, places);
        (Vec3 natural, double distance) = TrilinearHexahedron.Nearest(places, point);
        if (best is not { } old || distance < old.Distance)
        {
            best = new(i, j, k, natural, distance);
        }
    }

    private static int Nearest(double coordinate, int count) => (int)Math.Clamp(Math.Floor(coordinate + (0.5 + VoxelGrid.BorderTolerance)), 0, count - 1);
}
