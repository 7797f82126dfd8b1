using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Noise;

/// <summary>Effective numbers of regularly repeated trials.</summary>
public class RepeatedAverageTests
{
    /// <summary>Relative: cells of the comb take the density at their middle.</summary>
    private const double CellTolerance = 0.02;

    [Theory]
    [InlineData(3.0, 40, 8.0, 0.0, 0.0)]
    [InlineData(3.0, 40, 8.0, 0.25, 0.0)]
    [InlineData(3.0, 40, 8.0, 0.0, 0.04)]
    [InlineData(1.1, 100, 5.0, 0.5, 0.3)]
    [InlineData(4.9, 12, 30.0, 0.1, 0.02)]
    public void EffectiveShare_EqualsThatFromTheCovariances(double rate, int presented, double slopeAt, double rejected, double jitter)
    {
        // A line of 1 Hz width near a harmonic on a falling floor: neither symmetric nor smooth on the scale of the rate.
        double Density(double f) => 1 / (1 + f / slopeAt) + 5 * Math.Exp(-Math.Pow(f - 3.1 * rate, 2));
        double expected = PlainRepeatedAverage.EffectiveShare(Density, 0.7, 40, rate, presented, rejected, jitter);
        double found = RepeatedAverage.EffectiveShare(Density, 0.7, 40, [], rate, presented * (1 - rejected), rejected, jitter);
        RelativeAssert.Equal(expected, found, CellTolerance);
    }

    [Theory]
    [InlineData(11.1, 300)]
    [InlineData(1, 50)]
    [InlineData(0.1, 5000)]
    public void WhiteNoiseOverManyHarmonics_AveragesAsIndependentTrials(double rate, double trials) =>
        RelativeAssert.Equal(1, RepeatedAverage.EffectiveShare(_ => 1, 100, 1500, [], rate, trials, 0.1, 0), 0.01, "edges of the band fall between harmonics");

    [Fact]
    public void ALineOnAHarmonic_DoesNotAverage_AndOneBetweenAveragesAway()
    {
        // All power within a tenth of the period of the comb: about 10 = 5 x 2 Hz a tenth of the trials count; about 11 Hz noise turns over from trial to trial and cancels.
        static double Line(double f, double at) => Math.Abs(f - at) < 0.1 ? 1 : 1e-9;
        double on = RepeatedAverage.EffectiveShare(f => Line(f, 10), 1, 40, [], 2, 100, 0, 0), between = RepeatedAverage.EffectiveShare(f => Line(f, 10.85), 1, 40, [], 2, 100, 0, 0);
        Assert.InRange(on, 0.07, 0.15);
        Assert.True(between > 50, $"between: {between}");
    }

    [Fact]
    public void JitterOverTheWholeInterval_MakesTrialsIndependent()
    {
        // sinc^2(f w) vanishes at every harmonic for w = 1/rate.
        double Density(double f) => 1 + 50 * Math.Exp(-Math.Pow(f - 10, 2));
        double regular = RepeatedAverage.EffectiveShare(Density, 1, 40, [], 5, 400, 0, 0), jittered = RepeatedAverage.EffectiveShare(Density, 1, 40, [], 5, 400, 0, 0.2);
        Assert.True(regular < 0.6, $"{regular}");
        RelativeAssert.Equal(1, jittered, 0.03, "lobes about a harmonic are not quite at the zero");
    }
}
