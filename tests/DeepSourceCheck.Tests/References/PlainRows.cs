using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Tests.References;

/// <summary>
/// Sums and maxima over the rows of one dipole, one number at a time: the slow twin of the lane kernels, of the search for the best pair and of triangular whitening. Never to be made fast.
/// </summary>
internal static class PlainRows
{
    /// <summary>sum (row . u)^2.</summary>
    public static double ProjectedPower(Vec3[] rows, Vec3 u) => rows.Sum(r => Vec3.Dot(r, u) * Vec3.Dot(r, u));

    /// <summary>sum over rows of r_a r_b.</summary>
    public static double Gram(Vec3[] rows, int a, int b) => rows.Sum(r => r[a] * r[b]);

    /// <summary>Largest (row . u)^2 and the first row that has it.</summary>
    public static (double Power, int Row) Largest(Vec3[] rows, Vec3 u)
    {
        double best = -1;
        int at = 0;
        for (int k = 0; k < rows.Length; k++)
        {
            double p = Vec3.Dot(rows[k], u);
            if (p * p > best)
            {
                (best, at) = (p * p, k);
            }
        }

        return (best, at);
    }

    /// <summary>Largest |row|^2.</summary>
    public static double LargestNorm(Vec3[] rows) => rows.Max(r => Vec3.Dot(r, r));

    /// <summary>The largest (e.u)^2 + (m.u)^2 over all pairs of rows and unit vectors u: the larger eigenvalue of each pair's 2 x 2 Gram matrix.</summary>
    public static double BestPair(Vec3[] eeg, Vec3[] meg)
    {
        double best = 0;
        foreach (Vec3 e in eeg)
        {
            foreach (Vec3 m in meg)
            {
                double ee = Vec3.Dot(e, e), mm = Vec3.Dot(m, m), em = Vec3.Dot(e, m);
                best = Math.Max(best, (ee + mm + Math.Sqrt((ee - mm) * (ee - mm) + 4 * em * em)) / 2);
            }
        }

        return best;
    }

    /// <summary>y = inverse of the Cholesky factor of C, applied by forward substitution: whitened rows of one axis and dipole, C positive definite.</summary>
    public static double[] Whiten(double[] covariance, double[] values)
    {
        int n = values.Length;
        var l = new double[n, n];
        var y = new double[n];
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                double sum = covariance[i * n + j];
                for (int k = 0; k < j; k++)
                {
                    sum -= l[i, k] * l[j, k];
                }

                l[i, j] = i == j ? Math.Sqrt(sum) : sum / l[j, j];
            }

            double rest = values[i];
            for (int k = 0; k < i; k++)
            {
                rest -= l[i, k] * y[k];
            }

            y[i] = rest / l[i, i];
        }

        return y;
    }
}
