using System.Globalization;

namespace DeepSourceCheck.Cli;

/// <summary>Times in words, as rough as they are known.</summary>
internal static class Durations
{
    /// <summary>A time in words: `0.3 s`, `12 s`, `3 min`, `2.5 h`.</summary>
    /// <param name="seconds">Time [s], not negative.</param>
    public static string Rough(double seconds) => seconds switch
    {
        < 0.1 => "0.1 s",
        < 9.95 => string.Create(CultureInfo.InvariantCulture, $"{seconds:0.0} s"),
        < 99.5 => string.Create(CultureInfo.InvariantCulture, $"{seconds:0} s"),
        < 5970 => string.Create(CultureInfo.InvariantCulture, $"{seconds / 60:0} min"),
        _ => string.Create(CultureInfo.InvariantCulture, $"{seconds / 3600:0.#} h"),
    };
}
