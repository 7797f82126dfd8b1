using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Tests.Core.Leadfields.Voxels;

namespace DeepSourceCheck.Verification.Voxels;

/// <summary>
/// Convergence to a solution that is known: u = cos(pi a) cos(pi b) cos(pi c) over a box, (a, b, c) from 0 to 1 along its axes. The conductivity tensor is chosen so that no current of u
/// crosses the faces. Order 2 in L2 and 1 in H1 is the theory of trilinear elements (Strang and Fix 1973, chapter 3).
/// </summary>
public class ManufacturedSolutionTests
{
    /// <summary>Least orders over the last two halvings; theory says 2 and 1.</summary>
    private const double LeastL2 = 1.9, LeastH1 = 0.95;

    [Theory]
    [InlineData("cubes")]
    [InlineData("oblique")]
    [InlineData("moved")]
    public void Solve_ConvergesAtTheOrderOfTheElements(string kind)
    {
        (double L2, double H1)[] errors = [.. new[] { 1, 2, 4, 8 }.Select(refine => Errors(kind, refine))];
        for (int k = 2; k < errors.Length; k++)
        {
            double l2 = Math.Log2(errors[k - 1].L2 / errors[k].L2), h1 = Math.Log2(errors[k - 1].H1 / errors[k].H1);
            string table = string.Join("; ", errors.Select(e => string.Create(CultureInfo.InvariantCulture, $"{e.L2:0.00e+0} {e.H1:0.00e+0}")));
            Assert.True(l2 >= LeastL2 && h1 >= LeastH1, string.Create(CultureInfo.InvariantCulture, $"{kind}: orders {l2:0.00} and {h1:0.00}; errors {table}"));
        }
    }

    private static (double L2, double H1) Errors(string kind, int refine)
    {
        (int nx, int ny, int nz) = (6 * refine, 5 * refine, 7 * refine);
        var edge = new Vec3(0.06, 0.05, 0.07);
        Vec3[] columns = kind == "oblique"
            ? [new(0.05, 0.02, -0.01), new(-0.015, 0.045, 0.01), new(0.01, -0.02, 0.066)]
            : [new(edge.X, 0, 0), new(0, edge.Y, 0), new(0, 0, edge.Z)];
        Vec3 origin = new(0.01, 0.02, -0.03);
        Affine box = Map(columns, origin), map = Map([columns[0] / nx, columns[1] / ny, columns[2] / nz], box.Apply(new(0.5 / nx, 0.5 / ny, 0.5 / nz)));
        var volume = new TissueVolume(new VoxelGrid(nx, ny, nz, map), [.. Enumerable.Repeat((byte)1, nx * ny * nz)], [MeshHeads.Tissues[0], MeshHeads.Tissues[4] with { Conductivity = 0.33 }]);
        HexMesh mesh = HexMesh.Plain(volume);
        Affine back = box.Inverse();
        if (kind == "moved")
        {
            mesh = mesh.Adapted([.. Enumerable.Range(0, mesh.Nodes.Count).Select(n => Shift(mesh, n, edge))]);
        }

        ConductivityTensors? tensors = kind == "oblique" ? Uniform(volume, columns) : null;
        SymmetricTensor sigma = kind == "oblique" && tensors!.TryGet(0, out SymmetricTensor t) ? t : SymmetricTensor.Isotropic(0.33);
        var solver = new VoxelSolver(mesh, tensors, threads: 2);
        var load = new double[mesh.Nodes.Count];
        ForGaussPoints(mesh, (nodes, shapes, _, place, weight) =>
        {
            double source = Source(back.Apply(place), back, sigma);
            for (int c = 0; c < 8; c++)
            {
                load[nodes[c]] += weight * source * shapes[c];
            }
        });
        double mean = load.Average();
        (double[][] potentials, _) = MeshHeads.Solve(solver, [[.. load.Select(v => v - mean)]]);

        // Both are defined but for a constant: the means over the volume are taken off.
        (double l2, double h1, double offset, double all, double size, double slope) = (0, 0, 0, 0, 0, 0);
        ForGaussPoints(mesh, (nodes, shapes, _, place, weight) =>
        {
            offset += weight * (Enumerable.Range(0, 8).Sum(c => shapes[c] * potentials[0][nodes[c]]) - Exact(back.Apply(place)));
            all += weight;
        });
        ForGaussPoints(mesh, (nodes, shapes, gradients, place, weight) =>
        {
            Vec3 at = back.Apply(place), gradient = ExactGradient(at, back), difference = -gradient;
            double error = -offset / all - Exact(at);
            for (int c = 0; c < 8; c++)
            {
                error += shapes[c] * potentials[0][nodes[c]];
                difference += potentials[0][nodes[c]] * gradients[c];
            }

            l2 += weight * error * error;
            h1 += weight * Vec3.Dot(difference, difference);
            size += weight * Exact(at) * Exact(at);
            slope += weight * Vec3.Dot(gradient, gradient);
        });
        return (Math.Sqrt(l2 / size), Math.Sqrt(h1 / slope));
    }

    /// <summary>A smooth move that keeps the faces in their planes.</summary>
    private static Vec3 Shift(HexMesh mesh, int node, Vec3 edge)
    {
        (int x, int y, int z) = mesh.Nodes.Node(node);
        double a = (double)x / (mesh.Nodes.Nx - 1), b = (double)y / (mesh.Nodes.Ny - 1), c = (double)z / (mesh.Nodes.Nz - 1);
        double wave = 0.06 * Math.Sin(Math.PI * a) * Math.Sin(Math.PI * b) * Math.Sin(Math.PI * c);
        return new(edge.X * wave, -edge.Y * wave, edge.Z * wave);
    }

