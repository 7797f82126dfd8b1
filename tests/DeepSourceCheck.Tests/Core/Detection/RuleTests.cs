using CsCheck;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Detection;

/// <summary>Rules that a study may state side by side: published critical values and counts, and what holds for all of them.</summary>
public class RuleTests
{
    /// <summary>Relative: the counts are real numbers with a closed form.</summary>
    private const double ClosedForm = 1e-12;

    /// <summary>Wave V at 0.45 uV from peak to trough on 2.0 uV rms, 0.12 uV rms over its window: the fixed inputs of the click study (facts of the trade, seen and from memory).</summary>
    private static readonly RuleReading Click = RuleReading.OfOneReading() with { OnePoint = true, NoiseFactor = 2, WindowPerPeak = 0.12 / 0.45 };

    private static readonly double ClickPower = 0.45 * 0.45 / (2 * 2.0 * 2.0);

    private static long? Count(TargetChoice target, double power, RuleReading reading)
    {
        ITargetRule rule = RuleBinding.Of(target, reading);
        return TrialCount.Ceiling(rule.Trials(rule.EffectivePower(power, 0, 1 / (2e-6 * 2e-6))));
    }

    private static VarianceRatioChoice Ratio(double? critical, double? power) => new(critical, critical is null ? 0.01 : null, power, 0.12e-6, 5, 250);

    [Fact]
    public void ClickStudy_HasTheKnownCountByEveryRule()
    {
        // Recomputed from exact distributions outside the project; 3.1 is the published critical value (Elberling and Don 1984).
        Assert.Equal(356, Count(new AmplitudeRatioChoice(3), ClickPower, Click));
        Assert.Equal(577, Count(Ratio(3.1, null), ClickPower, Click));
        Assert.Equal(1262, Count(Ratio(null, 0.9), ClickPower, Click));
        Assert.Equal(1265, Count(Ratio(3.1, 0.9), ClickPower, Click));
        Assert.Equal(2500, Count(new ResidualNoiseChoice(40e-9), ClickPower, Click));
        Assert.Equal(6400, Count(new ResidualNoiseChoice(25e-9), ClickPower, Click));
    }

    [Fact]
    public void Convention_MultipliesTrialsByTheNoiseOfADifference()
    {
        // The same numbers read from the baseline carry half the noise power: amplitude rule 178 instead of 356; the variance ratio and the residual know no convention.
        RuleReading baseline = Click with { NoiseFactor = 1 };
        Assert.Equal(178, Count(new AmplitudeRatioChoice(3), 2 * ClickPower, baseline));
        Assert.Equal(577, Count(Ratio(3.1, null), 2 * ClickPower, baseline));
        Assert.Equal(2500, Count(new ResidualNoiseChoice(40e-9), 2 * ClickPower, baseline));
        Assert.Equal(712, Count(new AmplitudeRatioChoice(3), ClickPower / 2, baseline));     // the half of it, read from the baseline
    }

    [Theory]                                                    // critical T2 at .05, recomputed from exact distributions; digits as given
    [InlineData(2, 20, 7.504)]
    [InlineData(2, 60, 6.421)]
    [InlineData(5, 50, 13.187)]
    [InlineData(10, 100, 21.313)]
    [InlineData(25, 100, 54.556)]
    [InlineData(25, 500, 40.165)]
    public void HotellingCritical_IsTheTabulated(int rows, double trials, double critical) =>
        Assert.Equal(critical, Math.Round(new HotellingRule(0.05, 0.9, 1, rows).Critical(trials), 3));

    [Theory]                                                    // .05 at 500: 0.0060 published (Braz J Med Biol Res 39:1593, seen); the others recomputed; digits as given
    [InlineData(0.05, 20, 0.1459, 4)]
    [InlineData(0.05, 60, 0.0495, 4)]
    [InlineData(0.05, 100, 0.0298, 4)]
    [InlineData(0.05, 500, 0.00599, 5)]
    [InlineData(0.01, 100, 0.0455, 4)]
    public void CriticalCoherence_IsTheTabulated(double alpha, double trials, double critical, int digits) =>
        Assert.Equal(critical, Math.Round(Coherence.Critical(alpha, trials), digits));

    [Theory]                                                    // 40 nV on 0.10 uV/sqrt(Hz), one-sided density: T = lambda density / A^2; recomputed from exact distributions
    [InlineData(0.05, 0.8, 61)]
    [InlineData(0.05, 0.9, 80)]
    public void SteadyState_NeedsTheKnownSeconds(double alpha, double power, double seconds)
    {
        double perSecond = 0.040 * 0.040 / (0.10 * 0.10);       // P of a trial of one second
        Assert.Equal(seconds, Math.Round(new SteadyStateRule(alpha, power, 1).Trials(perSecond)));
    }

