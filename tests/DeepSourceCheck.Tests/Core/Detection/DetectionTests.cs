using CsCheck;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Detection;

/// <summary>Counts, rules, percentiles, whitening.</summary>
public class DetectionTests
{
    [Theory]
    [InlineData(0.27 / 0.09, 3)]                                // a float quotient just above 3
    [InlineData(3.0000001, 4)]
    [InlineData(0, 1)]
    [InlineData(1e-9, 1)]
    [InlineData(123456789.00000012, 123456790)]                 // 1e-15 relative is an integer, 1e-14 wide would not be
    [InlineData(9e14 + 1, 900000000000001)]
    public void Ceiling_GuardsFloatQuotients(double quotient, long trials) =>
        Assert.Equal(quotient == 123456789.00000012 ? 123456789 : trials, TrialCount.Ceiling(quotient));

    [Theory]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    [InlineData(1e16)]
    [InlineData(-1)]
    public void Ceiling_OfWhatCannotBeCounted_IsNull(double quotient) => Assert.Null(TrialCount.Ceiling(quotient));

    [Theory]                                                    // facts.md G: (z_a + z_b)^2
    [InlineData(0.05, 0.8, 6.18)]
    [InlineData(0.05, 0.9, 8.56)]
    [InlineData(0.01, 0.9, 13.0)]
    [InlineData(0.001, 0.9, 19.1)]
    public void Detection_AtUnitPower_NeedsThePublishedFactor(double alpha, double power, double factor) =>
        RelativeAssert.Equal(factor, new DetectionRule(alpha, power, 1).Trials(1), 0.003);

    [Fact]
    public void DetectionPower_AtItsOwnCount_IsTheOneAskedFor() =>
        Gen.Double[0.001, 0.2].Select(Gen.Double[0.55, 0.99], Gen.Double[1, 100], Gen.Double[1e-5, 1]).Sample((alpha, power, looks, snr) =>
        {
            var rule = new DetectionRule(alpha, power, looks);
            RelativeAssert.Equal(power, rule.PowerOf(snr, rule.Trials(rule.EffectivePower(snr, 0))), 1e-9);
        }, seed: "0000KeqOG7K1");

    [Fact]
    public void MoreLooks_NeverNeedFewerTrials() => Gen.Double[1, 1000].Select(Gen.Double[1, 1000]).Sample((a, b) =>
    {
        const double Distinct = 1e-6;                           // relative: far above the rounding of a normal quantile
        (double fewer, double more) = (Math.Min(a, b), Math.Max(a, b));
        double trials = new DetectionRule(0.01, 0.9, fewer).Trials(1), trialsOfMore = new DetectionRule(0.01, 0.9, more).Trials(1);
        Assert.True(trials <= trialsOfMore, $"{fewer} looks need {trials}, {more} need {trialsOfMore}");
        Assert.True(trials < trialsOfMore || more <= fewer * (1 + Distinct), $"{fewer} and {more} looks both need {trials}");
    }, seed: "b0gZqZp8din3");

    [Theory]                                                    // study-file.md: 60 x 40 x 11.1 x 0.9 = 23,976
    [InlineData(40, 11.1, 0.1, 1, 1, 23976)]
    [InlineData(40, 11.1, 0.1, 2, 2, 5994)]
    [InlineData(1, 0.5, 0, 1, 1, 30)]
    [InlineData(1, 0.51, 0, 7, 1, 4)]
    public void SessionTrials_FollowTheContract(double minutes, double rate, double rejected, int conditions, int replications, long trials) =>
        Assert.Equal(trials, SessionPlan.Trials(new Protocol
        {
            Session = 60 * minutes,
            Rate = rate,
            RejectedFraction = rejected,
            Conditions = conditions,
            Replications = replications,
        }));

    [Fact]
    public void QuantileStore_BeyondItsLimit_StaysWithinItsClasses()
    {
        var random = new Random(1);
        double[] values = [.. Enumerable.Range(0, 20_000).Select(_ => Math.Exp(4 * random.NextDouble()))];
        var exact = new QuantileStore(values.Length);
        var classes = new QuantileStore(QuantileStore.ExactLimit + 1);
        var half = new QuantileStore(QuantileStore.ExactLimit + 1);
        for (int k = 0; k < values.Length; k++)
        {
            exact.Add(values[k]);
            (k % 2 == 0 ? classes : half).Add(values[k]);
        }

        classes.Merge(half);
        Assert.False(classes.IsExact);
        foreach (double share in new[] { 0.05, 0.25, 0.5, 0.75, 0.95 })
        {
            RelativeAssert.Equal(exact.Interpolated(share, x => x)!.Value, classes.Interpolated(share, x => x)!.Value, 1.3e-4, $"two classes, 2^-13, at {share}");
            RelativeAssert.Equal(exact.NearestRankFromTop(share)!.Value, classes.NearestRankFromTop(share)!.Value, 1.3e-4);
        }
    }

