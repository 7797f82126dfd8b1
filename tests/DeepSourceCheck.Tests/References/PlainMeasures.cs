using DeepSourceCheck.Core.Geometry;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.References;

/// <summary>
/// The measures of one dipole, written out with dense matrices and a pseudo-inverse: the slow twin of referencing, whitening and projection. Never to be made fast.
/// </summary>
internal static class PlainMeasures
{
    /// <summary>b = L u for rows [row][axis].</summary>
    public static Vector<double> Project(double[][] rows, Vec3 u) =>
        Vector<double>.Build.DenseOfEnumerable(rows.Select(r => r[0] * u.X + r[1] * u.Y + r[2] * u.Z));

    /// <summary>I - 1 w'.</summary>
    public static Matrix<double> Referencing(double[] weights) =>
        Matrix<double>.Build.Dense(weights.Length, weights.Length, (i, j) => (i == j ? 1.0 : 0.0) - weights[j]);

    /// <summary>Square matrix from row-major values.</summary>
    public static Matrix<double> Square(double[] values)
    {
        int n = (int)Math.Round(Math.Sqrt(values.Length));
        return Matrix<double>.Build.Dense(n, n, (i, j) => values[i * n + j]);
    }

    /// <summary>(a^2/m) sum b_k^2 / C_kk.</summary>
    public static double ChannelMean(Vector<double> b, Matrix<double> c, double moment) =>
        Enumerable.Range(0, b.Count).Average(k => moment * moment * b[k] * b[k] / c[k, k]);

    /// <summary>max a^2 b_k^2 / C_kk.</summary>
    public static double BestChannel(Vector<double> b, Matrix<double> c, double moment) =>
        Enumerable.Range(0, b.Count).Max(k => moment * moment * b[k] * b[k] / c[k, k]);

    /// <summary>a^2 b' C^+ b by the eigenvalues of the covariance scaled to unit variances.</summary>
    public static double MatchedFilter(Vector<double> b, Matrix<double> c, double moment)
    {
        double[] d = [.. Enumerable.Range(0, b.Count).Select(k => 1 / Math.Sqrt(c[k, k]))];
        Matrix<double> scaled = Matrix<double>.Build.Dense(b.Count, b.Count, (i, j) => d[i] * d[j] * c[i, j]);
        var eigen = scaled.Evd(Symmetricity.Symmetric);
        Vector<double> y = eigen.EigenVectors.TransposeThisAndMultiply(Vector<double>.Build.Dense(b.Count, k => d[k] * b[k]));
        double top = eigen.EigenValues.Enumerate().Max(v => v.Real);
        return moment * moment * Enumerable.Range(0, b.Count).Where(k => eigen.EigenValues[k].Real > 1e-10 * top).Sum(k => y[k] * y[k] / eigen.EigenValues[k].Real);
    }
}
