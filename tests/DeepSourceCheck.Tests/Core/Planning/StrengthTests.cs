using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>Moments from amplitudes, and regions that act together.</summary>
public class StrengthTests
{
    /// <summary>A dozen roundings between an amplitude and the power that comes back from it.</summary>
    private const double Rounding = 1e-13;

    private const double Peak = 0.45e-6, NoiseRms = 2e-6;

    private static readonly Vec3 Up = new(0, 0, 1);

    // A derivation of independent electrodes of 2/sqrt(2) uV reads 2 uV.
    private static SmallStudy Known(Measured measured, DirectionName direction = DirectionName.Given, int seed = 7)
    {
        var random = new Random(seed);
        return new SmallStudy
        {
            Eeg = SmallStudy.Random(random, 15, 6, 100),
            Meg = SmallStudy.Random(random, 15, 8, 1e-6),
            EegCovariance = SmallStudy.Identity(6, NoiseRms * NoiseRms / 2),
            Derivations = [("E0-E1", [1, -1, 0, 0, 0, 0])],
            Moment = 1e-9,
            Amplitude = new AmplitudeChoice(Peak, "E0-E1"),
            Measured = measured,
            Given = direction == DirectionName.Given ? Up : null,
            Direction = direction,
        };
    }

    [Theory]
    [InlineData(Measured.PeakToTrough, DirectionName.Given, 356)]
    [InlineData(Measured.BaselineToPeak, DirectionName.Given, 178)]
    [InlineData(Measured.PeakToTrough, DirectionName.StrongestTangential, 356)]
    [InlineData(Measured.PeakToTrough, DirectionName.Isotropic, 356)]
    public void KnownAmplitude_GivesTheFixedInputCount(Measured measured, DirectionName direction, long trials)
    {
        // Worked example: 0.45 uV on 2.0 uV rms needs (3 sqrt(2) 2 / 0.45)^2 = 355.6 peak to trough, half of that from the baseline.
        RegionResult region = Known(measured, direction).Assess();
        MeasureResult row = region.Find(Modality.Eeg, direction, "E0-E1")!;
        Assert.Equal(trials, row.Targets[0].Trials.P50);
    }

    [Fact]
    public void FoundMoment_StatedAsMoment_GivesTheSameAnswers()
    {
        RegionResult found = Known(Measured.PeakToTrough).Assess();
        RegionResult stated = (Known(Measured.PeakToTrough) with { Amplitude = null, Moment = found.Moment }).Assess();
        Assert.Equal(stated.Results.Select(r => r.SnrDb), found.Results.Select(r => r.SnrDb));
        Assert.Equal(stated.Results.Select(r => r.Targets[0]), found.Results.Select(r => r.Targets[0]));
    }

    [Fact]
    public void FoundMoment_IsAmplitudeOverTheMedianGain()
    {
        SmallStudy study = Known(Measured.BaselineToPeak);
        double[] gains = [.. study.Eeg.Select(p => Math.Abs(p[0][2] - p[1][2])).Order()];
        RelativeAssert.Equal(Peak / gains[7], study.Assess().Moment, Rounding);
    }

