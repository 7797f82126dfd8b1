using DeepSourceCheck.Core.Attribution;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Attribution;

/// <summary>What other sources add to the noise, against their definition.</summary>
public class CompetingNoiseTests
{
    // Sums of some thirty terms in another order.
    private const double Order = 1e-13;

    private const int Eeg = 5, Meg = 4;

    [Theory]
    [InlineData(1)]
    [InlineData(8)]
    [InlineData(11)]
    public void Covariance_IsThatOfRandomMomentsAnywhereInTheRegion(int dipoles)
    {
        var random = new Random(dipoles);
        double[][][] e = SmallStudy.Random(random, dipoles, Eeg, 100), m = SmallStudy.Random(random, dipoles, Meg, 1e-6);
        var source = new CompetingNoise(new FixedSource(e, m), Region(dipoles), CancellationToken.None);
        Assert.Equal(dipoles, source.Dipoles);
        const double Moment = 2e-8;
        NoiseCovariance noisy = CompetingNoise.Add(Quiet(), [(source, Moment)], joint: true);
        double[] Plain(double[][][] rows, double[][][] columns, double[] quiet)
        {
            int n = rows[0].Length, k = columns[0].Length;
            var c = (double[])quiet.Clone();
            for (int i = 0; i < n * k; i++)
            {
                c[i] += Moment * Moment / 3 * Enumerable.Range(0, dipoles).Average(d => Enumerable.Range(0, 3).Sum(a => rows[d][i / k][a] * columns[d][i % k][a]));
            }

            return c;
        }

        RelativeAssert.Close(Plain(e, e, Quiet().Eeg), noisy.Eeg, Order, "EEG");
        RelativeAssert.Close(Plain(m, m, Quiet().Meg), noisy.Meg, Order, "MEG");
        RelativeAssert.Close(Plain(e, m, new double[Eeg * Meg]), noisy.Cross!, Order, "between them");
    }

    [Fact]
    public void ZeroStrength_LeavesTheNoiseAsItWas()
    {
        var random = new Random(3);
        var source = new CompetingNoise(new FixedSource(SmallStudy.Random(random, 3, Eeg, 100), SmallStudy.Random(random, 3, Meg, 1e-6)), Region(3), CancellationToken.None);
        NoiseCovariance same = CompetingNoise.Add(Quiet(), [(source, 0)], joint: true);
        Assert.Equal(Quiet().Eeg, same.Eeg);
        Assert.Equal(Quiet().Meg, same.Meg);
        Assert.Null(same.Cross);
    }

    [Fact]
    public void LargeRegion_IsTakenAtEvenlyPickedDipoles()
    {
        int[] picked = Picked.Of(Region(10_000), CompetingNoise.MostDipoles);
        Assert.InRange(picked.Length, CompetingNoise.MostDipoles / 2, CompetingNoise.MostDipoles);
        Assert.Single(picked.Zip(picked.Skip(1), (a, b) => b - a).Distinct());
    }

    private static NoiseCovariance Quiet() => new() { EegRows = Eeg, MegRows = Meg, Eeg = SmallStudy.Identity(Eeg, 4e-12), Meg = SmallStudy.Identity(Meg, 1e-28) };

    private static FilledRegion Region(int dipoles) => new()
    {
        Name = "other",
        Positions = [.. Enumerable.Range(0, dipoles).Select(k => new Vec3(1e-4 * k, 0, 0))],
        Rows = [.. Enumerable.Range(0, dipoles)],
        SourceIndices = [.. Enumerable.Range(0, dipoles)],
    };
}
