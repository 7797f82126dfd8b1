using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Numerics;

/// <summary>Digits where a ratio is close to 1.</summary>
public class RatioPowersTests
{
    private const double Rounding = 1e-15;

    [Theory]
    [InlineData(1e-3)]
    [InlineData(1e-9)]
    [InlineData(1e-15)]
    public void LogOfRatio_OfCloseNumbers_KeepsItsDigits(double h)
    {
        // ln(1 + h) = h - h^2/2 + h^3/3 - h^4/4 + h^5/5; the difference in memory is that of the rounded numbers.
        double a = 1 + h, difference = a - 1;
        double expected = difference * (1 - difference * (1.0 / 2 - difference * (1.0 / 3 - difference * (1.0 / 4 - difference / 5))));
        RelativeAssert.Equal(expected, RatioPowers.LogOfRatio(a, 1), Rounding);
        RelativeAssert.Equal(-expected, RatioPowers.LogOfRatio(1, a), Rounding);
    }

    [Theory]
    [InlineData(-1e-12)]
    [InlineData(-1e-4)]
    public void OneMinusExp_OfSmallExponents_KeepsItsDigits(double x) =>
        RelativeAssert.Equal(-x * (1 + x / 2 * (1 + x / 3 * (1 + x / 4))), RatioPowers.OneMinusExp(x), Rounding);

    [Theory]
    [InlineData(-0.7)]
    [InlineData(-5)]
    [InlineData(-800)]
    public void OneMinusExp_OfLargeExponents_IsThePlainForm(double x) => RelativeAssert.Equal(1 - Math.Exp(x), RatioPowers.OneMinusExp(x), Rounding);
}
