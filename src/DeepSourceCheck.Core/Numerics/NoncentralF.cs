namespace DeepSourceCheck.Core.Numerics;

/// <summary>F law with noncentrality: (noncentral chi-square of d1 / d1) / (central chi-square of d2 / d2). All without unit.</summary>
/// <remarks>Poisson-weighted sum of central tails (Johnson, Kotz and Balakrishnan 1995, Continuous Univariate Distributions II, ch. 30, from memory); degrees of freedom need not be whole.</remarks>
public static class NoncentralF
{
    /// <summary>Probability that the value exceeds <paramref name="f"/>, without unit.</summary>
    /// <param name="f">At least 0.</param>
    /// <param name="d1">Degrees of freedom above, above 0.</param>
    /// <param name="d2">Degrees of freedom below, above 0.</param>
    /// <param name="lambda">Noncentrality, at least 0.</param>
    public static double Survival(double f, double d1, double d2, double lambda)
    {
        (double x, double y) = Shares(f, d1, d2);
        double a = d1 / 2, b = d2 / 2;
        return PoissonMixture.Upper(
            lambda / 2, 0,
            r => IncompleteBeta.Lower(b, a + r, y, x),
            r => IncompleteBeta.Step(a + r, b, x, y),
            (step, r) => step * x * (a + r + b) / (a + r + 1));
    }

    /// <summary>The value that a central one exceeds with probability <paramref name="alpha"/>, without unit.</summary>
    public static double Critical(double alpha, double d1, double d2) => RootSearch.Increasing(f =>
    {
        (double x, double y) = Shares(f, d1, d2);
        return Math.Log(alpha / IncompleteBeta.Lower(d2 / 2, d1 / 2, y, x));
    }, 2);

    /// <summary>The noncentrality at which <paramref name="f"/> is exceeded with probability <paramref name="power"/>, without unit; 0 where chance alone does.</summary>
    public static double Noncentrality(double f, double d1, double d2, double power) =>
        Survival(f, d1, d2, 0) >= power ? 0 : RootSearch.Increasing(lambda => Survival(f, d1, d2, lambda) - power, Math.Max(1, d1 * (f - 1)));

    private static (double X, double Y) Shares(double f, double d1, double d2)
    {
        double above = d1 * f, sum = above + d2;
        return (above / sum, d2 / sum);
    }
}
