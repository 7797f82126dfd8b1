namespace DeepSourceCheck.Core.Results;

/// <summary>How the probability of detection grows with accepted trials, by the very test that counted them.</summary>
/// <param name="Test">The test in words with its numbers.</param>
/// <param name="Stated">True where the study states it; false where it is common practice.</param>
/// <param name="Asked">Probability that the count reaches, without unit.</param>
/// <param name="Median">From accepted trials to the probability, for the dipole and direction at the median.</param>
/// <param name="Weak">The same at the 5 % point of the power SNR; null where there is none.</param>
/// <param name="Strong">The same at its 95 % point; null likewise.</param>
public sealed record DetectionCurve(
    string Test, bool Stated, double Asked, Func<double, double> Median, Func<double, double>? Weak, Func<double, double>? Strong)
{
    private const double Fewest = 1e-3, Most = 1e15;

    /// <summary>Trials (not rounded) at which a curve reaches a probability; infinite where it never does.</summary>
    /// <param name="curve">One of this record's curves: it never falls.</param>
    /// <param name="probability">Without unit, 0 to 1.</param>
    public static double Trials(Func<double, double> curve, double probability)
    {
        double reached = 1;
        while (!(curve(reached) >= probability))
        {
            reached *= 2;
            if (reached > Most)
            {
                return double.PositiveInfinity;
            }
        }

        while (reached > Fewest && curve(reached / 2) >= probability)
        {
            reached /= 2;
        }

        (double low, double high) = (Math.Log(reached / 2), Math.Log(reached));
        // Halving down to the rounding of the logarithm: about 50 steps.
        for (double middle = 0.5 * (low + high); middle > low && middle < high; middle = 0.5 * (low + high))
        {
            (low, high) = curve(Math.Exp(middle)) >= probability ? (low, middle) : (middle, high);
        }

        return Math.Exp(high);
    }
}
