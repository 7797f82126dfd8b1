namespace DeepSourceCheck.Core.Studies;

/// <summary>Finds the known name that a mistyped one most likely meant, for error messages.</summary>
public static class NearestName
{
    /// <summary>The known name with the smallest edit distance (letter case costs less than a letter); null when none is near.</summary>
    /// <param name="name">What was written.</param>
    /// <param name="known">Names that exist, in the order in which ties are decided.</param>
    public static string? Of(string name, IEnumerable<string> known)
    {
        string? best = null;
        double bestDistance = Math.Max(2.0, name.Length / 2.0) + 1e-9;
        foreach (string candidate in known)
        {
            double distance = Distance(name, candidate);
            if (distance < bestDistance)
            {
                best = candidate;
                bestDistance = distance;
            }
        }

        return best;
    }

    /// <summary>` (nearest: X)`, or nothing where no known name is near.</summary>
    public static string Hint(string name, IEnumerable<string> known) => Of(name, known) is { } near ? $" (nearest: {near})" : "";

    /// <summary>Edit distance (Levenshtein 1966) with 0.1 for a change of letter case alone.</summary>
    private static double Distance(string a, string b)
    {
        double[] previous = [.. Enumerable.Range(0, b.Length + 1).Select(j => (double)j)];
        double[] current = new double[b.Length + 1];
        for (int i = 1; i <= a.Length; i++)
        {
            current[0] = i;
            for (int j = 1; j <= b.Length; j++)
            {
                double change = a[i - 1] == b[j - 1] ? 0 : char.ToUpperInvariant(a[i - 1]) == char.ToUpperInvariant(b[j - 1]) ? 0.1 : 1;
                current[j] = Math.Min(previous[j - 1] + change, Math.Min(previous[j], current[j - 1]) + 1);
            }

            (previous, current) = (current, previous);
        }

        return previous[b.Length];
    }
}
