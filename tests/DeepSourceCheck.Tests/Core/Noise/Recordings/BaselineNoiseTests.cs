using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Tests.Core.Noise.Recordings;

/// <summary>Recordings whose noise is known: what comes out is what went in.</summary>
public class BaselineNoiseTests
{
    private const double Rate = 250, Microvolt = 1e-6;

    private static readonly Band Slow = new(5, 45);

    private static double[][] White(int channels, double seconds, int seed, double rms = 4 * Microvolt)
    {
        var random = new Random(seed);
        return [.. Enumerable.Range(0, channels).Select(_ => Enumerable.Range(0, (int)(seconds * Rate)).Select(_ => Normal.Sample(random, 0, rms)).ToArray())];
    }

    private static BaselineNoise Baseline(double[][] values, double limit = 1, int[]? rows = null) => Baseline([values], limit, rows);

    private static BaselineNoise Baseline(double[][][] stretches, double limit, int[]? rows) => new()
    {
        File = "r.edf",
        Recording = new Recording { SamplingRate = Rate, Stretches = [.. stretches.Select((s, k) => new RecordedStretch(1000.0 * k, s))], AtLimit = new long[stretches[0].Length] },
        RowOf = rows ?? [.. Enumerable.Range(0, stretches[0].Length)],
        Limit = limit,
    };

    // The covariance against the average, P C P.
    private static double[] Centred(double[] covariance, int p)
    {
        double Row(int i) => Enumerable.Range(0, p).Sum(j => covariance[i * p + j]) / p;
        double all = Enumerable.Range(0, p).Sum(Row) / p;
        return [.. Enumerable.Range(0, p * p).Select(k => covariance[k] - Row(k / p) - Row(k % p) + all)];
    }

    [Fact]
    public void WhiteNoise_HasItsVarianceInTheBand_WithinSamplingError()
    {
        // 4 uV rms over 125 Hz: 4 sqrt(40/125) in 40 Hz, times 1 - 1/p against the average. Standard error of a variance from nu independent samples: sqrt(2/nu); over p - 1 of them less.
        const int p = 4;
        RecordedNoise noise = Baseline(White(p, 120, 1)).InBand(Slow, 1);
        double expected = 16 * Microvolt * Microvolt * 40 / 125 * (1 - 1.0 / p), allowed = 4 * Math.Sqrt(2 / noise.IndependentSamples);
        for (int k = 0; k < p; k++)
        {
            RelativeAssert.Equal(expected, noise.Covariance[k * p + k], allowed);
        }

        RelativeAssert.Equal(2 * 40 * noise.SecondsUsed, noise.IndependentSamples, 1e-12);
        Assert.InRange(noise.SecondsUsed, 117, 120);
        Assert.Equal((120.0, 0), (noise.SecondsRead, noise.Rejected));
        Assert.InRange(noise.HeldOutShare, 0.97, 1);
    }

    [Fact]
    public void MixedSources_HaveTheCovarianceOfTheirMixture()
    {
        // x = M s with independent white s: C = M M' times the share of the band. Four standard errors of an element, sqrt((C_ii C_jj + C_ij^2)/nu).
        double[,] mixing = { { 2, 0.5, 0 }, { 1, 1, 0.3 }, { 0, 1.5, 1 }, { -1, 0.2, 2 } };
        double[][] sources = White(3, 200, 5, Microvolt);
        double[][] mixed = [.. Enumerable.Range(0, 4).Select(i => Enumerable.Range(0, sources[0].Length).Select(n => mixing[i, 0] * sources[0][n] + mixing[i, 1] * sources[1][n] + mixing[i, 2] * sources[2][n]).ToArray())];
        double[] plain = [.. Enumerable.Range(0, 16).Select(k => Enumerable.Range(0, 3).Sum(s => mixing[k / 4, s] * mixing[k % 4, s]) * Microvolt * Microvolt * 40 / 125)];
        double[] expected = Centred(plain, 4);
        RecordedNoise noise = Baseline(mixed).InBand(Slow, 1);
        for (int k = 0; k < 16; k++)
        {
            double a = expected[k / 4 * 5], b = expected[k % 4 * 5];
            Assert.InRange(noise.Covariance[k] - expected[k], -4 * Math.Sqrt((a * b + expected[k] * expected[k]) / noise.IndependentSamples), 4 * Math.Sqrt((a * b + expected[k] * expected[k]) / noise.IndependentSamples));
        }
    }

