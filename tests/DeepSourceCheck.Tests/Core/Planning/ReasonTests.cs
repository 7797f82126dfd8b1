using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>Every verdict text, warning and reason for a null of the assessment is provoked.</summary>
public class ReasonTests
{
    private static readonly Vec3 X = new(1, 0, 0), Z = new(0, 0, 1);

    private static MeasureResult Meg(RegionResult region, DirectionName direction) => region.Find(Modality.Meg, direction, Names.BestChannel)!;

    /// <summary>One derivation that reads <paramref name="microvolts"/> at a moment of 10 nAm, on a noise of 1 uV.</summary>
    private static SmallStudy Reading(double microvolts) => new()
    {
        Eeg = [[[microvolts * 100, 0, 0], [0, 0, 0]]],
        EegCovariance = [1e-12, 0, 0, 1e-30],
        Reference = [0, 1],
        Derivations = [("E0-E1", [1, -1])],
        Given = X,
        Protocol = new Protocol { Rate = 10, RejectedFraction = 0.5, Session = 600 },
    };

    [Theory]
    [InlineData(0.1, "EEG, E0-E1: 900 trials, 3.0 min: fits the session of 10 min (3,000 trials). In one trial the noise is 10 times the response.")]
    [InlineData(0.05, "EEG, E0-E1: 3,600 trials, 12 min: does not fit the session of 10 min (3,000 trials). In one trial the noise is 20 times the response.")]
    [InlineData(5.0, "EEG, E0-E1: 1 trial, under 0.1 min: fits the session of 10 min (3,000 trials). In one trial the response is 5.0 times the noise.")]
    [InlineData(1e-4, "EEG, E0-E1: out of reach, more than 10,000,000 trials. In one trial the noise is 10,000 times the response.")]
    public void Verdict_SaysCountTimeSessionAndWhy(double microvolts, string text)
    {
        VerdictResult verdict = Assert.Single(Reading(microvolts).Assess().Verdicts);
        Assert.Equal(text, verdict.Text);
        Assert.Equal(text.Contains(": fits", StringComparison.Ordinal), verdict.FitsSession);
    }

    [Fact]
    public void Verdict_WithoutProtocolOrSession_LeavesThemOut()
    {
        Assert.Equal("EEG, E0-E1: 900 trials. In one trial the noise is 10 times the response.", (Reading(0.1) with { Protocol = null }).Assess().Verdicts[0].Text);
        RegionResult endless = (Reading(0.1) with { Protocol = new Protocol { Rate = 10 } }).Assess();
        Assert.Equal("EEG, E0-E1: 900 trials, 1.5 min. In one trial the noise is 10 times the response.", endless.Verdicts[0].Text);
        Assert.Null(endless.Verdicts[0].FitsSession);
        Assert.Null(endless.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[0].SmallestMoment);
    }

    [Fact]
    public void Verdict_OfBothModalities_NamesBothReadings()
    {
        RegionResult region = (Reading(0.1) with { Meg = [[[1e-6, 0, 0], [0, 1e-6, 0], [0, 0, 1e-6]]] }).Assess();
        Assert.StartsWith("EEG+MEG, E0-E1 and best MEG channel: ", region.Verdicts.Single(v => v.Modality == Modality.Both).Text, StringComparison.Ordinal);
    }

    [Fact]
    public void Verdict_UnderAnArtefact_SaysThatAveragingCannotHelp()
    {
        string text = (Reading(0.1) with { ArtefactEeg = 0.05e-6 }).Assess().Verdicts[0].Text;
        Assert.Equal("EEG, E0-E1: out of reach by averaging (the locked artefact is too large against the response).", text);
    }

    [Fact]
    public void CountBeyondWhatCanBeCounted_IsNullWithAReason()
    {
        // 1 uV of noise on 1e-9 uV: 9e18 trials.
        RegionResult region = Reading(1e-9).Assess();
        TargetResult target = region.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[0];
        Assert.Null(target.Trials.P50);
        Assert.Equal("not reachable: more trials than can be counted", target.Reason);
        Assert.NotNull(region.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.SnrDb.P50);
        Assert.Equal(target.Reason, region.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Reason);
        Assert.Contains("more trials than can be counted", region.Verdicts[0].Text, StringComparison.Ordinal);
        Assert.False(region.Verdicts[0].FitsSession);
    }

