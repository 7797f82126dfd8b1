using System.Text.RegularExpressions;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Tests.References;

using MathNet.Numerics;
using MathNet.Numerics.Distributions;
using MathNet.Numerics.RootFinding;

namespace DeepSourceCheck.Tests.Support;

/// <summary>
/// Functions of distributions in a chain's formulas, as a reviewer's statistics package has them: from the numerical library's central laws and the plain sums, never from the program's own.
/// </summary>
internal static partial class ChainDistributions
{
    /// <summary>Relative: the library's quantiles are roots of its own tails.</summary>
    private const double Tolerance = 1e-6;

    private static readonly string[] Names =
        ["upper_chi2", "upper_F", "upper_t", "noncentrality_chi2", "noncentrality_F", "power_F", "power_t", "hotelling", "student", "coherence", "people", "groups", "power_people", "power_groups"];

    public static bool Knows(string word) => Names.Contains(word);

    /// <summary>Whether a line is such a function alone and its printed value agrees with the recomputed one: counts exactly, others to the tolerance.</summary>
    public static bool Holds(DerivedNumber line, double recomputed)
    {
        Match match = Function().Match(line.Formula);
        return match.Success && Knows(match.Groups[1].Value)
            && (line.Symbol is "N" or "Nc" or "np" ? line.Value == recomputed : Math.Abs(line.Value - recomputed) <= Tolerance * Math.Abs(recomputed));
    }

    public static double Call(string word, double[] x) => word switch
    {
        "upper_chi2" => ChiSquared.InvCDF(x[1], 1 - x[0]),
        "upper_F" => UpperF(x[0], x[1], x[2]),
        "upper_t" => Math.Sqrt(UpperF(2 * x[0], 1, x[1])),
        "noncentrality_chi2" => Root(l => PlainNoncentral.ChiSquareSurvival(x[0], x[1], l) - x[2]),
        "noncentrality_F" => Root(l => PlainNoncentral.FSurvival(x[0], x[1], x[2], l) - x[3]),
        "power_F" => PlainNoncentral.FSurvival(x[0], x[1], x[2], x[3]),
        "power_t" => PlainNoncentral.TSurvival(x[0], x[1], x[2]),
        "hotelling" => Smallest(x[2] + 1, x[1], n => PlainNoncentral.FSurvival(UpperF(x[0], x[2], n - x[2]), x[2], n - x[2], n * x[3])),
        "student" => Smallest(2, x[1], n => PlainNoncentral.TSurvival(Math.Sqrt(UpperF(2 * x[0], 1, n - 1)), n - 1, Math.Sqrt(n * x[2]))),
        "people" => Smallest(2, x[1], n => OverPeople(1, x[0], n, x[2])),
        "groups" => Smallest(2, x[1], n => OverPeople(2, x[0], n, x[2])),
        "power_people" => OverPeople(1, x[0], x[1], x[2]),
        "power_groups" => OverPeople(2, x[0], x[1], x[2]),
        _ => Smallest(2, x[1], n => Coherent(1 - Math.Pow(x[0], 1 / (n - 1)), n, n * x[2])),
    };

    // Both tails of t with n - 1 degrees of freedom a group.
    private static double OverPeople(double groups, double alpha, double n, double d) =>
        PlainNoncentral.FSurvival(UpperF(alpha, 1, groups * (n - 1)), 1, groups * (n - 1), n / groups * d * d);

    private static double Coherent(double critical, double n, double lambda) => PlainNoncentral.FSurvival((n - 1) * critical / (1 - critical), 2, 2 * n - 2, lambda);

    // By halving the logarithm: the library's own inverse ends without a root at thousands of degrees of freedom.
    private static double UpperF(double alpha, double d1, double d2)
    {
        double low = Math.Log(1e-4), high = Math.Log(1e12);
        for (int k = 0; k < 100; k++)
        {
            double middle = (low + high) / 2;
            bool above = SpecialFunctions.BetaRegularized(d2 / 2, d1 / 2, d2 / (d2 + d1 * Math.Exp(middle))) > alpha;
            (low, high) = above ? (middle, high) : (low, middle);
        }

        return Math.Exp(high);
    }

    private static double Root(Func<double, double> f) => Brent.FindRoot(f, 1e-3, 1000, 1e-11, 500);

    /// <summary>Smallest whole number with the power, by halving.</summary>
    private static double Smallest(double fewest, double power, Func<double, double> powerOf)
    {
        double low = fewest, high = fewest;
        while (powerOf(high) < power)
        {
            (low, high) = (high, 2 * high);
        }

        while (high - low > 1)
        {
            double middle = Math.Floor((low + high) / 2);
            (low, high) = powerOf(middle) < power ? (middle, high) : (low, middle);
        }

        return powerOf(low) >= power ? low : high;
    }

    [GeneratedRegex(@"^(\w+)\(.*\)$")]
    private static partial Regex Function();
}