    [Fact]
    public void ReferenceOfTheRecording_DoesNotMatter()
    {
        // Against nothing, against the third electrode with its row of zeros, and against it without a row. The same numbers but for rounding.
        double[][] values = White(4, 30, 2);
        double[][] against = [.. values.Select(row => row.Select((v, n) => v - values[2][n]).ToArray())];
        double[] plain = Baseline(values).InBand(Slow, 0.5).Covariance;
        RelativeAssert.Close(plain, Baseline(against).InBand(Slow, 0.5).Covariance, 1e-12);
        RelativeAssert.Close(plain, Baseline([against[0], against[1], against[3]], rows: [0, 1, -1, 2]).InBand(Slow, 0.5).Covariance, 1e-12);
        for (int i = 0; i < 4; i++)
        {
            Assert.InRange(Math.Abs(plain[(4 * i)..(4 * i + 4)].Sum()), 0, 1e-12 * plain[5 * i]);
        }
    }

    [Fact]
    public void SegmentsAboveTheLimit_AreLeftOut_AndCounted()
    {
        double[][] values = White(3, 60, 4);
        for (int n = 5000; n < 5010; n++)
        {
            values[1][n] += 500 * Microvolt;                     // a jump of 40 ms at 20 s
        }

        // Band-passed, the noise is 1.8 uV rms: six of those are never reached by chance. The jump rings for some tenths of a second on either side.
        RecordedNoise all = Baseline(values).InBand(Slow, 0.5), kept = Baseline(values, 11 * Microvolt).InBand(Slow, 0.5), clean = Baseline(White(3, 60, 4)).InBand(Slow, 0.5);
        Assert.InRange(kept.Rejected, 1, 4);
        Assert.Equal((all.Segments, 0), (kept.Segments, all.Rejected));
        RelativeAssert.Equal(all.SecondsUsed - 0.5 * kept.Rejected, kept.SecondsUsed, 1e-12);
        Assert.True(all.Covariance[4] > 2 * clean.Covariance[4]);
        RelativeAssert.Equal(clean.Covariance[4], kept.Covariance[4], 0.04);
    }

    [Fact]
    public void NarrowBand_ReadFromAWiderOne_HasItsShareByWidth()
    {
        var steady = new SteadyState(40, 2);
        Band around = BaselineNoise.Around(steady);
        Assert.Equal((36.0, 44.0), (around.Low, around.High));
        BaselineNoise baseline = Baseline(White(3, 60, 6));
        RecordedNoise bin = baseline.InBand(steady.Bin, 1, around), whole = baseline.InBand(around, 1);
        RelativeAssert.Close([.. whole.Covariance.Select(c => c / 16)], bin.Covariance, 1e-12);
        RelativeAssert.Equal(whole.MedianRms / 4, bin.MedianRms, 1e-12);
        Assert.Equal((steady.Bin, around, whole.IndependentSamples), (bin.Band, bin.BandRead, bin.IndependentSamples));
    }

    [Fact]
    public void Gaps_CostTheFilterAtEveryStretch_AndJoinNothing()
    {
        double[][] first = White(3, 30, 8), second = White(3, 30, 9);
        double offset = 1;                                       // 1 V between the stretches: joined, it would swamp everything
        double[][] moved = [.. second.Select((row, k) => row.Select(v => v + k * offset).ToArray())];
        RecordedNoise apart = Baseline([first, second], 1, null).InBand(Slow, 0.5), shifted = Baseline([first, moved], 1, null).InBand(Slow, 0.5);
        // A volt in double precision leaves 1e-16 V, some 1e-10 of the noise.
        RelativeAssert.Close(apart.Covariance, shifted.Covariance, 1e-8);
        Assert.True(apart.SecondsUsed < 60 - 4 * new BandPass(Slow, Rate).Margin / Rate + 1);
    }

    [Fact]
    public void SameRecording_GivesTheSameBytes()
    {
        double[][] values = White(5, 20, 10);
        Assert.Equal(Baseline(values).InBand(Slow, 0.5).Covariance, Baseline(values).InBand(Slow, 0.5).Covariance);
    }

    [Theory]
    [InlineData(1.5, 1.0, 5, 45, 1.0, "noise.eeg_recording", "whole segments of 1 s in 5 to 45 Hz: the filter takes")]
    [InlineData(30, 1e-7, 5, 45, 1.0, "noise.eeg_recording.limit_uV", "is 0.1 uV and leaves 0 of")]
    // 1 Hz wide: the filter is 11 s long, and 5 s or so are left of 16.
    [InlineData(16, 1.0, 5, 6, 1.0, "noise.eeg_recording", "independent samples in 5 to 6 Hz")]
    public void TooLittle_IsRefusedWithWhatToDo(double seconds, double limit, double low, double high, double segment, string key, string part)
    {
        InputProblem problem = Assert.Single(Assert.Throws<InputException>(() => Baseline(White(3, seconds, 1), limit).InBand(new Band(low, high), segment)).Problems);
        Assert.Equal(key, problem.Key);
        Assert.Contains(part, problem.Message, StringComparison.Ordinal);
    }
}
