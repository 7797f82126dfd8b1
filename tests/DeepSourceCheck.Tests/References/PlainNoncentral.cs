using MathNet.Numerics;
using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Tests.References;

/// <summary>Noncentral laws term by term from their definitions, every central tail anew from the numerical library: slow, and right to some 1e-10 for moderate arguments.</summary>
internal static class PlainNoncentral
{
    private const int Terms = 3000;

    public static double ChiSquareSurvival(double x, double k, double lambda) =>
        Sum(lambda / 2, 0, r => SpecialFunctions.GammaUpperRegularized(k / 2 + r, x / 2));

    public static double FSurvival(double f, double d1, double d2, double lambda) =>
        Sum(lambda / 2, 0, r => SpecialFunctions.BetaRegularized(d2 / 2, d1 / 2 + r, d2 / (d2 + d1 * f)));

    /// <summary>For t and delta of at least 0, from 1 - Phi(-delta) less the two series of the lower tail (Lenth 1989).</summary>
    public static double TSurvival(double t, double nu, double delta)
    {
        double x = t * t / (nu + t * t);
        return Normal.CDF(0, 1, delta)
            - 0.5 * Sum(delta * delta / 2, 0, r => SpecialFunctions.BetaRegularized(r + 0.5, nu / 2, x))
            - 0.5 * Sum(delta * delta / 2, 0.5, r => SpecialFunctions.BetaRegularized(r + 0.5, nu / 2, x));
    }

    private static double Sum(double mean, double first, Func<double, double> tail)
    {
        double sum = 0;
        for (int k = 0; k < Terms; k++)
        {
            double r = first + k, logarithm = r * Math.Log(mean) - mean - SpecialFunctions.GammaLn(r + 1);
            double weight = mean == 0 ? (r == 0 ? 1 : 0) : Math.Exp(logarithm);
            if (weight > 1e-30)
            {
                sum += weight * tail(r);
            }
        }

        return sum;
    }
}
