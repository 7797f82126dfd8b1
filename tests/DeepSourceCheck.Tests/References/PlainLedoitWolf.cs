using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.References;

/// <summary>
/// Ledoit and Wolf 2004, J Multivar Anal 88:365, as the paper writes it: samples x_k of p variables, |A|^2 = tr(A A')/p, S = sum x x'/n, m = tr S/p, d^2 = |S - m I|^2,
/// bbar^2 = sum |x_k x_k' - S|^2/n^2, b^2 = min(bbar^2, d^2), S* = b^2/d^2 m I + (1 - b^2/d^2) S. Every sample's matrix is formed.
/// </summary>
internal static class PlainLedoitWolf
{
    /// <summary>S* and the weight of m I.</summary>
    /// <param name="samples">Variables x samples.</param>
    public static (Matrix<double> Covariance, double Weight) Of(Matrix<double> samples)
    {
        int p = samples.RowCount, n = samples.ColumnCount;
        Matrix<double> s = samples * samples.Transpose() / n, identity = Matrix<double>.Build.DenseIdentity(p);
        double m = s.Trace() / p, d2 = Square(s - m * identity), sum = 0;
        for (int k = 0; k < n; k++)
        {
            Vector<double> x = samples.Column(k);
            sum += Square(x.OuterProduct(x) - s);
        }

        double weight = Math.Min(sum / n / n, d2) / d2;
        return (weight * m * identity + (1 - weight) * s, weight);

        double Square(Matrix<double> a) => (a * a.Transpose()).Trace() / p;
    }
}
