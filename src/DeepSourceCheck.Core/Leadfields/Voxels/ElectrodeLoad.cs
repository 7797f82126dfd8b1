using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// ElectrodeLoad.cs - right-hand sides of electrodes.
//   r_e = psi(x_e) - s,  s_n = (1/A) sum over exposed faces of the integral of psi_n:  the potential at x_e minus its mean over the head's surface.
//   x_e: the place of the conductor nearest to the electrode. psi(x_e) has at most eight entries, the trilinear weights of that place.
// Source: [Weinstein et al. 2000], the lead field basis by reciprocity; interpolation in the element in place of its nearest node.

/// <summary>Right-hand sides that read the potential at electrodes, on the scalp or within the head.</summary>
/// <remarks>
/// Every electrode stands against the mean potential of the surface, as those of a sphere do: a common term that any reference removes. The surface is every face between a
/// voxel and air, cavities included; all faces along one axis count by their plain area. Values without unit. Immutable.
/// </remarks>
public sealed class ElectrodeLoad
{
    private const int Corners = TrilinearHexahedron.Corners;

    private readonly int[] _nodes;
    private readonly double[] _weights, _moved;
    private readonly int[] _surfaceNodes;
    private readonly float[] _surfaceShares;

    /// <param name="mesh">Elements.</param>
    /// <param name="electrodes">Electrodes, at the scalp or at a place within the head.</param>
    /// <exception cref="ArgumentException">An electrode's place is not finite.</exception>
    public ElectrodeLoad(HexMesh mesh, IReadOnlyList<Electrode> electrodes)
    {
        _nodes = new int[electrodes.Count * Corners];
        _weights = new double[electrodes.Count * Corners];
        _moved = new double[electrodes.Count];
        NearestElement conductor = new(mesh, _ => true);
        Span<Vec3> places = stackalloc Vec3[Corners];
        for (int e = 0; e < electrodes.Count; e++)
        {
            if (!electrodes[e].Position.IsFinite)
            {
                throw new ArgumentException($"Electrode {electrodes[e].Name} stands at a place that is not a number.", nameof(electrodes));
            }

            ElementPlace at = conductor.Find(electrodes[e].Position);
            TrilinearHexahedron.Load(mesh, at.I, at.J, at.K, _nodes.AsSpan(e * Corners, Corners), places);
            TrilinearHexahedron.Shape(at.Natural, _weights.AsSpan(e * Corners, Corners));
            _moved[e] = at.Distance;
        }

        (_surfaceNodes, _surfaceShares) = electrodes.Count > 0 ? Surface(mesh) : ([], []);
    }

    /// <summary>Number of electrodes.</summary>
    public int Count => _moved.Length;

    /// <summary>How far each electrode was moved to the nearest place of the conductor [m]: 0 inside, some tenths of a voxel on a staircase.</summary>
    public ReadOnlySpan<double> Moved => _moved;

    /// <summary>Nodes of the element that holds electrode <paramref name="e"/>.</summary>
    public ReadOnlySpan<int> NodesOf(int e) => _nodes.AsSpan(e * Corners, Corners);

    /// <summary>Trilinear weights of those nodes, without unit, summing to 1.</summary>
    public ReadOnlySpan<double> WeightsOf(int e) => _weights.AsSpan(e * Corners, Corners);

    /// <summary>Adds the right-hand sides of electrodes from <paramref name="first"/> on to a block whose lanes are zero there.</summary>
    /// <param name="first">First electrode.</param>
    /// <param name="count">Electrodes.</param>
    /// <param name="lane">Lane of the first.</param>
    /// <param name="values">[node][16 lanes].</param>
    public void Add(int first, int count, int lane, Span<float> values)
    {
        for (int n = 0; n < _surfaceNodes.Length; n++)
        {
            values.Slice(_surfaceNodes[n] * ILoadBlocks.Lanes + lane, count).Fill(-_surfaceShares[n]);
        }

        for (int e = first; e < first + count; e++)
        {
            for (int c = 0; c < Corners; c++)
            {
                values[_nodes[e * Corners + c] * ILoadBlocks.Lanes + lane + e - first] += (float)_weights[e * Corners + c];
            }
        }
    }

    // A quarter of every exposed face to each of its corners, by area.
    private static (int[] Nodes, float[] Shares) Surface(HexMesh mesh)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        RowGrid nodes = mesh.Nodes;
        ReadOnlySpan<byte> cells = mesh.Volume.Cells;
        Vec3 x = grid.ToWorld.Column(0), y = grid.ToWorld.Column(1), z = grid.ToWorld.Column(2);
        Span<double> areas = [Vec3.Cross(y, z).Norm, Vec3.Cross(z, x).Norm, Vec3.Cross(x, y).Norm];
        var sums = new double[nodes.Count];
        double total = 0;
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                for (int i = 0; i < grid.Nx; i++)
                {
                    if (cells[grid.Index(i, j, k)] == 0)
                    {
                        continue;
                    }

                    for (int face = 0; face < 6; face++)
                    {
                        int axis = face >> 1, side = face & 1, step = 2 * side - 1;
                        int ni = i + (axis == 0 ? step : 0), nj = j + (axis == 1 ? step : 0), nk = k + (axis == 2 ? step : 0);
                        bool exposed = (uint)ni >= (uint)grid.Nx || (uint)nj >= (uint)grid.Ny || (uint)nk >= (uint)grid.Nz || cells[grid.Index(ni, nj, nk)] == 0;
                        for (int c = 0; exposed && c < Corners; c++)
                        {
                            if ((c >> axis & 1) == side)
                            {
                                sums[nodes.IndexOf(i + (c & 1), j + (c >> 1 & 1), k + (c >> 2))] += areas[axis] / 4;
                            }
                        }

                        total += exposed ? areas[axis] : 0;
                    }
                }
            }
        }

        int[] touched = [.. Enumerable.Range(0, sums.Length).Where(n => sums[n] > 0)];
        return (touched, [.. touched.Select(n => (float)(sums[n] / total))]);
    }
}
