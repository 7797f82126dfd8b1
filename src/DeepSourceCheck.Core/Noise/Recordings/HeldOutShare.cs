using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Core.Noise.Recordings;

/// <summary>
/// What a filter that was built from a recording reaches on data that it has not seen, over the power b' C^+ b that the covariance of the whole recording promises. For each half:
/// w = C_half^+ b, (w' b)^2/(w' S_other w) (nu_other - 2)/nu_other, S_other the plain covariance of the other half: the last factor undoes that the mean of 1/(estimated variance) is too
/// high (inverse chi-square law). Mean over both halves and over b, the patterns of single electrodes against the average; at most 1.
/// </summary>
/// <remarks>
/// Replaces the factor of Reed, Mallett and Brennan 1974, which does not hold after shrinkage. Half of the data builds the filter, so the share is rather too low than too high; patterns of
/// real sources are smoother than those of single electrodes, so it is an estimate all the same.
/// </remarks>
public static class HeldOutShare
{
    /// <summary>The share, above 0 to 1.</summary>
    /// <param name="whole">Shrunk covariance of the whole recording.</param>
    /// <param name="first">Moments of one half.</param>
    /// <param name="second">Moments of the other.</param>
    /// <param name="independent">Number of independent samples of the whole.</param>
    public static double Of(ShrunkCovariance whole, SampleMoments first, SampleMoments second, double independent)
    {
        Matrix<double> promised = whole.Inverse();
        double sum = Reached(first, second) + Reached(second, first);
        return Math.Min(1, sum / (2 * whole.Rows));

        double Reached(SampleMoments half, SampleMoments other)
        {
            Matrix<double> filters = ShrunkCovariance.Of(half, independent * half.Count / (half.Count + other.Count)).Inverse();
            double[] covariance = other.Covariance();
            double unseenSamples = independent * other.Count / (half.Count + other.Count), mean = Math.Max(0, unseenSamples - 2) / unseenSamples;
            Matrix<double> unseen = Matrix<double>.Build.Dense(whole.Rows, whole.Rows, (i, j) => covariance[i * whole.Rows + j]);
            Matrix<double> noise = filters.TransposeThisAndMultiply(unseen * filters);
            // w' b of electrode k is w_k: filters sum to zero.
            return Enumerable.Range(0, whole.Rows).Sum(k => mean * filters[k, k] * filters[k, k] / noise[k, k] / promised[k, k]);
        }
    }
}
