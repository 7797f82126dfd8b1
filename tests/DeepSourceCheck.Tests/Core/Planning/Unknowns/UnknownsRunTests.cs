using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Planning.Unknowns;

/// <summary>Answers over what is not known, on arrays: moment and noise alone, where the answer has a closed form.</summary>
public class UnknownsRunTests
{
    // A low-discrepancy sample of 1024 draws holds quantiles of a lognormal to some 1 %; trials go with the square.
    private const double Sampling = 0.03;

    private static (RegionResult Region, StudySetup Setup) Assess(UnknownsChoice unknowns, Func<SmallStudy, SmallStudy>? change = null)
    {
        var random = new Random(3);
        var study = new SmallStudy
        {
            Eeg = SmallStudy.Random(random, 9, 6, 100),
            Meg = SmallStudy.Random(random, 9, 8, 1e-6),
            EegCovariance = SmallStudy.Identity(6, 4e-12),
            MegCovariance = SmallStudy.Identity(8, 2.5e-27),
            Derivations = [("E0-E1", [1, -1, 0, 0, 0, 0])],
            Moment = 4e-9,
            Given = new Vec3(0, 0, 1),
            Targets = [new AmplitudeRatioChoice(3), new DetectionChoice(0.01, 0.9, 1)],
            Protocol = new Protocol { Rate = 1, Session = 300 },
        };
        StudySetup setup = (change?.Invoke(study) ?? study).Setup();
        setup = setup with { Study = setup.Study with { Unknowns = unknowns } };
        return (Assessor.Assess(setup, null, null, CancellationToken.None)[0].Regions[0], setup);
    }

    private static VerdictSpread Eeg(RegionResult region, string rule = Names.AmplitudeRatio) => region.Unknowns!.Verdicts.Single(v => v.Modality == Modality.Eeg && v.Rule == rule);

    private static long Nominal(RegionResult region, string rule = Names.AmplitudeRatio) =>
        region.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets.Single(t => t.Rule == rule).Trials.P50!.Value;

    [Fact]
    public void NoiseAlone_ScalesTrialsByTheSquareOfItsQuantiles()
    {
        // N goes with the noise power: 5, 50 and 95 % of trials are those of the factor, squared.
        (RegionResult region, _) = Assess(new UnknownsChoice { NoiseFactor = new Spread(0.5, 1, 3), Samples = 1024 });
        long nominal = Nominal(region);
        VerdictSpread spread = Eeg(region);
        Assert.InRange(spread.Trials.P05!.Value, 0.25 * nominal * (1 - Sampling) - 1, 0.25 * nominal * (1 + Sampling) + 1);
        Assert.InRange(spread.Trials.P50!.Value, nominal * (1 - Sampling) - 1, nominal * (1 + Sampling) + 1);
        Assert.InRange(spread.Trials.P95!.Value, 9 * nominal * (1 - Sampling) - 1, 9 * nominal * (1 + Sampling) + 1);
    }

    [Fact]
    public void Assurance_OfAnAmplitudeRatio_IsTheShareOfDrawsThatFit()
    {
        // One lognormal unknown: N_s <= session where factor^2 <= session / N, the normal distribution of a logarithm.
        (RegionResult region, StudySetup setup) = Assess(new UnknownsChoice { NoiseFactor = new Spread(0.5, 1, 2), Samples = 1024 });
        double session = SessionPlan.Trials(setup.Study.Protocol)!.Value, z = Math.Log(Math.Sqrt(session / Nominal(region))) / (Math.Log(2) / Spread.Z95);
        double expected = MathNet.Numerics.Distributions.Normal.CDF(0, 1, z);
        Assert.InRange(Eeg(region).Assurance!.Value, expected - 0.01, expected + 0.01);
    }

    [Fact]
    public void Assurance_OfDetection_IsTheMeanPower()
    {
        // Plain twin: numerical mean over the factor's distribution of Phi(sqrt(N P)/f - z_0.99).
        (RegionResult region, StudySetup setup) = Assess(new UnknownsChoice { NoiseFactor = new Spread(0.5, 1, 2), Samples = 1024 });
        double session = SessionPlan.Trials(setup.Study.Protocol)!.Value, power = Math.Pow(10, region.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.SnrDb.P50!.Value / 10);
        const int n = 20_000;
        double mean = Enumerable.Range(0, n).Average(k =>
        {
            double f = Math.Exp(MathNet.Numerics.Distributions.Normal.InvCDF(0, 1, (k + 0.5) / n) * Math.Log(2) / Spread.Z95);
            return MathNet.Numerics.Distributions.Normal.CDF(0, 1, Math.Sqrt(session * power) / f - 2.3263478740408408);
        });
        Assert.InRange(Eeg(region, Names.Detection).Assurance!.Value, mean - 0.005, mean + 0.005);
    }

    [Fact]
    public void Assurance_InTheVerdict_IsRoundedToFivePercent()
    {
        (RegionResult region, _) = Assess(new UnknownsChoice { NoiseFactor = new Spread(0.5, 1, 2), Samples = 256 });
        foreach ((VerdictResult verdict, VerdictSpread spread) in region.Verdicts.Zip(region.Unknowns!.Verdicts))
        {
            Assert.Equal((verdict.Modality, verdict.Rule), (spread.Modality, spread.Rule));
            Assert.Equal(Math.Round(20 * spread.Assurance!.Value) / 20, verdict.Assurance);
        }
    }

