using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// ElectrodeLoad.cs - right-hand sides of electrodes.
//   r_e = psi(x_e) - s,  s_n = (1/A) sum over exposed faces of the integral of psi_n:  the potential at x_e minus its mean over the surface of the conductor it stands on.
//   x_e: the place of the conductor nearest to the electrode. psi(x_e) has at most eight entries, the trilinear weights of that place.
// Source: [Weinstein et al. 2000], the lead field basis by reciprocity; interpolation in the element in place of its nearest node.

/// <summary>Right-hand sides that read the potential at electrodes, on the scalp or within the head.</summary>
/// <remarks>
/// Every electrode stands against the mean potential of the surface, as those of a sphere do: a common term that any reference removes. The surface is every face between a
/// voxel and air, cavities included, of the connected piece that the electrode stands on; a face counts by the area of its plain voxel. Values without unit. Immutable.
/// </remarks>
public sealed class ElectrodeLoad
{
    private const int Corners = TrilinearHexahedron.Corners;

    private readonly int[] _nodes, _pieceOf;
    private readonly double[] _weights, _moved;
    private readonly (int Node, float Share)[][] _surfaces;

    /// <param name="mesh">Elements.</param>
    /// <param name="electrodes">Electrodes, at the scalp or at a place within the head.</param>
    /// <exception cref="ArgumentException">An electrode's place is not finite.</exception>
    public ElectrodeLoad(HexMesh mesh, IReadOnlyList<Electrode> electrodes)
    {
        _nodes = new int[electrodes.Count * Corners];
        _weights = new double[electrodes.Count * Corners];
        _moved = new double[electrodes.Count];
        _pieceOf = new int[electrodes.Count];
        ConductorPieces pieces = new(mesh);
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
            _pieceOf[e] = pieces.Of(_nodes[e * Corners]);
        }

        _surfaces = electrodes.Count > 0 ? Surfaces(mesh, pieces) : [];
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
        int end = first + count;
        for (int e = first; e < end;)
        {
            int same = e + 1;                                // electrodes on one piece share its surface: all of them, but in a volume with islands
            while (same < end && _pieceOf[same] == _pieceOf[e])
            {
                same++;
            }

            foreach ((int node, float share) in _surfaces[_pieceOf[e]])
            {
                values.Slice(node * ILoadBlocks.Lanes + lane + e - first, same - e).Fill(-share);
            }

            e = same;
        }

        for (int e = first; e < end; e++)
        {
            for (int c = 0; c < Corners; c++)
            {
                values[_nodes[e * Corners + c] * ILoadBlocks.Lanes + lane + e - first] += (float)_weights[e * Corners + c];
            }
        }
    }

    // By piece: a quarter of every exposed face to each of its corners, by area, over the whole.
    private static (int Node, float Share)[][] Surfaces(HexMesh mesh, ConductorPieces pieces)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        Vec3 x = grid.ToWorld.Column(0), y = grid.ToWorld.Column(1), z = grid.ToWorld.Column(2);
        Span<double> areas = [Vec3.Cross(y, z).Norm, Vec3.Cross(z, x).Norm, Vec3.Cross(x, y).Norm];
        var sums = new double[mesh.Nodes.Count];
        for (int cell = 0; cell < grid.Count; cell++)
        {
            if (mesh.Volume.Cells[cell] == 0)
            {
                continue;
            }

            (int i, int j, int k) = grid.Voxel(cell);
            for (int face = 0; face < 6; face++)
            {
                int axis = face >> 1, side = face & 1, step = 2 * side - 1;
                bool exposed = IsAir(mesh.Volume, i + (axis == 0 ? step : 0), j + (axis == 1 ? step : 0), k + (axis == 2 ? step : 0));
                for (int c = 0; exposed && c < Corners; c++)
                {
                    if ((c >> axis & 1) == side)
                    {
                        sums[mesh.Nodes.IndexOf(i + (c & 1), j + (c >> 1 & 1), k + (c >> 2))] += areas[axis] / 4;
                    }
                }
            }
        }

        var totals = new double[pieces.Count];
        for (int n = 0; n < sums.Length; n++)
        {
            if (sums[n] > 0)
            {
                totals[pieces.Of(n)] += sums[n];
            }
        }

        ILookup<int, int> touched = Enumerable.Range(0, sums.Length).Where(n => sums[n] > 0).ToLookup(pieces.Of);
        return [.. totals.Select((total, piece) => touched[piece].Select(n => (n, (float)(sums[n] / total))).ToArray())];
    }

    private static bool IsAir(TissueVolume volume, int i, int j, int k)
    {
        VoxelGrid grid = volume.Grid;
        return (uint)i >= (uint)grid.Nx || (uint)j >= (uint)grid.Ny || (uint)k >= (uint)grid.Nz || volume.Cells[grid.Index(i, j, k)] == 0;
    }
}