    [Fact]
    public void CoherenceNeedsHardlyMoreTrialsThanTheSpectralTest()
    {
        // Same noncentrality, 2 N - 2 against 240 degrees of freedom below: equal at N = 121.
        var spectral = new SteadyStateRule(0.01, 0.9, 1);
        double power = spectral.Noncentrality / 121;
        Assert.Equal(121, Coherence.Trials(0.01, 0.9, power * (1 + 1e-9)));
        Assert.True(Coherence.PowerOf(0.01, power, 60) < spectral.Probability(power, 0, 60));
    }

    private static readonly TargetChoice[] Detections =
    [
        new DetectionChoice(0.01, 0.9, 1), new DetectionChoice(0.05, 0.8, 7, Topography.Plane), new DetectionChoice(0.01, 0.9, 3, Topography.Unknown),
        new DetectionChoice(0.01, 0.9, 1, Topography.Known, true), new DetectionChoice(0.05, 0.8, 2, Topography.Plane, true), new DetectionChoice(0.01, 0.9, 1, Topography.Unknown, true),
    ];

    private static readonly RuleReading Rows = new(Modality.Meg, "matched-filter", 24);

    private static IEnumerable<ITargetRule> All => [.. Detections.Select(d => RuleBinding.Of(d, Rows)), RuleBinding.Of(Ratio(3.1, 0.9), Click), new SteadyStateRule(0.01, 0.9, 1)];

    [Fact]
    public void Count_IsTheSmallestThatHasTheProbability() => Gen.Double[-6, 1].Sample(logarithm =>
    {
        double power = Math.Pow(10, logarithm);
        foreach (DetectionChoice choice in Detections.Cast<DetectionChoice>())
        {
            ITargetRule rule = RuleBinding.Of(choice, Rows);
            long n = TrialCount.Ceiling(rule.Trials(power))!.Value;
            const double Rounding = 1e-12;                      // of a probability
            Assert.True(rule.Probability(power, 0, n) >= choice.Power - Rounding, $"{rule.Description}: {n} reach {rule.Probability(power, 0, n)}");
            Assert.True(n == 1 || !(rule.Probability(power, 0, n - 1) >= choice.Power + Rounding), $"{rule.Description}: {n - 1} reach {rule.Probability(power, 0, n - 1)}");
        }
    }, iter: 60, seed: "0000KeqOG7K1");

    [Fact]
    public void MorePower_NeverNeedsMoreTrials_AndTheProbabilityGrowsWithTrials() => Gen.Double[-5, 1].Select(Gen.Double[1, 4]).Sample((logarithm, factor) =>
    {
        double power = Math.Pow(10, logarithm);
        foreach (ITargetRule rule in All)
        {
            Assert.True(rule.Trials(power * factor) <= rule.Trials(power), rule.Description);
            const double Rounding = 1e-12;                      // of a sum of some hundred weights
            double before = 0;
            foreach (double trials in new[] { 30, 60, 200, 3000 })
            {
                double reached = rule.Probability(power, 0, trials)!.Value;
                Assert.True(reached >= before - Rounding, $"{rule.Description}: {reached} after {before}");
                before = reached;
            }
        }
    }, iter: 40, seed: "b0gZqZp8din3");

    [Fact]
    public void SmallestScale_IsTheInverseOfTheProbability() => Gen.Double[-4, 0].Select(Gen.Int[30, 30_000]).Sample((logarithm, session) =>
    {
        double power = Math.Pow(10, logarithm);
        foreach ((ITargetRule rule, double asked) in All.Zip(Detections.Cast<DetectionChoice>().Select(d => d.Power).Concat([0.9, 0.9])))
        {
            double scale = rule.SmallestScale(power, 0, session);
            RelativeAssert.Equal(asked, rule.Probability(power * scale * scale, 0, session)!.Value, 1e-9, rule.Description);
        }
    }, iter: 30, seed: "0000KeqOG7K1");

    [Fact]
    public void HalfTheAmplitude_NeedsFourTimesTheTrials_WhereTheNoiseIsKnown()
    {
        foreach (ITargetRule rule in All.Where(r => r is not (HotellingRule or StudentDetectionRule)))
        {
            RelativeAssert.Equal(4 * rule.Trials(0.01), rule.Trials(0.0025), ClosedForm, rule.Description);
        }
    }

    [Fact]
    public void EstimatedNoise_CostsTrials_AndTendsToTheKnown()
    {
        foreach (Topography topography in Enum.GetValues<Topography>())
        {
            ITargetRule known = RuleBinding.Of(new DetectionChoice(0.01, 0.9, 1, topography), Rows), estimated = RuleBinding.Of(new DetectionChoice(0.01, 0.9, 1, topography, true), Rows);
            foreach (double power in new[] { 1, 1e-2, 1e-4 })
            {
                Assert.True(estimated.Trials(power) > known.Trials(power), $"{topography} at {power}");
            }

            RelativeAssert.Equal(known.Trials(1e-6), estimated.Trials(1e-6), 1e-4, $"{topography}: the excess is some rows, not a share");
        }
    }

