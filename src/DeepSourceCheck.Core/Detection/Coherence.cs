using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Detection;

/// <summary>
/// Magnitude-squared coherence of N trials at one frequency, |sum X|^2 / (N sum |X|^2): the share of the power that is locked. All values without unit.
/// </summary>
/// <remarks>
/// (N - 1) C / (1 - C) is F(2, 2 N - 2) with noncentrality N P, P as in <see cref="SteadyStateRule"/>; without a response, P(C > c) = (1 - c)^(N - 1).
/// Source: Dobie and Wilson 1996, Journal of the Acoustical Society of America 100:2236 (from memory).
/// </remarks>
public static class Coherence
{
    /// <summary>Coherence that chance exceeds with a false-alarm rate: 1 - alpha^(1/(N - 1)).</summary>
    /// <param name="alpha">False-alarm rate.</param>
    /// <param name="trials">N, above 1.</param>
    public static double Critical(double alpha, double trials) => RatioPowers.OneMinusExp(Math.Log(alpha) / (trials - 1));

    /// <summary>Probability that it is exceeded.</summary>
    /// <param name="alpha">False-alarm rate.</param>
    /// <param name="power">Power SNR of one trial.</param>
    /// <param name="trials">N, above 1.</param>
    public static double PowerOf(double alpha, double power, double trials)
    {
        double critical = Critical(alpha, trials);
        return NoncentralF.Survival((trials - 1) * critical / (1 - critical), 2, 2 * (trials - 1), trials * power);
    }

    /// <summary>Smallest number of trials, at least 2, that detects with a probability; infinite without a response.</summary>
    /// <param name="alpha">False-alarm rate.</param>
    /// <param name="probability">Probability asked for.</param>
    /// <param name="power">Power SNR of one trial.</param>
    public static double Trials(double alpha, double probability, double power)
    {
        if (!(power > 0))
        {
            return double.PositiveInfinity;
        }

        double known = NoncentralChiSquare.Noncentrality(-2 * Math.Log(alpha), 2, probability);
        return CountSearch.Smallest(n => PowerOf(alpha, power, n), probability, 2, known / power);
    }
}
