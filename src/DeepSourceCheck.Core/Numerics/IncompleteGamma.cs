namespace DeepSourceCheck.Core.Numerics;

/// <summary>Upper share of the gamma law, Q(a, x), without unit, to some 1e-13 of itself also where it is small.</summary>
/// <remarks>Series and continued fraction: Olver and others, Digital Library of Mathematical Functions 8.7.1 and 8.9.2 (from memory); the factor in front by <see cref="CountTerms"/>.</remarks>
internal static class IncompleteGamma
{
    /// <summary>Q(a, x) for positive a and x of at least 0.</summary>
    public static double Upper(double a, double x)
    {
        if (x <= 0)
        {
            return 1;
        }

        double factor = CountTerms.Poisson(a, x);
        return x < a + 1 ? 1 - factor * Series(a, x) : factor * a * Fraction(a, x);
    }

    // P(a, x) = x^a e^-x / Gamma(a + 1) (1 + x/(a + 1) + x^2/((a + 1)(a + 2)) + ...)
    private static double Series(double a, double x)
    {
        double term = 1, sum = 1;
        for (double n = a + 1; term > sum * 1e-17; n++)
        {
            term *= x / n;
            sum += term;
        }

        return sum;
    }

    // Q(a, x) = x^a e^-x / Gamma(a) / (x + 1 - a - 1 (1 - a) / (x + 3 - a - ...)), by Lentz's method.
    private static double Fraction(double a, double x)
    {
        double b = x + 1 - a, d = 1 / b, c = double.PositiveInfinity, f = d;
        for (int i = 1; ; i++)
        {
            double numerator = -i * (i - a);
            b += 2;
            d = 1 / (numerator * d + b);
            c = b + numerator / c;
            double change = c * d;
            f *= change;
            if (Math.Abs(change - 1) < 1e-15)
            {
                return f;
            }
        }
    }
}