    [Fact]
    public void Assurance_GrowsWithSessionMomentAndAlpha()
    {
        var unknowns = new UnknownsChoice { NoiseFactor = new Spread(0.5, 1, 2), Samples = 256 };
        double At(Func<SmallStudy, SmallStudy> change) => Eeg(Assess(unknowns, change).Region, Names.Detection).Assurance!.Value;
        double[] session = [.. new[] { 60.0, 300, 1500 }.Select(s => At(x => x with { Protocol = new Protocol { Rate = 1, Session = s } }))];
        double[] moment = [.. new[] { 2e-9, 4e-9, 8e-9 }.Select(m => At(x => x with { Moment = m }))];
        double[] alpha = [.. new[] { 0.001, 0.01, 0.05 }.Select(a => At(x => x with { Targets = [new DetectionChoice(a, 0.9, 1)] }))];
        Assert.All(new[] { session, moment, alpha }, v => Assert.True(v[0] < v[1] && v[1] < v[2], string.Join(", ", v)));
    }

    [Fact]
    public void Missing_IsWhatThePowerLeaves()
    {
        (RegionResult region, StudySetup setup) = Assess(new UnknownsChoice { NoiseFactor = new Spread(0.5, 1, 2), Samples = 64 });
        double power = Math.Pow(10, region.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.SnrDb.P50!.Value / 10);
        double expected = 1 - MathNet.Numerics.Distributions.Normal.CDF(0, 1, Math.Sqrt(SessionPlan.Trials(setup.Study.Protocol)!.Value * power) - 2.3263478740408408);
        double? Missing(string rule) => region.Verdicts.Single(v => v.Modality == Modality.Eeg && v.Rule == rule).Missing;
        RelativeAssert.Equal(expected, Missing(Names.Detection)!.Value, 1e-9);
        Assert.Null(Missing(Names.AmplitudeRatio));
    }

    [Fact]
    public void Ranking_PutsTheWiderUnknownFirst_AndIndependentOnesLeaveNoInteraction()
    {
        // ln N is a sum of one term each: variances add, nothing is left for interaction.
        (RegionResult region, _) = Assess(new UnknownsChoice { NoiseFactor = new Spread(0.8, 1, 1.25), Samples = 1024 }, s => s with { MomentRange = new MomentRange(1e-9, 16e-9) });
        VerdictSpread spread = Eeg(region);
        Assert.Equal(["moment_nAm", "noise_factor"], spread.Ranking.Select(r => r.Unknown));
        Assert.Equal(0.0, spread.Interaction);
        long nominal = Nominal(region);
        Assert.InRange(spread.Ranking[0].Fewest!.Value, nominal / 16.0 - 1, nominal / 16.0 + 1);
        Assert.InRange(spread.Ranking[0].Most!.Value, nominal * 16.0 - 16, nominal * 16.0 + 1);
        RelativeAssert.Equal(16, spread.Ranking[0].AtFewest!.Value, 1e-12);
    }

    [Fact]
    public void OneUnknown_HasNothingToInteractWith()
    {
        (RegionResult region, _) = Assess(new UnknownsChoice { NoiseFactor = new Spread(0.5, 1, 2), Samples = 256 });
        Assert.All(region.Unknowns!.Verdicts, v => Assert.Null(v.Interaction));
    }

    [Fact]
    public void FirstModality_NamesTheNoiseThatWouldTurnItRound()
    {
        (RegionResult region, _) = Assess(new UnknownsChoice { NoiseFactor = new Spread(0.5, 1, 2), Samples = 64 });
        FirstModality first = region.Unknowns!.First[0];
        long eeg = Nominal(region), meg = region.Find(Modality.Meg, DirectionName.Given, Names.BestChannel)!.Targets[0].Trials.P50!.Value;
        Assert.Equal(eeg < meg ? Modality.Eeg : Modality.Meg, first.Modality);

        // A factor on both leaves the order as it is.
        Assert.Equal(1.0, first.Share);
        string factor = Rounded.Two(Math.Sqrt((double)Math.Max(eeg, meg) / Math.Min(eeg, meg)));
        Assert.Contains($"{factor} times lower", first.Flip, StringComparison.Ordinal);
    }

    [Fact]
    public void Artefact_ThatBuriesHalfTheDraws_LeavesTheUpperPercentilesOutOfReach()
    {
        (RegionResult region, _) = Assess(new UnknownsChoice { NoiseFactor = new Spread(0.9, 1, 1.1), Samples = 256 },
            s => s with { MomentRange = new MomentRange(0.1e-9, 40e-9), ArtefactEeg = 0.05e-6 });
        Assert.NotNull(Eeg(region).Trials.P05);
        Assert.Null(Eeg(region).Trials.P95);
    }

    [Fact]
    public void Rerun_GivesTheSameFigures()
    {
        var unknowns = new UnknownsChoice { NoiseFactor = new Spread(0.5, 1, 2), Samples = 256 };
        Assert.Equal(Eeg(Assess(unknowns).Region).Trials, Eeg(Assess(unknowns).Region).Trials);
    }
}
