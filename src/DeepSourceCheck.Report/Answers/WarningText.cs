namespace DeepSourceCheck.Report.Answers;

/// <summary>Warnings as people read them: regions that share a warning stand before it once.</summary>
public static class WarningText
{
    private const string Mark = ": ";

    /// <summary>`pons: worst there` and `medulla: worst there` become `pons, medulla: worst there`; order of first appearance.</summary>
    public static IReadOnlyList<string> Grouped(IEnumerable<string> warnings)
    {
        var names = new Dictionary<string, List<string>>(StringComparer.Ordinal);
        var order = new List<string>();
        foreach (string warning in warnings)
        {
            int at = warning.IndexOf(Mark, StringComparison.Ordinal);
            // Without a leading name a warning is its own group.
            string text = at > 0 ? warning[at..] : warning;
            if (!names.TryGetValue(text, out List<string>? list))
            {
                names[text] = list = [];
                order.Add(text);
            }

            if (at > 0 && !list.Contains(warning[..at]))
            {
                list.Add(warning[..at]);
            }
        }

        return [.. order.Select(text => string.Join(", ", names[text]) + text)];
    }

    /// <summary>The warnings of one region in a row that names it already, as sentences.</summary>
    public static string InRow(string region, IEnumerable<string> warnings) => string.Join(" ", warnings.Select(w =>
    {
        string text = w.StartsWith(region + Mark, StringComparison.Ordinal) ? w[(region.Length + Mark.Length)..] : w;
        return text.Length == 0 ? text : $"{char.ToUpperInvariant(text[0])}{text[1..]}.";
    }));
}
