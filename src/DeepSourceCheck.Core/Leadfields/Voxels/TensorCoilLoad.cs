using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// TensorCoilLoad.cs - the part of a coil's load that elements with a conductivity tensor T bear.
//   r_j = -sum over 2 x 2 x 2 points q of w_q |det J_q| grad psi_j(q) . T g(x_q),  without mu0/(4 pi), see CoilLoad.

/// <summary>Volume form of a coil's load on the elements that have a tensor.</summary>
/// <remarks>Gradients are those of the plain voxel but for elements with a moved corner. Immutable.</remarks>
internal sealed class TensorCoilLoad
{
    private const int Corners = TrilinearHexahedron.Corners, PointsPerElement = 8;

    private readonly HexMesh _mesh;
    private readonly Vec3 _origin;
    private readonly (int I, int J, int K)[] _cells;
    private readonly SymmetricTensor[] _tensors;
    private readonly float[] _plain;

    /// <param name="mesh">Elements.</param>
    /// <param name="tensors">Tensors of some voxels; those of air are left out.</param>
    /// <param name="origin">Place that coils are relative to [m].</param>
    public TensorCoilLoad(HexMesh mesh, ConductivityTensors tensors, Vec3 origin)
    {
        (_mesh, _origin) = (mesh, origin);
        VoxelGrid grid = mesh.Volume.Grid;
        List<(int, int, int)> cells = [];
        List<SymmetricTensor> values = [];
        for (int cell = 0; cell < grid.Count; cell++)
        {
            if (mesh.Volume.Cells[cell] != 0 && tensors.TryGet(cell, out SymmetricTensor tensor))
            {
                cells.Add(grid.Voxel(cell));
                values.Add(tensor);
            }
        }

        (_cells, _tensors) = ([.. cells], [.. values]);
        Span<Vec3> places = stackalloc Vec3[Corners];
        for (int c = 0; c < Corners; c++)
        {
            places[c] = grid.ToWorld.Apply(new((c & 1) - 0.5, (c >> 1 & 1) - 0.5, (c >> 2) - 0.5));
        }

        _plain = new float[PointsPerElement * Corners * 3];
        Gradients(places, _plain);
    }

    /// <summary>Adds the elements' part to a block.</summary>
    /// <param name="coils">Table of coil points, see <see cref="CoilLoad"/>.</param>
    /// <param name="points">Points of a channel.</param>
    /// <param name="values">One vector of sixteen channels a node.</param>
    public void Add(ReadOnlySpan<Vector512<float>> coils, int points, Span<Vector512<float>> values)
    {
        ref Vector512<float> coil = ref MemoryMarshal.GetReference(coils);
        Span<int> nodes = stackalloc int[Corners];
        Span<Vec3> places = stackalloc Vec3[Corners];
        Span<float> own = stackalloc float[PointsPerElement * Corners * 3];
        Span<Vector512<float>> sums = stackalloc Vector512<float>[Corners];
        for (int n = 0; n < _cells.Length; n++)
        {
            (int i, int j, int k) = _cells[n];
            TrilinearHexahedron.Load(_mesh, i, j, k, nodes, places);
            bool moved = false;
            for (int c = 0; _mesh.IsAdapted && c < Corners; c++)
            {
                moved |= _mesh.Shift(nodes[c]) != Vec3.Zero;
            }

            if (moved)
            {
                Gradients(places, own);
            }

            ref float gradient = ref MemoryMarshal.GetReference(moved ? own : _plain);
            SymmetricTensor t = _tensors[n];
            sums.Clear();
            for (int q = 0; q < PointsPerElement; q++)
            {
                (double x, double y, double z) = TrilinearHexahedron.Place(places, GaussPoint(q)) - _origin;
                CoilLoad.Field(ref coil, points, Vector512.Create((float)x), Vector512.Create((float)y), Vector512.Create((float)z),
                    out Vector512<float> gx, out Vector512<float> gy, out Vector512<float> gz);
                Vector512<float> jx = gx * (float)t.Xx + gy * (float)t.Xy + gz * (float)t.Xz;
                Vector512<float> jy = gx * (float)t.Xy + gy * (float)t.Yy + gz * (float)t.Yz;
                Vector512<float> jz = gx * (float)t.Xz + gy * (float)t.Yz + gz * (float)t.Zz;
                for (int c = 0; c < Corners; c++)
                {
                    sums[c] += jx * gradient + jy * Unsafe.Add(ref gradient, 1) + jz * Unsafe.Add(ref gradient, 2);
                    gradient = ref Unsafe.Add(ref gradient, 3);
                }
            }

            for (int c = 0; c < Corners; c++)
            {
                values[nodes[c]] -= sums[c];
            }
        }
    }

    private static Vec3 GaussPoint(int q) => new(
        (q & 1) == 0 ? TrilinearHexahedron.GaussLow : TrilinearHexahedron.GaussHigh,
        (q & 2) == 0 ? TrilinearHexahedron.GaussLow : TrilinearHexahedron.GaussHigh,
        (q & 4) == 0 ? TrilinearHexahedron.GaussLow : TrilinearHexahedron.GaussHigh);

    // [point][corner][axis]: |det J|/8 grad psi.
    private static void Gradients(ReadOnlySpan<Vec3> places, Span<float> table)
    {
        Span<Vec3> gradients = stackalloc Vec3[Corners];
        for (int q = 0; q < PointsPerElement; q++)
        {
            double weight = Math.Abs(TrilinearHexahedron.Gradients(places, GaussPoint(q), gradients)) / PointsPerElement;
            for (int c = 0; c < Corners; c++)
            {
                for (int axis = 0; axis < 3; axis++)
                {
                    table[(q * Corners + c) * 3 + axis] = (float)(weight * gradients[c][axis]);
                }
            }
        }
    }
}
