namespace DeepSourceCheck.Core.Studies;

/// <summary>The known name that is closest to a mistyped one.</summary>
/// <remarks>Edit distance with transpositions of neighbours counted once (Damerau 1964, restricted form), letter case ignored.</remarks>
public static class NearestName
{
    /// <summary>Longest name that is compared; longer ones have no nearest name.</summary>
    private const int LongestName = 100;

    /// <summary>The nearest of the known names, the first of equals; null without any or for a name beyond 100 characters.</summary>
    public static string? Of(string name, IEnumerable<string> known)
    {
        if (name.Length > LongestName)
        {
            return null;
        }

        return known.MinBy(candidate => Distance(name, candidate));
    }

    /// <summary>` (nearest: X)`, or nothing where no known name is near.</summary>
    public static string Hint(string name, IEnumerable<string> known) =>
        Of(name, known) is { } near && Distance(name, near) <= Math.Max(2, name.Length / 2) ? $" (nearest: {near})" : "";

    /// <summary>Insertions, deletions, replacements and swaps of neighbours that turn one name into the other.</summary>
    public static int Distance(string a, string b)
    {
        var d = new int[a.Length + 1, b.Length + 1];
        for (int i = 0; i <= a.Length; i++)
        {
            d[i, 0] = i;
        }

        for (int j = 0; j <= b.Length; j++)
        {
            d[0, j] = j;
        }

        for (int i = 1; i <= a.Length; i++)
        {
            for (int j = 1; j <= b.Length; j++)
            {
                int change = Same(a[i - 1], b[j - 1]) ? 0 : 1;
                d[i, j] = Math.Min(Math.Min(d[i - 1, j] + 1, d[i, j - 1] + 1), d[i - 1, j - 1] + change);
                if (i > 1 && j > 1 && Same(a[i - 1], b[j - 2]) && Same(a[i - 2], b[j - 1]))
                {
                    d[i, j] = Math.Min(d[i, j], d[i - 2, j - 2] + 1);
                }
            }
        }

        return d[a.Length, b.Length];
    }

    private static bool Same(char x, char y) => char.ToUpperInvariant(x) == char.ToUpperInvariant(y);
}
