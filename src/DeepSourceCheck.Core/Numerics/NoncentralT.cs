namespace DeepSourceCheck.Core.Numerics;

/// <summary>Student's t law with noncentrality: (normal value of mean delta and variance 1) / sqrt(central chi-square of nu / nu), upper half. All without unit.</summary>
/// <remarks>
/// For t and delta of at least 0 the upper tail is half the sum, over whole and half-whole r, of Poisson terms of r at delta^2/2 times the beta tails of r + 1/2: the complement, term by term,
/// of the series of Lenth 1989, Applied Statistics 38:185 (algorithm AS 243, from memory), which it spares the cancellation at large delta.
/// </remarks>
public static class NoncentralT
{
    /// <summary>Probability that the value exceeds <paramref name="t"/>, without unit.</summary>
    /// <param name="t">At least 0.</param>
    /// <param name="nu">Degrees of freedom, above 0.</param>
    /// <param name="delta">Noncentrality, at least 0.</param>
    public static double Survival(double t, double nu, double delta)
    {
        ArgumentOutOfRangeException.ThrowIfNegative(t);
        ArgumentOutOfRangeException.ThrowIfNegative(delta);
        double square = t * t, sum = square + nu, x = square / sum, y = nu / sum, b = nu / 2, m = delta * delta / 2;
        return Math.Min(0.5 * (Half(0) + Half(0.5)), 1);

        double Half(double s) => PoissonMixture.Upper(
            m, s,
            r => IncompleteBeta.Lower(b, 0.5 + r, y, x),
            r => IncompleteBeta.Step(0.5 + r, b, x, y),
            (step, r) => step * x * (0.5 + r + b) / (1.5 + r));
    }

    /// <summary>The value that a central one exceeds with probability <paramref name="alpha"/> below 1/2, without unit.</summary>
    public static double Critical(double alpha, double nu) => Math.Sqrt(NoncentralF.Critical(2 * alpha, 1, nu));

    /// <summary>The noncentrality at which <paramref name="t"/> is exceeded with probability <paramref name="power"/>, without unit; 0 where chance alone does.</summary>
    public static double Noncentrality(double t, double nu, double power) =>
        Survival(t, nu, 0) >= power ? 0 : RootSearch.Increasing(delta => Survival(t, nu, delta) - power, Math.Max(1, t));
}