    /// <summary>The same tensor in every voxel: sigma = 0.33 sum_k c_k c_k' / |c_k|^2 over the box's columns, which sends the flux of a gradient along an axis of the box along that axis.</summary>
    private static ConductivityTensors Uniform(TissueVolume volume, Vec3[] columns)
    {
        var sum = new double[6];
        foreach (Vec3 c in columns)
        {
            double[] outer = [c.X * c.X, c.X * c.Y, c.Y * c.Y, c.X * c.Z, c.Y * c.Z, c.Z * c.Z];
            for (int k = 0; k < 6; k++)
            {
                sum[k] += 0.33 * outer[k] / Vec3.Dot(c, c);
            }
        }

        var has = new ulong[(volume.Grid.Count + 63) / 64];
        for (int v = 0; v < volume.Grid.Count; v++)
        {
            has[v >> 6] |= 1UL << v;
        }

        return new(has, [.. Enumerable.Range(0, 6 * volume.Grid.Count).Select(n => (float)sum[n % 6])]);
    }

    private static double Exact(Vec3 a) => Math.Cos(Math.PI * a.X) * Math.Cos(Math.PI * a.Y) * Math.Cos(Math.PI * a.Z);

    private static Vec3 ExactGradient(Vec3 a, Affine back)
    {
        double cx = Math.Cos(Math.PI * a.X), cy = Math.Cos(Math.PI * a.Y), cz = Math.Cos(Math.PI * a.Z);
        Vec3 own = -Math.PI * new Vec3(Math.Sin(Math.PI * a.X) * cy * cz, Math.Sin(Math.PI * a.Y) * cx * cz, Math.Sin(Math.PI * a.Z) * cx * cy);
        return own.X * back.Row0 + own.Y * back.Row1 + own.Z * back.Row2;
    }

    /// <summary>-div sigma grad u: the tensor in the box's axes is diagonal, each axis adds pi^2 times its entry times u.</summary>
    private static double Source(Vec3 a, Affine back, SymmetricTensor sigma) =>
        Math.PI * Math.PI * Exact(a) * (Vec3.Dot(back.Row0, sigma.Apply(back.Row0)) + Vec3.Dot(back.Row1, sigma.Apply(back.Row1)) + Vec3.Dot(back.Row2, sigma.Apply(back.Row2)));

    private delegate void AtPoint(int[] nodes, double[] shapes, Vec3[] gradients, Vec3 place, double weight);

    /// <summary>3 x 3 x 3 Gauss points of every element, with shape functions and their gradients written out here.</summary>
    private static void ForGaussPoints(HexMesh mesh, AtPoint visit)
    {
        (double, double)[] rule = [(0.5 - 0.5 * Math.Sqrt(0.6), 5 / 18.0), (0.5, 8 / 18.0), (0.5 + 0.5 * Math.Sqrt(0.6), 5 / 18.0)];
        VoxelGrid grid = mesh.Volume.Grid;
        var nodes = new int[8];
        var corners = new Vec3[8];
        var shapes = new double[8];
        var slopes = new Vec3[8];
        var gradients = new Vec3[8];
        for (int v = 0; v < grid.Count; v++)
        {
            (int i, int j, int k) = grid.Voxel(v);
            for (int c = 0; c < 8; c++)
            {
                nodes[c] = mesh.Nodes.IndexOf(i + c % 2, j + c / 2 % 2, k + c / 4);
                corners[c] = mesh.Position(i + c % 2, j + c / 2 % 2, k + c / 4, nodes[c]);
            }

            foreach ((double x, double wx) in rule)
            {
                foreach ((double y, double wy) in rule)
                {
                    foreach ((double z, double wz) in rule)
                    {
                        (Vec3 place, Vec3 jx, Vec3 jy, Vec3 jz) = (Vec3.Zero, Vec3.Zero, Vec3.Zero, Vec3.Zero);
                        for (int c = 0; c < 8; c++)
                        {
                            double px = c % 2 == 0 ? 1 - x : x, py = c / 2 % 2 == 0 ? 1 - y : y, pz = c / 4 == 0 ? 1 - z : z;
                            shapes[c] = px * py * pz;
                            slopes[c] = new((c % 2 == 0 ? -1 : 1) * py * pz, (c / 2 % 2 == 0 ? -1 : 1) * px * pz, (c / 4 == 0 ? -1 : 1) * px * py);
                            place += shapes[c] * corners[c];
                            (jx, jy, jz) = (jx + slopes[c].X * corners[c], jy + slopes[c].Y * corners[c], jz + slopes[c].Z * corners[c]);
                        }

                        double determinant = Vec3.Dot(jx, Vec3.Cross(jy, jz));
                        for (int c = 0; c < 8; c++)
                        {
                            gradients[c] = (slopes[c].X * Vec3.Cross(jy, jz) + slopes[c].Y * Vec3.Cross(jz, jx) + slopes[c].Z * Vec3.Cross(jx, jy)) / determinant;
                        }

                        visit(nodes, shapes, gradients, place, wx * wy * wz * Math.Abs(determinant));
                    }
                }
            }
        }
    }

    private static Affine Map(Vec3[] c, Vec3 offset) => new(new(c[0].X, c[1].X, c[2].X), new(c[0].Y, c[1].Y, c[2].Y), new(c[0].Z, c[1].Z, c[2].Z), offset);
}
