namespace DeepSourceCheck.Core.Numerics;

/// <summary>Root of a continuous function between two values at which it has opposite signs.</summary>
/// <remarks>Source: Chandrupatla 1997, Advances in Engineering Software 28:145 (from memory): inverse quadratic interpolation where it is safe, else bisection.</remarks>
internal static class RootSearch
{
    private const int MostSteps = 300;

    /// <summary>The root, in the unit of <paramref name="low"/> and <paramref name="high"/>, to some units in the last place.</summary>
    /// <param name="f">Function.</param>
    /// <param name="low">One end.</param>
    /// <param name="high">The other end.</param>
    /// <param name="tolerance">Relative width at which the search ends.</param>
    public static double Between(Func<double, double> f, double low, double high, double tolerance = 4e-16)
    {
        double a = high, b = low, fa = f(a), fb = f(b), t = 0.5;
        if (fa == 0 || fb == 0)
        {
            return fa == 0 ? a : b;
        }

        if (fa > 0 == fb > 0)
        {
            throw new ArgumentException($"no change of sign between {low} and {high}");
        }

        for (int step = 0; step < MostSteps; step++)
        {
            double x = a + t * (b - a), fx = f(x);
            double c, fc;
            if (fx > 0 == fa > 0)
            {
                (c, fc) = (a, fa);
            }
            else
            {
                (c, b, fc, fb) = (b, a, fb, fa);
            }

            (a, fa) = (x, fx);
            double best = Math.Abs(fa) < Math.Abs(fb) ? a : b;
            double width = tolerance * Math.Abs(best) / Math.Abs(b - a);
            if (width > 0.5 || fa == 0)
            {
                return fa == 0 ? a : best;
            }

            double xi = (a - b) / (c - b), phi = (fa - fb) / (fc - fb);
            t = phi * phi < xi && (1 - phi) * (1 - phi) < 1 - xi
                ? fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (fc - fb)
                : 0.5;
            t = Math.Clamp(t, width, 1 - width);
        }

        return Math.Abs(fa) < Math.Abs(fb) ? a : b;
    }

    /// <summary>Root of an increasing function above 0: doubles or halves from a guess until the root is enclosed.</summary>
    /// <param name="f">Increasing function of a positive value.</param>
    /// <param name="guess">Where to begin.</param>
    /// <param name="tolerance">Relative width at which the search ends.</param>
    public static double Increasing(Func<double, double> f, double guess, double tolerance = 4e-16)
    {
        double low = guess, high = guess;
        double factor = 1.25;
        if (f(guess) < 0)
        {
            do
            {
                low = high;
                high *= factor;
                factor = Math.Min(factor * factor, 1e6);
            }
            while (f(high) < 0);
        }
        else
        {
            do
            {
                high = low;
                low /= factor;
                factor = Math.Min(factor * factor, 1e6);
            }
            while (f(low) > 0 && low > double.Epsilon);
        }

        return Between(f, low, high, tolerance);
    }
}