    [Fact]
    public void EstimatedCovariance_NeedsMoreTrialsThanRows()
    {
        ITargetRule rule = RuleBinding.Of(new DetectionChoice(0.01, 0.9, 1, Topography.Unknown, true), Rows);
        Assert.Equal(25, rule.Trials(1e12));
        Assert.Equal(0.0, rule.Probability(1, 0, 24));
        Assert.Equal(double.PositiveInfinity, rule.SmallestScale(1, 0, 24));
        Assert.Equal(2, RuleBinding.Of(new DetectionChoice(0.01, 0.9, 1, Topography.Known, true), Rows).Trials(1e12));
    }

    [Fact]
    public void KnowingLess_CostsMore()
    {
        ITargetRule Of(Topography topography) => RuleBinding.Of(new DetectionChoice(0.01, 0.9, 1, topography), Rows);
        Assert.True(Of(Topography.Known).Trials(0.01) < Of(Topography.Plane).Trials(0.01));
        Assert.True(Of(Topography.Plane).Trials(0.01) < Of(Topography.Unknown).Trials(0.01));
        Assert.Equal(Of(Topography.Plane).Trials(0.01), RuleBinding.Of(new DetectionChoice(0.01, 0.9, 1, Topography.Plane), RuleReading.OfOneReading()).Trials(0.01));
    }

    [Fact]
    public void HotellingOnAFilterFromSamples_PaysForTheCovarianceOnce()
    {
        // P holds what the filter keeps; T2 builds none and counts on the ideal.
        var choice = new DetectionChoice(0.01, 0.9, 1, Topography.Unknown, true);
        const double Kept = 0.8;
        Assert.Equal(RuleBinding.Of(choice, Rows).Trials(0.01), RuleBinding.Of(choice, Rows with { KeptByFilter = Kept }).Trials(0.01 * Kept));
        Assert.Equal(RuleBinding.Of(choice with { CovarianceEstimated = false }, Rows).Trials(0.01), RuleBinding.Of(choice with { CovarianceEstimated = false }, Rows with { KeptByFilter = Kept }).Trials(0.01));
    }

    [Fact]
    public void SilenceAndAnArtefactAsLargeAsTheResponse_AreNeverReached()
    {
        foreach (ITargetRule rule in All)
        {
            Assert.Null(TrialCount.Ceiling(rule.Trials(rule.EffectivePower(0, 0))));
            Assert.Null(TrialCount.Ceiling(rule.Trials(rule.EffectivePower(0.01, 0.02))));
            Assert.True(rule.Trials(rule.EffectivePower(0.01, 0.001)) > rule.Trials(0.01), rule.Description);
        }
    }

    [Fact]
    public void WeightedAveraging_EqualsPlainForConstantNoise_AndGainsWhereItVaries()
    {
        foreach (ITargetRule rule in All.Append(RuleBinding.Of(new ResidualNoiseChoice(40e-9), Click)))
        {
            Assert.Equal(rule.Trials(0.01), rule.WeightedTrials(0.01, 1));
            Assert.True(rule.WeightedTrials(0.01, 1.5) < rule.Trials(0.01), rule.Description);
        }
    }

    [Fact]
    public void ResidualNoise_HoldsForSingleVoltagesAlone()
    {
        var choice = new ResidualNoiseChoice(40e-9);
        Assert.Null(RuleBinding.Of(choice, Click).Absent);
        Assert.NotNull(RuleBinding.Of(choice, Rows).Absent);
        Assert.NotNull(RuleBinding.Of(choice, new RuleReading(Modality.Both, "Cz-mastoids", 2)).Absent);
        Assert.NotNull(RuleBinding.Of(choice, new RuleReading(Modality.Eeg, "matched-filter", 63)).Absent);
        ITargetRule bestChannel = RuleBinding.Of(choice, new RuleReading(Modality.Eeg, "best-channel", 1, OnePoint: true));
        Assert.True(bestChannel.StandsOnNoise);
        Assert.Equal(2500, TrialCount.Ceiling(bestChannel.Trials(bestChannel.EffectivePower(1e-3, 0, 1 / (2e-6 * 2e-6)))));
    }

    [Fact]
    public void DegreesOfFreedom_FollowWhatIsRead()
    {
        ITargetRule Of(RuleReading reading) => RuleBinding.Of(new DetectionChoice(0.01, 0.9, 1, Topography.Unknown), reading);
        RelativeAssert.Equal(new SubspaceDetectionRule(0.01, 0.9, 1, 24).Trials(0.1), Of(Rows).Trials(0.1), ClosedForm);
        RelativeAssert.Equal(new SubspaceDetectionRule(0.01, 0.9, 1, 1).Trials(0.1), Of(RuleReading.OfOneReading()).Trials(0.1), ClosedForm);
        Assert.IsType<SteadyStateRule>(RuleBinding.Of(new DetectionChoice(0.01, 0.9, 1), Rows with { SteadyState = true }));
    }
}
