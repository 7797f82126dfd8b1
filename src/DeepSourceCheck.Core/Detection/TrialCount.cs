namespace DeepSourceCheck.Core.Detection;

/// <summary>From a quotient of powers to a whole number of trials.</summary>
public static class TrialCount
{
    /// <summary>A quotient this close to an integer (relative) is that integer: 0.27/0.09 is 3, not 4. Wider would be wrong for large counts.</summary>
    public const double IntegerTolerance = 1e-14;

    /// <summary>Counts beyond this have no exact integer in double precision and are reported as not reachable.</summary>
    public const double Largest = 9e15;

    /// <summary>Above this count averaging is no plan: words say "out of reach".</summary>
    public const long MostPlanned = 10_000_000;

    /// <summary>Smallest whole number of trials, at least 1; null when not finite or beyond <see cref="Largest"/>.</summary>
    /// <param name="quotient">Trials as a real number.</param>
    public static long? Ceiling(double quotient)
    {
        if (!(quotient >= 0) || quotient > Largest)
        {
            return null;
        }

        double nearest = Math.Round(quotient);
        double count = Math.Abs(quotient - nearest) <= IntegerTolerance * quotient ? nearest : Math.Ceiling(quotient);
        return Math.Max(1, (long)count);
    }
}
