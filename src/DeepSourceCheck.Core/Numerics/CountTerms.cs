using MathNet.Numerics;

namespace DeepSourceCheck.Core.Numerics;

/// <summary>Single terms of the Poisson and binomial laws at real arguments, without unit, that keep their digits where logarithms of factorials would cancel.</summary>
/// <remarks>
/// Source: Loader 2000, Fast and accurate computation of binomial probabilities (from memory): Stirling's error apart from the deviance. Relative error some 1e-14 up to arguments of 1e12,
/// where exp(a ln x - ln Gamma(a)) has lost five digits.
/// </remarks>
internal static class CountTerms
{
    private const double HalfLogTwoPi = 0.918938533204672741780329736406;

    /// <summary>m^r e^-m / Gamma(r + 1) for r, m of at least 0.</summary>
    public static double Poisson(double r, double m)
    {
        if (m == 0)
        {
            return r == 0 ? 1 : 0;
        }

        return r == 0 ? Math.Exp(-m) : Math.Exp(-StirlingError(r) - Deviance(r, m)) / Math.Sqrt(2 * Math.PI * r);
    }

    /// <summary>Gamma(a + b + 1) / (Gamma(a + 1) Gamma(b + 1)) x^a y^b for positive a, b and y = 1 - x, both given so that neither loses digits.</summary>
    public static double Binomial(double a, double b, double x, double y)
    {
        if (x <= 0 || y <= 0)
        {
            return 0;
        }

        double n = a + b;
        double exponent = StirlingError(n) - StirlingError(a) - StirlingError(b) - Deviance(a, n * x) - Deviance(b, n * y);
        return Math.Exp(exponent) * Math.Sqrt(n / (2 * Math.PI * a * b));
    }

    /// <summary>ln Gamma(n + 1) - (n + 1/2) ln n + n - ln sqrt(2 pi), n above 0.</summary>
    private static double StirlingError(double n)
    {
        if (n < 16)
        {
            return SpecialFunctions.GammaLn(n + 1) - (n + 0.5) * Math.Log(n) + n - HalfLogTwoPi;
        }

        double q = 1 / (n * n);                                 // Bernoulli numbers: B2k / (2k (2k - 1))
        return (1.0 / 12 - q * (1.0 / 360 - q * (1.0 / 1260 - q * (1.0 / 1680 - q * (1.0 / 1188 - q * (691.0 / 360360)))))) / n;
    }

    /// <summary>r ln(r/m) + m - r, positive, also where r and m nearly agree.</summary>
    private static double Deviance(double r, double m)
    {
        double difference = r - m, sum = r + m;
        if (Math.Abs(difference) >= 0.1 * sum)
        {
            return r * Math.Log(r / m) + m - r;
        }

        double v = difference / sum, square = v * v, term = 2 * r * v, total = difference * v;
        for (int k = 3; ; k += 2)
        {
            term *= square;
            double next = total + term / k;
            if (next == total)
            {
                return total;
            }

            total = next;
        }
    }
}
