using System.Globalization;

namespace DeepSourceCheck.Core.Results;

/// <summary>How rounded numbers are written in words for people: one place, so that verdicts, console, figures and page agree.</summary>
/// <remarks>ASCII, invariant culture. Two significant digits, trailing zeros kept; minutes with one decimal below ten.</remarks>
public static class Rounded
{
    /// <summary>Minutes: `0.5`, `7.5`, `75`, `750`; below 0.1 `under 0.1`.</summary>
    /// <param name="minutes">Time [min].</param>
    public static string Minutes(double minutes) => minutes switch
    {
        < 0.1 => "under 0.1",
        < 9.95 => minutes.ToString("0.0", CultureInfo.InvariantCulture),
        _ => Two(minutes),
    };

    /// <summary>Minutes longer than a session: with as many more digits as tell them from it, `20.1` beside 20.</summary>
    /// <param name="minutes">Time [min], above the session's.</param>
    /// <param name="session">Length of the session [min].</param>
    public static string MinutesBeyond(double minutes, double session)
    {
        string written = Minutes(minutes);
        for (int digits = 3; digits <= 8 && AsWritten(minutes, written) <= session; digits++)
        {
            written = Significant(minutes, digits);
        }

        return written;
    }

    /// <summary>The minutes that <see cref="Minutes"/> writes, as a number [min]; for differences that have to add up beside them.</summary>
    public static double AsWritten(double minutes) => AsWritten(minutes, Minutes(minutes));

    private static double AsWritten(double minutes, string written) => minutes < 0.1 ? minutes : double.Parse(written, NumberStyles.Float | NumberStyles.AllowThousands, CultureInfo.InvariantCulture);

    /// <summary>Two significant digits, with thousands commas: `0.25`, `4.8`, `190`, `12,000`.</summary>
    public static string Two(double value) => Significant(value, 2);

    /// <summary>So many significant digits, trailing zeros kept, no exponent between 1e-4 and 1e9.</summary>
    public static string Significant(double value, int digits)
    {
        if (value == 0)
        {
            return "0";
        }

        if (!double.IsFinite(value))
        {
            return "not defined";
        }

        // The exponent after rounding: 0.0999 to two digits is 0.10.
        string scientific = value.ToString("E" + (digits - 1).ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
        int exponent = int.Parse(scientific[(scientific.IndexOf('E', StringComparison.Ordinal) + 1)..], CultureInfo.InvariantCulture);
        if (exponent is < -4 or > 9)
        {
            return $"{scientific[..scientific.IndexOf('E', StringComparison.Ordinal)]}e{exponent.ToString(CultureInfo.InvariantCulture)}";
        }

        double rounded = double.Parse(scientific, CultureInfo.InvariantCulture);
        int decimals = Math.Max(0, digits - 1 - exponent);
        return rounded.ToString("N" + decimals.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
    }

    /// <summary>`each of 4 averages (2 conditions, 2 replications)` where a session holds several; empty where it holds one.</summary>
    public static string Averages(int conditions, int replications) => (conditions, replications) switch
    {
        (1, 1) => "",
        (_, 1) => $"each of {Number(conditions)} conditions",
        (1, _) => $"each of {Number(replications)} replications",
        _ => $"each of {Number(conditions * replications)} averages ({Number(conditions)} conditions, {Number(replications)} replications)",
    };

    private static string Number(int count) => count.ToString(CultureInfo.InvariantCulture);
}
