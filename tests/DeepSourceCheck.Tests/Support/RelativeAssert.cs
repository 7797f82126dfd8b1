namespace DeepSourceCheck.Tests.Support;

/// <summary>
/// Comparisons that stay relative at any magnitude. xunit's decimal places take 100 fT for 400 fT, and library comparisons turn absolute below 1e-16: neither is used on fields.
/// </summary>
internal static class RelativeAssert
{
    /// <summary>|actual - expected| at most tolerance times |expected|.</summary>
    public static void Equal(double expected, double actual, double tolerance, string? what = null)
    {
        double error = Math.Abs(actual - expected);
        Assert.True(error <= tolerance * Math.Abs(expected),
            $"{what} expected {expected:R}, actual {actual:R}, relative error {error / Math.Abs(expected):E2}, allowed {tolerance:E1}");
    }

    /// <summary>Largest absolute difference relative to the largest absolute reference value: the metric of the reference cases.</summary>
    public static double NormError(ReadOnlySpan<double> expected, ReadOnlySpan<double> actual)
    {
        Assert.Equal(expected.Length, actual.Length);
        double top = 0, worst = 0;
        for (int i = 0; i < expected.Length; i++)
        {
            top = Math.Max(top, Math.Abs(expected[i]));
            double difference = Math.Abs(actual[i] - expected[i]);
            worst = double.IsNaN(difference) ? double.PositiveInfinity : Math.Max(worst, difference);
        }

        return top > 0 ? worst / top : worst;
    }

    /// <summary>Fails when <see cref="NormError"/> exceeds the tolerance.</summary>
    public static void Close(ReadOnlySpan<double> expected, ReadOnlySpan<double> actual, double tolerance, string? what = null)
    {
        double error = NormError(expected, actual);
        Assert.True(error <= tolerance, $"{what} differs by {error:E2} of the largest value, allowed {tolerance:E1}");
    }
}
