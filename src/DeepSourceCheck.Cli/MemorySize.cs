using System.Globalization;
using System.Text.RegularExpressions;

namespace DeepSourceCheck.Cli;

/// <summary>Sizes of memory as people write them: 4GB, 800MB, 2GiB, 1.5 GB.</summary>
internal static partial class MemorySize
{
    /// <summary>Reads a size.</summary>
    /// <param name="text">A number and a unit: B, kB, MB, GB, TB (powers of 1000), KiB, MiB, GiB, TiB (powers of 1024); case does not matter.</param>
    /// <param name="bytes">The size [bytes], at least 1.</param>
    /// <returns>False where the text is no such size or is beyond the largest whole number of 64 bits.</returns>
    public static bool TryParse(string text, out long bytes)
    {
        bytes = 0;
        Match match = Pattern().Match(text);
        if (!match.Success || !double.TryParse(match.Groups[1].ValueSpan, NumberStyles.AllowDecimalPoint, CultureInfo.InvariantCulture, out double number))
        {
            return false;
        }

        string unit = match.Groups[2].Value.ToUpperInvariant();
        int power = unit[0] switch { 'K' => 1, 'M' => 2, 'G' => 3, 'T' => 4, _ => 0 };
        double value = number * Math.Pow(unit.Length == 3 ? 1024 : 1000, power);
        if (value < 1 || value >= long.MaxValue)
        {
            return false;
        }

        bytes = (long)value;
        return true;
    }

    /// <summary>A size in words: `35 MB`, `1.2 GB` (powers of 1000).</summary>
    /// <param name="bytes">Size [bytes].</param>
    public static string Rough(long bytes) => bytes switch
    {
        < 1_000_000 => string.Create(CultureInfo.InvariantCulture, $"{bytes / 1e3:0.#} kB"),
        < 1_000_000_000 => string.Create(CultureInfo.InvariantCulture, $"{bytes / 1e6:0} MB"),
        _ => string.Create(CultureInfo.InvariantCulture, $"{bytes / 1e9:0.#} GB"),
    };

    [GeneratedRegex(@"^\s*([0-9]+(?:\.[0-9]+)?)\s*(B|kB|MB|GB|TB|KiB|MiB|GiB|TiB)\s*$", RegexOptions.IgnoreCase | RegexOptions.CultureInvariant)]
    private static partial Regex Pattern();
}
