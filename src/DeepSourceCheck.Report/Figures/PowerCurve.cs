using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Report.Figures;

/// <summary>Power of the one-sided detection test of a known response against the number of trials.</summary>
/// <remarks>
/// power(N) = Phi(sqrt(N) d - z), z = z_(1 - alpha/K): the test statistic is normal with mean sqrt(N) d and unit variance, where d^2 is the power SNR of one
/// trial, alpha the false-alarm rate over all looks and K the number of looks (Bonferroni). Source: the detection of a known signal in normal noise, e.g. Kay 1998,
/// Fundamentals of Statistical Signal Processing II, ch. 4 (from memory).
/// </remarks>
/// <param name="Alpha">False-alarm rate over all looks.</param>
/// <param name="Looks">Number of independent looks.</param>
public sealed record PowerCurve(double Alpha, double Looks)
{
    /// <summary>Power at <paramref name="trials"/> of a response with <paramref name="snrDb"/> in one trial [dB].</summary>
    public double At(double trials, double snrDb) => Normal.CDF(0, 1, Math.Sqrt(trials) * Math.Pow(10, snrDb / 20) - Critical);

    /// <summary>The trials (not rounded) at which the power is reached.</summary>
    public double Trials(double power, double snrDb)
    {
        double sum = Critical + Normal.InvCDF(0, 1, power);
        return sum <= 0 ? 0 : Math.Pow(sum / Math.Pow(10, snrDb / 20), 2);
    }

    /// <summary>z_(1 - alpha/K).</summary>
    public double Critical => Normal.InvCDF(0, 1, 1 - Alpha / Looks);
}
