using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>Steady-state responses: the bin of a trial, the F test against its neighbours, coherence.</summary>
public class SteadyStateTests
{
    private const int Neighbours = 120;

    // 40 nV at a derivation of two electrodes of 0.10/sqrt(2) uV/sqrt(Hz): the derivation holds 0.10 uV/sqrt(Hz).
    private static SmallStudy Study(double power, double seconds = 1, double jitter = 0) => new()
    {
        Eeg = [[[0, 0, 20], [0, 0, -20]]],
        Meg = [[[1e-6, 0, 0], [0, 1e-6, 0], [0, 0, 1e-6]]],
        Noise = new NoiseModel { EegRows = 2, MegRows = 3, Terms = [new InstrumentNoise([1e-7 / Math.Sqrt(2), 1e-7 / Math.Sqrt(2)], [1e-14, 1e-14, 1e-14])] },
        Derivations = [("E0-E1", [1, -1])],
        Moment = 1e-9,
        Steady = new SteadyState(85, seconds),
        Jitter = jitter,
        Targets = [new AmplitudeRatioChoice(3), new DetectionChoice(0.05, power, 1)],
        Given = new Vec3(0, 0, 1),
        Protocol = new Protocol { Rate = 10, Session = 600 },
    };

    private static TargetResult Detection(SmallStudy study) => study.Assess().Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[1];

    [Theory]
    [InlineData(0.8, 61)]
    [InlineData(0.9, 80)]
    public void FortyNanovoltsInATenthOfAMicrovolt_TakeTheTabledTime(double power, double seconds)
    {
        // Fixed-input row 5: A = 40 nV peak, 0.10 uV/sqrt(Hz), F(2, 240), alpha .05. Tabled to the second; the count is rounded up.
        Assert.InRange(Detection(Study(power)).Trials.P50!.Value, seconds, seconds + 1);
    }

    [Theory]
    [InlineData(0.5)]
    [InlineData(4)]
    public void Time_DoesNotDependOnTheLengthOfATrial(double seconds)
    {
        TargetResult target = Detection(Study(0.8, seconds));
        Assert.InRange(60 * target.Minutes!.P50!.Value, 60, 61.5 + seconds);
    }

    [Fact]
    public void Trials_ComeNoFasterThanTheyAreLong()
    {
        TargetResult target = Detection(Study(0.8, 2));
        RelativeAssert.Equal(2 * target.Trials.P50!.Value / 60.0, target.Minutes!.P50!.Value, 1e-12);
    }

    [Fact]
    public void Noise_IsTheDensityOverTheLengthOfATrial()
    {
        // snr_db = 10 log10(A^2 T/density): 1.6e-15 x 2 / 1e-14.
        RelativeAssert.Equal(10 * Math.Log10(0.32), Study(0.8, 2).Assess().Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.SnrDb.P50!.Value, 1e-9);
    }

    [Theory]
    // Critical values of the spectral F test and of the coherence, recomputed from the exact distributions; 0.0060 published for 500 epochs (Braz J Med Biol Res 39:1593).
    [InlineData(0.05, 100, 0.0298)]
    [InlineData(0.05, 500, 0.00599)]
    [InlineData(0.01, 100, 0.0455)]
    public void CriticalCoherence_IsTheTabledOne(double alpha, long trials, double critical) =>
        Assert.Equal(critical, Coherence.Critical(alpha, trials), 0.5 * Math.Pow(10, Math.Floor(Math.Log10(critical)) - 2));

    [Theory]
    [InlineData(0.05, 3.033)]
    [InlineData(0.01, 4.695)]
    public void CriticalF_IsTheTabledOne(double alpha, double critical) =>
        Assert.InRange(new SteadyStateRule(alpha, 0.8, 1).Critical, critical - 5e-4, critical + 5e-4);

    [Fact]
    public void Probability_AtTheCount_IsThePowerAskedFor()
    {
        var rule = new SteadyStateRule(0.05, 0.8, 3);
        const double power = 0.02;
        RelativeAssert.Equal(0.8, rule.Probability(power, 0, rule.Trials(power))!.Value, 1e-9);
        RelativeAssert.Equal(0.8, rule.Probability(power * Math.Pow(rule.SmallestScale(power, 0, 50), 2), 0, 50)!.Value, 1e-9);
    }

    [Fact]
    public void Power_AgreesWithSimulation()
    {
        // F of a bin that holds sqrt(2 N P) more than its 120 neighbours; 20,000 trials of the test, seed 1: three standard errors are 0.0085.
        var random = new Random(1);
        var rule = new SteadyStateRule(0.05, 0.8, 1);
        double noncentrality = rule.Trials(1), critical = rule.Critical, passed = 0;
        const int runs = 20_000;
        for (int run = 0; run < runs; run++)
        {
            double x = Normal() + Math.Sqrt(noncentrality), y = Normal(), rest = 0;
            for (int k = 0; k < 2 * Neighbours; k++)
            {
                double n = Normal();
                rest += n * n;
            }

            passed += (x * x + y * y) / 2 > critical * rest / (2 * Neighbours) ? 1 : 0;
        }

        Assert.InRange(passed / runs, 0.8 - 0.0085, 0.8 + 0.0085);
        double Normal() => Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(2 * Math.PI * random.NextDouble());
    }

    [Fact]
    public void Jitter_ActsAtTheFrequency()
    {
        double x = 2 * Math.PI * 85 * 2e-3, kept = Math.Exp(-x * x / 2);
        RelativeAssert.Equal(Detection(Study(0.8)).SmallestMoment!.Value / kept, Detection(Study(0.8, jitter: 2e-3)).SmallestMoment!.Value, 1e-12);
    }

    [Fact]
    public void Chains_GiveTheirCount() => Assert.All(Study(0.9).Assess().Verdicts.Where(v => v.Chain.Count > 0), verdict =>
        Assert.Equal(verdict.Chain.First(l => l.Symbol == "N").Value, ChainArithmetic.Recompute(verdict.Chain)["N"]));
}
