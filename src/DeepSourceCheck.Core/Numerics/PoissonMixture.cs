namespace DeepSourceCheck.Core.Numerics;

/// <summary>Sums over r = s, s + 1, ... of the Poisson term of r at m times an upper tail that grows with r: every noncentral law of this program, without unit.</summary>
/// <remarks>
/// The sum begins where the terms start to count (their tail below is under e^-75) with one tail computed directly, and goes up: tails then grow by positive steps and weights by positive
/// factors, so nothing cancels. The sum ends where the terms no longer count. Some 25 sqrt(m) + 60 terms.
/// </remarks>
internal static class PoissonMixture
{
    private const double Exponent = 75;                         // e^-75 is 3e-33

    /// <summary>The next tail and the next step from a row's index.</summary>
    /// <param name="step">Difference between the tail at r + 1 and that at r.</param>
    /// <param name="r">Index.</param>
    public delegate double NextStep(double step, double r);

    /// <summary>The sum.</summary>
    /// <param name="m">Mean of the Poisson law: half the noncentrality.</param>
    /// <param name="s">First index, 0 or 1/2.</param>
    /// <param name="tail">Upper tail at an index.</param>
    /// <param name="firstStep">Tail at r + 1 less tail at r.</param>
    /// <param name="nextStep">The same at r + 1, from that at r.</param>
    public static double Upper(double m, double s, Func<double, double> tail, Func<double, double> firstStep, NextStep nextStep)
    {
        double r = s + Math.Max(0, Math.Floor(m - Math.Sqrt(2 * Exponent * m)));
        double last = m + Exponent / 3 + Math.Sqrt(Exponent * Exponent / 9 + 2 * Exponent * m);
        double weight = CountTerms.Poisson(r, m), q = tail(r), step = firstStep(r), sum = 0;
        for (; r <= last; r++)
        {
            sum += weight * q;
            weight *= m / (r + 1);
            q += step;
            step = nextStep(step, r);
            if (r > m && weight < 1e-20 * sum)
            {
                break;                                          // tails are at most 1, and weights fall from here on faster than geometrically
            }
        }

        return Math.Min(sum, 1);                                // rounding, where the tails are all 1
    }
}