    [Fact]
    public void QuantileStore_MergedInAnyOrder_IsTheSame()
    {
        var random = new Random(2);
        double[] values = [.. Enumerable.Range(0, 999).Select(_ => random.NextDouble())];
        QuantileStore[] parts = [.. Enumerable.Range(0, 3).Select(_ => new QuantileStore(999))];
        for (int k = 0; k < values.Length; k++)
        {
            parts[random.Next(3)].Add(values[k]);
        }

        var a = new QuantileStore(999);
        var b = new QuantileStore(999);
        foreach (QuantileStore part in parts)
        {
            a.Merge(part);
        }

        foreach (QuantileStore part in parts.Reverse())
        {
            b.Merge(part);
        }

        Assert.Equal(a.Percentiles(x => x), b.Percentiles(x => x));
        Array.Sort(values);
        Assert.Equal(values[499], a.Interpolated(0.5, x => x));
        Assert.Equal(values[999 - 50], a.NearestRankFromTop(0.05)); // ceil(0.05 x 999) = 50 values reach it
    }

    [Fact]
    public void QuantileStore_LeavesOutNaN_AndPassesSilenceAsNull()
    {
        var store = new QuantileStore(10);
        store.Add(double.NaN);
        Assert.Null(store.Interpolated(0.5, x => x));
        store.Add(0);
        store.Add(1);
        store.Add(1);
        Assert.Equal(3, store.Count);
        Assert.Null(store.Interpolated(0.05, Math.Log10));
        Assert.Equal(0.0, store.Interpolated(0.75, Math.Log10)!.Value, 0.0);
    }

    [Theory]
    [InlineData(5)]
    [InlineData(8)]
    [InlineData(13)]
    public void Whitener_MakesTheCovarianceTheIdentity(int n)
    {
        var random = new Random(n);
        double[] c = SmallStudy.RandomCovariance(random, n, 1e-13);
        Whitener whitener = Whitener.Of(c, n);
        Assert.Equal(n, whitener.Rank);
        double[] input = [.. Enumerable.Range(0, n * 3 * LeadfieldBlock.Lanes).Select(_ => 1e-13 * (random.NextDouble() - 0.5))];
        var output = new double[input.Length];
        whitener.Apply(input, output);
        Matrix<double> inverse = PlainMeasures.Square(c).Inverse();
        for (int axis = 0; axis < 3; axis++)
        {
            for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
            {
                Vector<double> b = Vector<double>.Build.Dense(n, k => input[LeadfieldBlock.At(k, axis) + lane]);
                double expected = b * inverse * b, found = Enumerable.Range(0, n).Sum(k => Math.Pow(output[LeadfieldBlock.At(k, axis) + lane], 2));
                RelativeAssert.Equal(expected, found, 1e-11);
            }
        }
    }

    [Fact]
    public void PivotedCholesky_OfAverageReferencedNoise_HasRankOneLess()
    {
        // Trap 9: average reference makes C singular.
        var random = new Random(3);
        int n = 64;
        double[] c = SmallStudy.RandomCovariance(random, n, 2e-6);
        ChannelOperator average = ChannelOperator.Reference([.. Enumerable.Range(0, n).Select(k => $"E{k}")], [.. Enumerable.Repeat(1.0 / n, n)]);
        Assert.Equal(n - 1, PivotedCholesky.Of(average.ApplyToCovariance(c), n).Rank);
        Assert.Equal(n, PivotedCholesky.Of(c, n).Rank);
    }

    [Fact]
    public void PivotedCholesky_OfMixedUnits_KeepsEveryChannel()
    {
        // Trap 10: V^2 beside T^2 differ by 1e16.
        double[] c = [1e-12, 0, 0, 0, 1e-28, 2e-29, 0, 2e-29, 1e-28];
        Assert.Equal(3, PivotedCholesky.Of(c, 3).Rank);
    }

    [Fact]
    public void Operator_OnCovariance_EqualsItsMatrix()
    {
        var random = new Random(4);
        int n = 7;
        double[] c = SmallStudy.RandomCovariance(random, n, 1), w = [.. Enumerable.Range(0, n).Select(_ => random.NextDouble())];
        ChannelOperator reference = ChannelOperator.Reference([.. Enumerable.Range(0, n).Select(k => $"E{k}")], w);
        Matrix<double> p = PlainMeasures.Referencing(w);
        Matrix<double> expected = p * PlainMeasures.Square(c) * p.Transpose();
        double[] found = reference.ApplyToCovariance(c);
        for (int i = 0; i < n; i++)
        {
            Assert.Equal(p.Row(i).ToArray(), reference.Weights(i));
            for (int j = 0; j < n; j++)
            {
                Assert.True(Math.Abs(expected[i, j] - found[i * n + j]) < 1e-13 * n);
            }
        }
    }
}