    [Fact]
    public void SilentEeg_IsNotBlamedOnMeg()
    {
        MeasureResult row = (Reading(0) with { Given = X }).Assess().Find(Modality.Eeg, DirectionName.Given, "E0-E1")!;
        Assert.Null(row.SnrDb.P50);
        Assert.Equal("silent: what is read is exactly zero for this direction", row.Reason);
        Assert.Equal(row.Reason, row.Targets[0].Reason);
        Assert.Null(row.AtLeak);
        Assert.Null(row.Peak);
    }

    [Fact]
    public void DirectionSilentAtSomeDipoles_SaysThatPercentilesFallOnThem()
    {
        // Along z: the first of three dipoles is silent.
        double[][][] meg = SmallStudy.Random(new Random(3), 3, 12, 1e-6);
        foreach (double[] row in meg[0])
        {
            row[2] = 0;
        }

        MeasureResult some = Meg(new SmallStudy { Meg = meg, Given = Z }.Assess(), DirectionName.Given);
        Assert.NotNull(some.SnrDb.P50);
        Assert.Null(some.SnrDb.P05);
        Assert.Equal("some dipoles or directions are silent: percentiles that fall on them are null", some.Reason);
        Assert.NotNull(some.Targets[0].Trials.P50);
        Assert.Null(some.Targets[0].Trials.P95);
        Assert.Null(some.AtLeak);
    }

    [Fact]
    public void DirectionSilentAtMostDipoles_GivesTheFiguresAtTheLeakToo()
    {
        double[][][] meg = SmallStudy.Random(new Random(4), 3, 12, 1e-6);
        foreach (double[] row in meg[0].Concat(meg[1]))
        {
            row[2] = 0;
        }

        RegionResult region = new SmallStudy { Meg = meg, Given = Z }.Assess();
        MeasureResult most = Meg(region, DirectionName.Given);
        Assert.Null(most.SnrDb.P50);
        Assert.NotNull(most.Targets[0].Trials.P05);            // one dipole is seen
        Assert.NotNull(most.AtLeak!.Targets[0].Trials.P50);
        Assert.True(Math.Abs(most.AtLeak.SnrDb.P50!.Value - Meg(region, DirectionName.StrongestTangential).SnrDb.P50!.Value - 20 * Math.Log10(0.06)) < 1e-9);
    }

    [Fact]
    public void CoincidingSingularValues_AreSaid()
    {
        // Two rows along x and y of one strength, one weaker along z: v1 and v2 are arbitrary in their plane.
        RegionResult region = new SmallStudy { Meg = [[[1e-6, 0, 0], [0, 1e-6, 0], [0, 0, 3e-7]]], Given = X }.Assess();
        Assert.Equal(1, region.Split!.DegenerateDipoles);
        Assert.Contains(region.Warnings, w => w.Contains("at 1 of its dipoles two singular values coincide", StringComparison.Ordinal));
    }

    [Fact]
    public void WeakestDirectionFarFromTheRadius_IsCalledLeastVisible()
    {
        // The array sees x least, while the radius at this place runs along z.
        LayeredSphere head = new("one layer", Vec3.Zero, [new("all", 0.09, 0.33, 0.33)]);
        RegionResult region = new SmallStudy { Meg = [[[3e-7, 0, 0], [0, 1e-6, 0], [0, 0, 2e-6]]], Given = X, Head = head, Positions = [new Vec3(0, 0, 0.04)] }.Assess();
        Assert.True(Math.Abs(region.Split!.AngleToRadialDeg.P50!.Value - 90) < 1e-9);
        Assert.Contains(region.Warnings, w => w.Contains("sees least stands 90 degrees from the outward direction; read quasi-radial as least visible", StringComparison.Ordinal));
        RegionResult aligned = new SmallStudy { Meg = [[[3e-6, 0, 0], [0, 1e-6, 0], [0, 0, 2e-7]]], Given = X, Head = head, Positions = [new Vec3(0, 0, 0.04)] }.Assess();
        Assert.DoesNotContain(aligned.Warnings, w => w.Contains("least visible", StringComparison.Ordinal));
    }

