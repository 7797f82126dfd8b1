using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Core.Noise.Recordings;

/// <summary>
/// Covariance of average-referenced electrodes, shrunk towards equal variance by Ledoit and Wolf 2004, J Multivar Anal 88:365, equations 9 to 15 (from memory):
/// S the sample covariance about zero, p - 1 the dimensions that the average leaves, m = tr S/(p - 1), P = I - 1 1'/p;
/// d^2 = |S - m P|^2; b^2 = min(d^2, (mean |x|^4 - |S|^2)/nu), the variance of S when its nu samples are independent; weight w = b^2/d^2; C = w m P + (1 - w) S.
/// </summary>
/// <remarks>
/// With independent samples nu is their number, and b^2 is the estimator of the paper. Band-passed samples follow each other closely: nu is then the number of independent ones.
/// P takes the place of I because the average has no noise of its own: so the result does not depend on the electrode against which was recorded.
/// </remarks>
public sealed class ShrunkCovariance
{
    private ShrunkCovariance(double[] values, double weight, int rows)
    {
        (Values, Weight, Rows) = (values, weight, rows);
    }

    /// <summary>The covariance, row by row, in the unit of the samples squared; its rows sum to zero.</summary>
    public double[] Values { get; }

    /// <summary>Weight of equal variance, 0 to 1.</summary>
    public double Weight { get; }

    /// <summary>Number of electrodes.</summary>
    public int Rows { get; }

    /// <summary>Shrinks.</summary>
    /// <param name="moments">Moments of the samples, with at least one sample and some variance.</param>
    /// <param name="independent">Number of independent samples.</param>
    public static ShrunkCovariance Of(SampleMoments moments, double independent)
    {
        double[] s = moments.Covariance();
        int p = moments.Rows;
        double trace = 0, norm = 0;
        for (int i = 0; i < p; i++)
        {
            trace += s[i * p + i];
        }

        foreach (double value in s)
        {
            norm += value * value;
        }

        double m = trace / (p - 1), distance = norm - m * m * (p - 1);
        double weight = distance > 0 ? Math.Clamp((moments.MeanFourthPower - norm) / independent / distance, 0, 1) : 1;
        for (int i = 0; i < p; i++)
        {
            for (int j = 0; j < p; j++)
            {
                s[i * p + j] = weight * m * ((i == j ? 1 : 0) - 1.0 / p) + (1 - weight) * s[i * p + j];
            }
        }

        return new(s, weight, p);
    }

    /// <summary>C^+ b for every electrode's pattern b against the average, one a column: the columns of the pseudo-inverse, in units of 1/variance.</summary>
    public Matrix<double> Inverse()
    {
        // Along the constant vector C is zero: any variance there makes it regular and is taken out again.
        double along = Enumerable.Range(0, Rows).Sum(k => Values[k * Rows + k]) / (Rows - 1);
        Matrix<double> regular = Matrix<double>.Build.Dense(Rows, Rows, (i, j) => Values[i * Rows + j] + along / Rows);
        Matrix<double> inverse = regular.Cholesky().Solve(Matrix<double>.Build.DenseIdentity(Rows));
        return inverse - Matrix<double>.Build.Dense(Rows, Rows, 1 / along / Rows);
    }
}
