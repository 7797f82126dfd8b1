using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Detection;

/// <summary>Smallest whole number of trials of a test whose degrees of freedom grow with them.</summary>
internal static class CountSearch
{
    // Beyond this the root itself, some 1e-13 of it, decides: neighbours no longer differ in power.
    private const double Largest = 1e10;

    /// <summary>The smallest N of at least <paramref name="fewest"/> with a power of at least the one asked for; not whole beyond 1e10.</summary>
    /// <param name="powerOf">Power at so many trials, not necessarily whole; increasing.</param>
    /// <param name="power">Power asked for, below 1.</param>
    /// <param name="fewest">Smallest number at which the test exists.</param>
    /// <param name="guess">Where to begin: the count at known covariance.</param>
    public static double Smallest(Func<double, double> powerOf, double power, double fewest, double guess)
    {
        if (guess > TrialCount.Largest)
        {
            return guess;
        }

        if (powerOf(fewest) >= power)
        {
            return fewest;
        }

        double root = RootSearch.Increasing(n => powerOf(n) - power, Math.Max(guess, fewest) + 1, 1e-13);
        if (root > Largest)
        {
            return root;
        }

        double count = Math.Max(Math.Ceiling(root), fewest + 1);
        while (count > fewest + 1 && powerOf(count - 1) >= power)
        {
            count--;
        }

        while (powerOf(count) < power)
        {
            count++;
        }

        return count;
    }
}