    [Fact]
    public void FieldsThatCancel_LeaveNoDirections_AndSaySo()
    {
        double[][] one = SmallStudy.Random(new Random(12), 1, 12, 1e-6)[0];
        double[][] minus = [.. one.Select(row => row.Select(x => -x).ToArray())];
        RegionResult region = new SmallStudy { Meg = [one, minus], Regions = 2, Together = true, Given = X }.Assess();
        Assert.Contains(region.Warnings, w => w.Contains("at 1 of its dipoles MEG sees nothing and directions are undefined", StringComparison.Ordinal));
        Assert.Contains("summed fields that cancel", Meg(region, DirectionName.QuasiRadial).Reason, StringComparison.Ordinal);
        Assert.StartsWith("silent: MEG does not see this direction", Meg(region, DirectionName.Given).Reason, StringComparison.Ordinal);
    }

    [Fact]
    public void SourcesWhoseMeanIsTheCentre_KeepTheirDirections()
    {
        LayeredSphere head = new("one layer", Vec3.Zero, [new("all", 0.09, 0.33, 0.33)]);
        double[][][] meg = SmallStudy.Random(new Random(13), 2, 12, 1e-6);
        RegionResult region = new SmallStudy { Meg = meg, Regions = 2, Together = true, Given = X, Head = head, Positions = [new Vec3(0.03, 0, 0), new Vec3(-0.03, 0, 0)] }.Assess();
        Assert.Equal(0, region.Split!.UndefinedDipoles);
        Assert.NotNull(Meg(region, DirectionName.StrongestTangential).SnrDb.P50);
    }

    [Fact]
    public void CapturedField_BelowTheLimit_IsSaid()
    {
        RegionResult Captured(double share) => Assessor.Assess(
            new SmallStudy { Meg = SmallStudy.Random(new Random(5), 1, 12, 1e-6), Given = X }.Setup() with { FieldCaptured = _ => share }, null, null, CancellationToken.None)[0].Regions[0];
        Assert.Contains(Captured(0.7).Warnings, w => w == "region0: its field maximum lies outside the array's cap, which captures 70 % of the largest field around the head");
        Assert.Empty(Captured(0.99).Warnings);
    }

    [Fact]
    public void Chain_OfASilentMegReadingBesideEeg_StillRecomputes()
    {
        // MEG does not see z; its noise correlates with EEG's. The joint figure then is EEG's alone, and the printed chain must say the same.
        double[][] meg = SmallStudy.Random(new Random(6), 1, 4, 1e-6)[0];
        foreach (double[] row in meg)
        {
            row[2] = 0;
        }

        SmallStudy study = new() { Eeg = [[[30, 20, 50], [-10, 5, 3], [0, 0, 7]]], Meg = [meg], Given = Z };
        StudySetup setup = study.Setup();
        var noise = new NoiseModel { EegRows = 3, MegRows = 4, Terms = [new CrossTerm()] };
        RegionResult region = Assessor.Assess(setup with { Noise = noise }, null, null, CancellationToken.None)[0].Regions[0];
        foreach (VerdictResult verdict in region.Verdicts.Where(v => v.Modality != Modality.Meg))
        {
            long? reported = region.Find(verdict.Modality, verdict.Direction, verdict.Measure)!.Targets[0].Trials.P50;
            Assert.Equal(reported, (long)ChainArithmetic.Recompute(verdict.Chain)["N"]);
        }

        Assert.Equal(region.Find(Modality.Eeg, DirectionName.Given, Names.BestChannel)!.SnrDb.P50, region.Find(Modality.Both, DirectionName.Given, Names.BestChannel)!.SnrDb.P50);
    }

    /// <summary>Two shared sources behind EEG and MEG, and independent noise in each row.</summary>
    private sealed class CrossTerm : INoiseTerm
    {
        public string Name => "shared";

        public NoisePattern? Eeg { get; } = new([1e-14, 1e-14, 1e-14], [1e-7, 0.5e-7, -1e-7, 0.2e-7, 0.3e-7, 1e-7], 2);

        public NoisePattern? Meg { get; } = new([1e-28, 1e-28, 1e-28, 1e-28], [1e-14, 0, 0, 1e-14, 1e-14, 1e-14, -1e-14, 0.5e-14], 2);

        public IReadOnlyList<double> Breakpoints => [];

        public NoisePower At(double frequency) => new(1, 1, 1);
    }
}
