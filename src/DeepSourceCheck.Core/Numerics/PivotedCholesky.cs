namespace DeepSourceCheck.Core.Numerics;

/// <summary>
/// Cholesky factorisation with diagonal pivoting of a covariance that may be singular: a referenced EEG covariance has rank m - 1, a cleaned MEG covariance may have less.
/// </summary>
/// <remarks>
/// Channels are first scaled to unit variance, so that V^2 beside T^2 and an absolute threshold cannot meet. The factor covers the rank-r leading pivots:
/// C_pp = L L' for the chosen channels p. For a signal b in the range of C, b_p' C_pp^-1 b_p equals b' C^+ b for every such choice: the result does not depend on the reference.
/// Source: Higham 2002, Accuracy and Stability of Numerical Algorithms, section 10.3 (from memory).
/// </remarks>
public sealed class PivotedCholesky
{
    /// <summary>A pivot below this share of the unit variance is rounding of zero.</summary>
    private const double RankTolerance = 1e-12;

    private PivotedCholesky(int[] channels, double[] scale, double[] factor)
    {
        Channels = channels;
        Scale = scale;
        Factor = factor;
    }

    /// <summary>Numerical rank.</summary>
    public int Rank => Channels.Length;

    /// <summary>The chosen channels, in pivot order.</summary>
    public int[] Channels { get; }

    /// <summary>1 / standard deviation of each chosen channel, in the inverse of the unit of the channel.</summary>
    public double[] Scale { get; }

    /// <summary>L of the scaled covariance, without unit, rank x rank, row by row, lower triangular.</summary>
    public double[] Factor { get; }

    /// <summary>Factorises a symmetric positive semidefinite matrix.</summary>
    /// <param name="covariance">n x n, row by row.</param>
    /// <param name="n">Order.</param>
    public static PivotedCholesky Of(double[] covariance, int n)
    {
        var scale = new double[n];
        for (int i = 0; i < n; i++)
        {
            double v = covariance[i * n + i];
            scale[i] = v > 0 ? 1.0 / Math.Sqrt(v) : 0.0;
        }

        var rest = new double[n];
        var order = new int[n];
        for (int i = 0; i < n; i++)
        {
            rest[i] = scale[i] > 0 ? 1.0 : 0.0;
            order[i] = i;
        }

        var rows = new double[n * n];                           // rows[k]: row of L of the channel at position k of the order
        int rank = 0;
        for (; rank < n; rank++)
        {
            int best = rank;
            for (int k = rank + 1; k < n; k++)
            {
                if (rest[order[k]] > rest[order[best]])
                {
                    best = k;
                }
            }

            // relative ties keep the caller's order, so that a plain diagonal covariance keeps its channels in place
            if (rest[order[best]] - rest[order[rank]] <= 1e-3 * rest[order[best]])
            {
                best = rank;
            }

            if (rest[order[best]] <= RankTolerance * n)
            {
                break;
            }

            (order[rank], order[best]) = (order[best], order[rank]);
            for (int c = 0; c < rank && best != rank; c++)
            {
                (rows[rank * n + c], rows[best * n + c]) = (rows[best * n + c], rows[rank * n + c]);
            }

            int p = order[rank];
            double pivot = Math.Sqrt(rest[p]);
            rows[rank * n + rank] = pivot;
            for (int k = rank + 1; k < n; k++)
            {
                int q = order[k];
                double sum = scale[p] * scale[q] * covariance[q * n + p];
                for (int c = 0; c < rank; c++)
                {
                    sum -= rows[k * n + c] * rows[rank * n + c];
                }

                double l = scale[q] > 0 ? sum / pivot : 0.0;
                rows[k * n + rank] = l;
                rest[q] -= l * l;
            }
        }

        var factor = new double[rank * rank];
        for (int k = 0; k < rank; k++)
        {
            Array.Copy(rows, k * n, factor, k * rank, k + 1);
        }

        int[] channels = order[..rank];
        return new PivotedCholesky(channels, [.. channels.Select(c => scale[c])], factor);
    }

    /// <summary>The inverse of the factor: whitens scaled signals. Rank x rank, row by row, lower triangular.</summary>
    public double[] InverseFactor()
    {
        int r = Rank;
        var inverse = new double[r * r];
        for (int j = 0; j < r; j++)
        {
            inverse[j * r + j] = 1.0 / Factor[j * r + j];
            for (int i = j + 1; i < r; i++)
            {
                double sum = 0;
                for (int k = j; k < i; k++)
                {
                    sum += Factor[i * r + k] * inverse[k * r + j];
                }

                inverse[i * r + j] = -sum / Factor[i * r + i];
            }
        }

        return inverse;
    }
}