    [Fact]
    public void Amplitude_ThatNothingReads_IsRefusedWithTheRegion()
    {
        SmallStudy study = Known(Measured.BaselineToPeak);
        foreach (double[][] point in study.Eeg)
        {
            point[1][2] = point[0][2];
        }

        InputException error = Assert.Throws<InputException>(() => study.Assess());
        Assert.Equal("responses.r.amplitude.derivation", error.Problems[0].Key);
        Assert.Contains("region0 reads nothing at E0-E1", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Reading_ThatCancelsButForRounding_IsSilent()
    {
        // 0.1 + 0.2 - 0.3 is 5.6e-17 in double precision: a zero is a zero.
        var study = new SmallStudy
        {
            Eeg = [[[0.1, 0, 1], [0.2, 0, 2], [0.3, 0, 7]]],
            Meg = [[[1e-6, 0, 0], [0, 1e-6, 0], [0, 0, 1e-6]]],
            Unreferenced = true,
            Derivations = [("E0-E2", [1, 1, -1])],
            Given = new Vec3(1, 0, 0),
        };
        MeasureResult row = study.Assess().Find(Modality.Eeg, DirectionName.Given, "E0-E2")!;
        Assert.Null(row.Targets[0].Trials.P50);
        Assert.Contains("silent", row.Targets[0].Reason, StringComparison.Ordinal);
    }

    [Fact]
    public void MomentRange_GivesTheCountsOfItsEnds()
    {
        SmallStudy study = Known(Measured.BaselineToPeak) with { Amplitude = null, Moment = 4e-9, MomentRange = new MomentRange(2e-9, 8e-9) };
        VerdictResult verdict = study.Assess().Verdicts.First(v => v.Modality == Modality.Eeg);
        long At(double moment) => (study with { MomentRange = null, Moment = moment }).Assess().Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[0].Trials.P50!.Value;
        Assert.Equal(new CountRange(At(2e-9), At(8e-9)), verdict.AtMoments);
    }

    private static SmallStudy Pair(double[] shares, double[]? lags = null, double? frequency = null)
    {
        var random = new Random(11);
        return new SmallStudy
        {
            Eeg = SmallStudy.Random(random, 2, 6, 100),
            Meg = SmallStudy.Random(random, 2, 8, 1e-6),
            EegCovariance = SmallStudy.RandomCovariance(random, 6, 1e-6),
            Regions = 2,
            Together = true,
            Shares = shares,
            Lags = lags ?? [],
            ComponentFrequency = frequency,
            Given = Up,
        };
    }

    private static double Power(RegionResult region, string measure = Names.MatchedFilter) =>
        Math.Pow(10, region.Find(Modality.Eeg, DirectionName.Given, measure)!.SnrDb.P50!.Value / 10);

    [Fact]
    public void Lag_OfAQuarterCycle_LeavesAnEqualPairTheRootOfHalf()
    {
        // cos(pi/4) each at the phase where the net moment is largest: power 1/2, by phasor addition.
        RegionResult inStep = Pair([0.5, 0.5]).Assess(), lagged = Pair([0.5, 0.5], [0, 0.25e-3], 1000).Assess();
        RelativeAssert.Equal(Power(inStep) / 2, Power(lagged), 1e-12);
    }

    [Fact]
    public void Lag_OfHalfACycle_IsAnOppositeSign() =>
        RelativeAssert.Equal(Power(Pair([0.75, -0.25]).Assess()), Power(Pair([0.75, 0.25], [0, 0.5e-3], 1000).Assess()), 1e-12);

    [Fact]
    public void Weights_OfMomentsThatCancel_AreReadAtThePeakOfTheFirst() =>
        Assert.Equal([0.5, -0.5], Activation.Weights(Pair([0.5, -0.5], [0, 0], 1000).Setup().Study.Responses[0]));

    [Fact]
    public void Cancellation_OfTheSameFieldWithOppositeShares_IsTheirDifference()
    {
        // Shares 3/4 and -1/4 of one field leave 1/2 of it: 20 log10(1/2) = -6.02 dB.
        SmallStudy study = Pair([0.75, -0.25]);
        study = study with { Eeg = [study.Eeg[0], study.Eeg[0]], Meg = [study.Meg[0], study.Meg[0]] };
        RegionResult region = study.Assess();
        Assert.Equal(2, region.Cancellation.Count);
        Assert.All(region.Cancellation, c => RelativeAssert.Equal(20 * Math.Log10(0.5), c.Db, 1e-12));
        Assert.Contains(region.Warnings, w => w.Contains("EEG 6.0 dB", StringComparison.Ordinal));
    }

    [Fact]
    public void Cancellation_OfUnlikeFields_IsNeverAGain() =>
        Assert.All(Pair([0.5, 0.5]).Assess().Cancellation, c => Assert.True(c.Db <= 0));
}
