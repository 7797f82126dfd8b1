using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Tests.References;

/// <summary>
/// Slow twin of the voxel head: the stiffness matrix as a list of rows in double precision, 2 x 2 x 2 Gauss points in every element, loads by the volume formulas, conjugate
/// gradients with the diagonal. Written from the textbook form of trilinear elements; kept plain.
/// </summary>
internal sealed class PlainHexSystem
{
    private static readonly double[] Gauss = [0.5 - 0.5 / Math.Sqrt(3), 0.5 + 0.5 / Math.Sqrt(3)];

    private readonly HexMesh _mesh;
    private readonly ConductivityTensors? _tensors;
    private readonly int[][] _columns;
    private readonly double[][] _values;
    private readonly double[] _diagonal;

    public PlainHexSystem(HexMesh mesh, ConductivityTensors? tensors = null)
    {
        (_mesh, _tensors) = (mesh, tensors);
        var rows = new SortedDictionary<int, double>[mesh.Nodes.Count];
        for (int n = 0; n < rows.Length; n++)
        {
            rows[n] = [];
        }

        ForEachPoint((nodes, gradients, weight, _, tensor) =>
        {
            for (int a = 0; a < 8; a++)
            {
                Vec3 current = weight * tensor.Apply(gradients[a]);
                for (int b = 0; b < 8; b++)
                {
                    rows[nodes[a]][nodes[b]] = rows[nodes[a]].GetValueOrDefault(nodes[b]) + Vec3.Dot(current, gradients[b]);
                }
            }
        });
        _columns = [.. rows.Select(r => r.Keys.ToArray())];
        _values = [.. rows.Select(r => r.Values.ToArray())];
        _diagonal = [.. rows.Select((r, n) => r.GetValueOrDefault(n, 1.0))];
    }

    /// <summary>K u.</summary>
    public double[] Times(double[] u) => [.. _columns.Select((columns, n) => columns.Zip(_values[n], (c, v) => v * u[c]).Sum())];

    /// <summary>K^+ f with mean zero over the nodes of elements; f is made to sum to zero.</summary>
    public double[] Solve(double[] load, double tolerance = 1e-11)
    {
        int n = load.Length;
        bool[] used = [.. _columns.Select(c => c.Length > 0)];
        double[] r = Centred(load, used), x = new double[n];
        double[] z = [.. r.Zip(_diagonal, (a, d) => a / d)], p = [.. z];
        double rz = Dot(r, z), goal = tolerance * tolerance * Dot(r, r);
        for (int step = 0; step < 20_000 && Dot(r, r) > goal; step++)
        {
            var q = new double[n];
            for (int i = 0; i < n; i++)
            {
                int[] columns = _columns[i];
                double[] values = _values[i];
                double sum = 0;
                for (int k = 0; k < columns.Length; k++)
                {
                    sum += values[k] * p[columns[k]];
                }

                q[i] = sum;
            }

            double alpha = rz / Dot(p, q);
            for (int i = 0; i < n; i++)
            {
                x[i] += alpha * p[i];
                r[i] -= alpha * q[i];
                z[i] = r[i] / _diagonal[i];
            }

            double next = Dot(r, z);
            for (int i = 0; i < n; i++)
            {
                p[i] = z[i] + next / rz * p[i];
            }

            rz = next;
        }

        return Centred(x, used);
    }

    /// <summary>Volume form of a channel's load: -mu0/(4 pi) int T grad psi . (R x d)/|R|^3.</summary>
    public double[] Coil(MegChannel channel)
    {
        var load = new double[_mesh.Nodes.Count];
        ForEachPoint((nodes, gradients, weight, place, tensor) =>
        {
            Vec3 field = Vec3.Zero;
            foreach (CoilPoint point in channel.Points)
            {
                Vec3 r = point.Position - place;
                field += point.Share * Si.Mu0Over4Pi / Math.Pow(r.Norm, 3) * Vec3.Cross(r, point.Axis);
            }

            Vec3 through = weight * tensor.Apply(field);
            for (int a = 0; a < 8; a++)
            {
                load[nodes[a]] -= Vec3.Dot(gradients[a], through);
            }
        });
        return load;
    }

    /// <summary>Field of a dipole's own current along a channel [T] or [T/m].</summary>
    public static double Primary(MegChannel channel, Vec3 position, Vec3 moment) => channel.Points.Sum(point =>
    {
        Vec3 r = point.Position - position;
        return Si.Mu0Over4Pi * point.Share * Vec3.Dot(Vec3.Cross(moment, r), point.Axis) / Math.Pow(r.Norm, 3);
    });

    public static double Dot(double[] a, double[] b)
    {
        double sum = 0;
        for (int i = 0; i < a.Length; i++)
        {
            sum += a[i] * b[i];
        }

        return sum;
    }

    private static double[] Centred(double[] values, bool[] used)
    {
        double mean = values.Where((_, n) => used[n]).Sum() / used.Count(u => u);
        return [.. values.Select((v, n) => used[n] ? v - mean : 0)];
    }

    private void ForEachPoint(Action<int[], Vec3[], double, Vec3, SymmetricTensor> visit)
    {
        VoxelGrid grid = _mesh.Volume.Grid;
        var nodes = new int[8];
        var places = new Vec3[8];
        var gradients = new Vec3[8];
        for (int cell = 0; cell < grid.Count; cell++)
        {
            if (_mesh.Volume.Cells[cell] == 0)
            {
                continue;
            }

            SymmetricTensor own = default;
            SymmetricTensor tensor = _tensors is not null && _tensors.TryGet(cell, out own) ? own
                : SymmetricTensor.Isotropic(_mesh.Volume.Tissues[_mesh.Volume.Cells[cell]].Conductivity);
            (int i, int j, int k) = grid.Voxel(cell);
            for (int c = 0; c < 8; c++)
            {
                int x = i + c % 2, y = j + c / 2 % 2, z = k + c / 4;
                nodes[c] = _mesh.Nodes.IndexOf(x, y, z);
                places[c] = _mesh.Position(x, y, z, nodes[c]);
            }

            for (int q = 0; q < 8; q++)
            {
                double u = Gauss[q % 2], v = Gauss[q / 2 % 2], w = Gauss[q / 4];
                Vec3 xu = Vec3.Zero, xv = Vec3.Zero, xw = Vec3.Zero, place = Vec3.Zero;
                var slopes = new Vec3[8];
                for (int c = 0; c < 8; c++)
                {
                    double fu = c % 2 == 1 ? u : 1 - u, fv = c / 2 % 2 == 1 ? v : 1 - v, fw = c / 4 == 1 ? w : 1 - w;
                    slopes[c] = new((c % 2 == 1 ? 1 : -1) * fv * fw, (c / 2 % 2 == 1 ? 1 : -1) * fu * fw, (c / 4 == 1 ? 1 : -1) * fu * fv);
                    place += fu * fv * fw * places[c];
                    xu += slopes[c].X * places[c];
                    xv += slopes[c].Y * places[c];
                    xw += slopes[c].Z * places[c];
                }

                double det = Vec3.Dot(xu, Vec3.Cross(xv, xw));
                for (int c = 0; c < 8; c++)
                {
                    gradients[c] = (slopes[c].X * Vec3.Cross(xv, xw) + slopes[c].Y * Vec3.Cross(xw, xu) + slopes[c].Z * Vec3.Cross(xu, xv)) / det;
                }

                visit(nodes, gradients, Math.Abs(det) / 8, place, tensor);
            }
        }
    }
}
