using System.Numerics;

using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Noise.Recordings;

/// <summary>The band-pass against its definition: what passes, what does not, and that time does not shift.</summary>
public class BandPassTests
{
    // Double precision through transforms of some ten thousand points.
    private const double Rounding = 1e-11;

    [Theory]
    [InlineData(1, 40, 250)]
    [InlineData(0, 30, 200)]
    [InlineData(100, 1500, 5000)]
    [InlineData(36, 44, 500)]
    public void Filter_PassesTheBand_AndStopsWhatLiesBeyondItsTransitions(double low, double high, double rate)
    {
        var filter = new BandPass(new Band(low, high), rate);
        double width = high - low, below = Math.Min(Math.Max(0.25 * low, Math.Min(low, 2)), width / 2), above = Math.Min(Math.Max(0.25 * high, 2), width / 2);
        double middle = Gain((low + below / 2 + high - above / 2) / 2);
        Assert.InRange(middle, 0.99, 1.12);                                              // narrow bands are raised so that their noise power is right
        RelativeAssert.Equal(middle, Gain(high - above), 0.01, "upper end");
        Assert.InRange(Gain(high + above), 0, 1e-3);
        RelativeAssert.Equal(middle / 2, Gain(high), 0.02, "half of the amplitude at the edge");
        if (low > 0)
        {
            RelativeAssert.Equal(middle, Gain(low + below), 0.01, "lower end");
            Assert.InRange(Gain(low - below), 0, 1e-3);
            Assert.InRange(Gain(0), 0, 1e-12);
        }

        double Gain(double f)
        {
            Complex sum = Complex.Zero;
            for (int n = 0; n < filter.Taps.Count; n++)
            {
                sum += filter.Taps[n] * Complex.FromPolarCoordinates(1, -2 * Math.PI * f / rate * (n - filter.Margin));
            }

            Assert.InRange(Math.Abs(sum.Imaginary), 0, 1e-12);                           // zero phase
            return Math.Abs(sum.Real);
        }
    }

    [Theory]
    [InlineData(1, 40, 250)]
    [InlineData(100, 1500, 5000)]
    [InlineData(39.5, 40.5, 500)]
    public void WhiteNoise_KeepsThePowerOfItsDensityOverTheBand(double low, double high, double rate) =>
        RelativeAssert.Equal((high - low) / (rate / 2), new BandPass(new Band(low, high), rate).Taps.Sum(h => h * h), Rounding);

    [Fact]
    public void Apply_IsThePlainConvolution_WithoutItsEnds()
    {
        var random = new Random(3);
        var filter = new BandPass(new Band(5, 40), 250);
        double[][] values = [.. Enumerable.Range(0, 3).Select(_ => Enumerable.Range(0, 9000).Select(_ => random.NextDouble() - 0.3).ToArray())];
        double[][] result = filter.Apply(values);
        for (int c = 0; c < values.Length; c++)
        {
            Assert.Equal(9000 - 2 * filter.Margin, result[c].Length);
            double[] plain = [.. Enumerable.Range(0, result[c].Length).Select(n => filter.Taps.Select((h, k) => h * values[c][n + 2 * filter.Margin - k]).Sum())];
            RelativeAssert.Close(plain, result[c], Rounding);
        }
    }

    [Fact]
    public void ShortStretch_LeavesNothing()
    {
        var filter = new BandPass(new Band(1, 40), 250);
        Assert.Empty(filter.Apply([new double[2 * filter.Margin]])[0]);
        Assert.Single(filter.Apply([new double[2 * filter.Margin + 1]])[0]);
    }
}
