using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Detection;

// EstimatedWhitening.cs - what a covariance looks like that was estimated from nu independent samples, in coordinates in which the true one is the identity.
//   nu S is Wishart: S = A A'/nu with A lower triangular, A_ii^2 chi-square with nu - i degrees (i from 0), entries below standard normal.
// Source: Bartlett 1933 decomposition, Muirhead 1982, Aspects of Multivariate Statistical Theory, theorem 3.2.14 (from memory).

/// <summary>Draws of the inverse of an estimated covariance.</summary>
internal static class EstimatedWhitening
{
    /// <summary>S^-1, p x p, row by row, without unit.</summary>
    /// <param name="order">p.</param>
    /// <param name="samples">nu, above p + 1.</param>
    /// <param name="seed">Equal seeds give equal draws.</param>
    public static double[] Inverse(int order, double samples, ulong seed)
    {
        var stream = new SeededStream(seed);
        var a = new double[order * order];
        for (int i = 0; i < order; i++)
        {
            for (int j = 0; j < i; j++)
            {
                a[i * order + j] = stream.Normal();
            }

            a[i * order + i] = Math.Sqrt(stream.ChiSquare(samples - i));
        }

        var s = new double[order * order];
        for (int i = 0; i < order; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                double sum = 0;
                for (int k = 0; k <= j; k++)
                {
                    sum += a[i * order + k] * a[j * order + k];
                }

                s[i * order + j] = s[j * order + i] = sum / samples;
            }
        }

        return SymmetricInverse.Of(s, order);
    }
}
