using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Noise;

/// <summary>Effective numbers of regularly repeated trials.</summary>
public class RepeatedAverageTests
{
    /// <summary>Relative: cells of the comb take the density at their centroid, and the plain sum over lags has steps of its own.</summary>
    private const double CellTolerance = 1e-3;

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
    [InlineData(1.0, 40, 5, 897, 0.0)]
    [InlineData(1.0, 40, 5, 23_976, 0.0)]
    [InlineData(1.0, 40, 10, 500, 0.1)]
    [InlineData(100.0, 1500, 21.1, 897, 0.0)]
    [InlineData(100.0, 1500, 21.1, 3_000, 0.1)]
    public void EffectiveShare_OfAFallingSpectrum_EqualsFineIntegration(double low, double high, double rate, double trials, double rejected)
    {
        double presented = Math.Ceiling(trials / (1 - rejected));
        RelativeAssert.Equal(Fine(Falling, low, high, rate, presented, rejected), RepeatedAverage.EffectiveShare(Falling, low, high, [], rate, trials, rejected, 0), CellTolerance);
    }

    [Theory]
    [InlineData(1.0, 40, 5)]
    [InlineData(1.0, 40, 10)]
    [InlineData(2.5, 38, 7.3)]
    public void ManyTrials_TendToTheRatioOfBandToHarmonics(double low, double high, double rate)
    {
        // Derived: M |D_M|^2 tends to 1/r times unit masses at the harmonics; one on an edge counts half.
        double band = 0, comb = 0;
        const int Steps = 200_000;
        for (int k = 0; k < Steps; k++)
        {
            band += Falling(low + (k + 0.5) * (high - low) / Steps) * (high - low) / Steps;
        }

        for (double k = Math.Ceiling(low / rate); k * rate <= high; k++)
        {
            comb += rate * Falling(k * rate) * (k * rate == low || k * rate == high ? 0.5 : 1);
        }

        RelativeAssert.Equal(band / comb, RepeatedAverage.EffectiveShare(Falling, low, high, [], rate, 1e6, 0, 0), CellTolerance);
    }

    // As EEG: f^-2 in power at low frequencies over a floor.
    private static double Falling(double f) => 1 / (0.02 + f * f / 100 + f * f * f / 4000) + 0.01;

    // The comb integrated with 40 points in every lobe of the whole band.
    private static double Fine(Func<double, double> density, double low, double high, double rate, double presented, double rejected)
    {
        long steps = (long)Math.Ceiling((high - low) / rate * presented * 40);
        double step = (high - low) / steps, variance = 0, locked = 0;
        for (long k = 0; k < steps; k++)
        {
            double f = low + (k + 0.5) * step, u = Math.IEEERemainder(f / rate, 1), below = presented * Math.Sin(Math.PI * u), above = Math.Sin(Math.PI * presented * u);
            double power = density(f) * step;
            variance += power;
            locked += power * presented * (below == 0 ? 1 : above * above / (below * below));
        }

        return variance / ((1 - rejected) * locked + rejected * variance);
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
