namespace DeepSourceCheck.Core.Numerics;

/// <summary>Lower share of the beta law, I_x(a, b), without unit, to some 1e-13 of itself also where it is small.</summary>
/// <remarks>
/// Continued fraction of Didonato and Morris 1992, ACM Transactions on Mathematical Software 18:360 (algorithm 708, from memory), which knows 1 - x and the distance from the mean exactly and
/// so keeps its digits at 1e12 degrees of freedom; the factor in front by <see cref="CountTerms"/>.
/// </remarks>
internal static class IncompleteBeta
{
    /// <summary>I_x(a, b) for positive a and b and y = 1 - x, both given so that neither loses digits.</summary>
    public static double Lower(double a, double b, double x, double y)
    {
        if (x <= 0)
        {
            return 0;
        }

        if (y <= 0)
        {
            return 1;
        }

        // How far x lies below the mean a/(a + b), times a + b: from the smaller of the two terms, which rounds least.
        double below = a > b ? (a + b) * y - b : a - (a + b) * x;
        return below >= 0 ? a * Step(a, b, x, y) * Fraction(a, b, x, y, below) : 1 - b * Step(b, a, y, x) * Fraction(b, a, y, x, -below);
    }

    /// <summary>I_x(a, b) - I_x(a + 1, b) = x^a y^b / (a B(a, b)).</summary>
    public static double Step(double a, double b, double x, double y) => CountTerms.Binomial(a, b, x, y) * (b / (a + b));

    // I_x(a, b) B(a, b) / (x^a y^b): numerators and denominators of the convergents, rescaled so that the last denominator is 1.
    private static double Fraction(double a, double b, double x, double y, double below)
    {
        double first = 1 + 1 / a, n0 = 0, d0 = 1, n1 = 1, d1 = (1 + below) / first, p = 1, s = a + 1, r = n1 / d1;
        for (int n = 1; ; n++)
        {
            double t = n / a, w = n * (b - n) * x, e = a / s;
            double alpha = p * (p + b / a) * e * e * (w * x);
            double beta = n + w / s + (t + 1) / (first + t + t) * (1 + below + n * (1 + y));
            p = t + 1;
            s += 2;
            (n0, n1) = (n1, alpha * n0 + beta * n1);
            (d0, d1) = (d1, alpha * d0 + beta * d1);
            double last = r;
            r = n1 / d1;
            if (Math.Abs(r - last) <= 1e-15 * r)
            {
                return r;
            }

            (n0, d0, n1, d1) = (n0 / d1, d0 / d1, r, 1);
        }
    }
}
