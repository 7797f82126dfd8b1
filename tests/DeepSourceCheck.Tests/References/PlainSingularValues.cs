using DeepSourceCheck.Core.Geometry;

using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Factorization;

namespace DeepSourceCheck.Tests.References;

/// <summary>Singular values and vectors by a general-purpose library (MathNet.Numerics): the slow twin of the split.</summary>
internal static class PlainSingularValues
{
    /// <summary>Singular values, descending, and right singular vectors of a matrix given as [row * 3 + axis], rows at least 3.</summary>
    public static (double[] Values, Vec3[] Vectors) Of(double[] matrix)
    {
        // The library's convergence test turns absolute for small numbers: it is given a matrix whose largest entry is 1.
        double scale = matrix.Max(Math.Abs);
        Svd<double> svd = Matrix<double>.Build.DenseOfRowMajor(matrix.Length / 3, 3, [.. matrix.Select(v => v / scale)]).Svd(true);
        return ([.. svd.S.Select(s => scale * s)], [.. Enumerable.Range(0, 3).Select(k => new Vec3(svd.VT[k, 0], svd.VT[k, 1], svd.VT[k, 2]))]);
    }

    /// <summary>Angle [rad] between two unit vectors up to sign.</summary>
    public static double Angle(Vec3 a, Vec3 b) => Math.Asin(Math.Min(1, Vec3.Cross(a, b).Norm));
}
