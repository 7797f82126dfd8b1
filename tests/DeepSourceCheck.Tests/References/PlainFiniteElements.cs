using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.References;

/// <summary>
/// Slow twin of the voxel solver, written from the textbook: every element integrated by itself with explicit 3 x 3 inverses, assembled into one matrix with the library's sparse
/// storage, solved by the library's Cholesky factor of the grounded matrix. Never to be tidied into the fast code.
/// </summary>
internal static class PlainFiniteElements
{
    /// <summary>K of all nodes of a mesh [S]; rows of nodes without an element are zero.</summary>
    public static Matrix<double> Stiffness(HexMesh mesh, ConductivityTensors? tensors = null)
    {
        Matrix<double> k = Matrix<double>.Build.Sparse(mesh.Nodes.Count, mesh.Nodes.Count);
        foreach ((int[] nodes, Vec3[] corners, Matrix<double> sigma) in Elements(mesh, tensors))
        {
            Matrix<double> element = Element(corners, sigma);
            for (int a = 0; a < 8; a++)
            {
                for (int b = 0; b < 8; b++)
                {
                    k[nodes[a], nodes[b]] += element[a, b];
                }
            }
        }

        return k;
    }

    /// <summary>Nodes, corners and conductivity matrix of every element.</summary>
    public static IEnumerable<(int[] Nodes, Vec3[] Corners, Matrix<double> Sigma)> Elements(HexMesh mesh, ConductivityTensors? tensors = null)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        for (int voxel = 0; voxel < grid.Count; voxel++)
        {
            byte tissue = mesh.Volume.Cells[voxel];
            if (tissue == 0)
            {
                continue;
            }

            (int i, int j, int k) = grid.Voxel(voxel);
            var nodes = new int[8];
            var corners = new Vec3[8];
            for (int c = 0; c < 8; c++)
            {
                (int x, int y, int z) = (i + c % 2, j + c / 2 % 2, k + c / 4);
                nodes[c] = mesh.Nodes.IndexOf(x, y, z);
                corners[c] = mesh.Position(x, y, z, nodes[c]);
            }

            double s = mesh.Volume.Tissues[tissue].Conductivity;
            SymmetricTensor t = tensors is not null && tensors.TryGet(voxel, out SymmetricTensor own) ? own : new(s, 0, s, 0, 0, s);
            yield return (nodes, corners, Matrix<double>.Build.DenseOfArray(new[,] { { t.Xx, t.Xy, t.Xz }, { t.Xy, t.Yy, t.Yz }, { t.Xz, t.Yz, t.Zz } }));
        }
    }

    /// <summary>sum over 2 x 2 x 2 Gauss points of B' sigma B |det J| / 8 with B = J^-T grad N.</summary>
    public static Matrix<double> Element(Vec3[] corners, Matrix<double> sigma)
    {
        Matrix<double> k = Matrix<double>.Build.Dense(8, 8);
        double g = 1 / Math.Sqrt(3);
        foreach ((double x, double y, double z) in from x in new[] { -g, g } from y in new[] { -g, g } from z in new[] { -g, g } select (x, y, z))
        {
            Matrix<double> reference = Matrix<double>.Build.Dense(3, 8, (axis, c) =>
            {
                double sx = c % 2 == 0 ? -1 : 1, sy = c / 2 % 2 == 0 ? -1 : 1, sz = c / 4 == 0 ? -1 : 1;
                return axis switch
                {
                    0 => sx * (1 + sy * y) * (1 + sz * z) / 8,
                    1 => sy * (1 + sx * x) * (1 + sz * z) / 8,
                    _ => sz * (1 + sx * x) * (1 + sy * y) / 8,
                };
            });
            Matrix<double> places = Matrix<double>.Build.Dense(8, 3, (c, axis) => corners[c][axis]);
            Matrix<double> jacobian = reference * places;
            Matrix<double> b = jacobian.Inverse() * reference;
            k += b.Transpose() * sigma * b * Math.Abs(jacobian.Determinant());
        }

        return k;
    }

    /// <summary>The solution of K u = b with mean zero over the nodes that have elements; one connected piece.</summary>
    public static double[] Solve(Matrix<double> stiffness, double[] load)
    {
        int[] live = [.. Enumerable.Range(0, load.Length).Where(n => stiffness[n, n] > 0)];
        Matrix<double> grounded = Matrix<double>.Build.Dense(live.Length - 1, live.Length - 1, (i, j) => stiffness[live[i + 1], live[j + 1]]);
        Vector<double> u = grounded.Cholesky().Solve(Vector<double>.Build.Dense(live.Length - 1, i => load[live[i + 1]]));
        double mean = u.Sum() / live.Length;
        var result = new double[load.Length];
        for (int i = 0; i < live.Length; i++)
        {
            result[live[i]] = (i == 0 ? 0 : u[i - 1]) - mean;
        }

        return result;
    }
}
