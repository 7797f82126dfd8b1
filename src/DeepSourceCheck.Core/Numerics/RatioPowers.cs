namespace DeepSourceCheck.Core.Numerics;

/// <summary>Logarithms and exponentials that keep their digits where a ratio is close to 1: thin layers.</summary>
public static class RatioPowers
{
    /// <summary>ln(<paramref name="numerator"/>/<paramref name="denominator"/>) for positive arguments of the same unit.</summary>
    /// <remarks>2 artanh((a - b)/(a + b)): the difference of close doubles is exact, so the result is relative to a few units in the last place.</remarks>
    public static double LogOfRatio(double numerator, double denominator) =>
        2.0 * Math.Atanh((numerator - denominator) / (numerator + denominator));

    /// <summary>1 - exp(<paramref name="exponent"/>) without cancellation, for exponents (dimensionless) of 0 or below.</summary>
    /// <remarks>1 - e^x = -tanh(x/2) (e^x + 1).</remarks>
    public static double OneMinusExp(double exponent) => -Math.Tanh(0.5 * exponent) * (Math.Exp(exponent) + 1.0);
}
