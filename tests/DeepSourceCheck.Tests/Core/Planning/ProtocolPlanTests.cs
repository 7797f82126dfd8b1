using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>People, planned analyses and rate of a verdict, from arrays with a power SNR that is known by hand.</summary>
public class ProtocolPlanTests
{
    /// <summary>Relative: closed forms.</summary>
    private const double ClosedForm = 1e-12;

    private static readonly PeopleChoice Alike = new() { Spread = 1, Alpha = 0.05, Power = 0.8 };

    // 10 nAm x 40 V/(A m) = 0.4 uV on 4 uV rms: one trial's power SNR is 0.01.
    private static SmallStudy Study(Protocol protocol, params TargetChoice[] targets) => new()
    {
        Eeg = [[[0, 0, 20], [0, 0, -20]]],
        Meg = [[[1e-6, 0, 0], [0, 1e-6, 0], [0, 0, 1e-6]]],
        EegCovariance = [8e-12, 0, 0, 8e-12],
        MegCovariance = [1e-28, 0, 0, 0, 1e-28, 0, 0, 0, 1e-28],
        Derivations = [("E0-E1", [1, -1])],
        Given = new Vec3(0, 0, 1),
        Targets = targets.Length > 0 ? targets : [new AmplitudeRatioChoice(3)],
        Protocol = protocol,
    };

    private static VerdictResult Eeg(SmallStudy study) => study.Assess().Verdicts.First(v => v.Modality == Modality.Eeg);

    [Fact]
    public void People_AreTheWorkedGrid_WithTheSessionsTrials()
    {
        // facts of the trade: mean 1, spread 1, one trial 10 (power SNR 0.01): the counts are exact.
        PeopleResult people = Eeg(Study(new() { Rate = 1, Session = 300, People = Alike with { DropOut = 0.1, Participants = 13 } })).People!;
        Assert.Equal([(10, 89), (25, 42), (50, 26), (100, 18), (200, 14), (300, 13), (400, 12), (1000, 11)], people.Rows.Select(r => (r.Trials, r.Participants!.Value)));
        Assert.Equal([99, 47, 29, 20, 16, 15, 14, 13], people.Rows.Select(r => r.Invited!.Value));        // each count over 0.9, rounded up
        Assert.Equal(10, people.Unlimited);
        Assert.Equal(13, people.AtSession!.Participants);
        Assert.InRange(people.PowerOfStated!.Value, 0.8, 0.85);
        RelativeAssert.Equal(1 / Math.Sqrt(1 + 100 / 300.0), people.AtSession.EffectSize, ClosedForm);
    }

    [Fact]
    public void People_WithoutASession_HaveTheGridAlone_AndNoPower()
    {
        VerdictResult verdict = Eeg(Study(new() { Rate = 1, People = Alike with { Participants = 20 } }));
        Assert.Equal(7, verdict.People!.Rows.Count);
        Assert.Null(verdict.People.AtSession);
        Assert.Null(verdict.People.PowerOfStated);
        Assert.Null(Eeg(Study(new() { Rate = 1 })).People);
        Assert.Equal(900, verdict.Chain.Single(l => l.Symbol == "Ns").Value);                            // the verdict's trials: 9 / 0.01
    }

    [Fact]
    public void People_WhoAreAlike_NeedFewerWithEveryTrial()
    {
        PeopleResult people = Eeg(Study(new() { Rate = 1, People = Alike with { Spread = 0 } })).People!;
        Assert.Equal(2, people.Unlimited);
        Assert.All(people.Rows.Zip(people.Rows.Skip(1)), p => Assert.True(p.Second.Participants <= p.First.Participants));
        RelativeAssert.Equal(1, people.Rows.Single(r => r.Trials == 100).EffectSize, ClosedForm);
    }

    [Fact]
    public void TwoGroups_AreComparedByTheirDifference()
    {
        // Difference 0.5 over a spread that makes d = 0.5 at any number of trials worth mentioning: 64 in each group (Cohen 1988, from memory).
        PeopleResult people = Eeg(Study(new() { Rate = 1, Session = 300, People = Alike with { GroupDifference = 0.5 } })).People!;
        Assert.Equal(64, people.Unlimited);
    }

    [Fact]
    public void Why_RecomputesPeopleAndPlannedAnalyses()
    {
        Protocol protocol = new() { Rate = 1, Session = 300, People = Alike with { DropOut = 0.1, Participants = 20 } };
        foreach (Protocol p in new[] { protocol, protocol with { Session = null }, protocol with { People = protocol.People with { GroupDifference = 0.4 } } })
        {
            VerdictResult verdict = Eeg(Study(p, new DetectionChoice(0.01, 0.9, 1) { Stopping = new(4, Spending.PocockType) }));
            Dictionary<string, double> values = ChainArithmetic.Recompute(verdict.Chain);
            Assert.Equal(verdict.Stopping!.Most, values["Nx"]);
            RelativeAssert.Equal(verdict.Stopping.Expected, values["Ne"], ClosedForm);
            Assert.True(values.ContainsKey("np") && values.ContainsKey("ni") && values.ContainsKey("pk"));
            if (verdict.People!.AtSession is { } row)
            {
                Assert.Equal((double)row.Participants!.Value, values["np"]);
                Assert.Equal((double)row.Invited!.Value, values["ni"]);
            }
        }
    }

    [Theory]
    [InlineData(Spending.ObrienFlemingType)]
    [InlineData(Spending.PocockType)]
    public void PlannedAnalyses_KeepThePower_CostTheMostAndSaveTheExpected(Spending spending)
    {
        VerdictResult verdict = Eeg(Study(new() { Rate = 1, RejectedFraction = 0.1, Session = 1800 }, new DetectionChoice(0.01, 0.9, 1) { Stopping = new(3, spending) }));
        StoppingResult plan = verdict.Stopping!;
        double single = verdict.Chain.Single(l => l.Symbol == "N").Value;
        Assert.Equal(1302, single);                                                                       // ceil(13.017 / 0.01)
        Assert.True(plan.Most > single && plan.Expected < single && plan.ExpectedWithout > plan.Expected && plan.ExpectedWithout < plan.Most);
        Assert.Equal(plan.Most, plan.Rows[^1].Trials);
        Assert.Equal(plan.Rows[0].Trials * 3, plan.Most);
        Assert.InRange(plan.Rows.Sum(r => r.Stops), 0.9, 0.902);                                          // whole trials: at least the power asked for
        RelativeAssert.Equal(0.01, plan.Rows.Sum(r => r.StopsWithout), 1e-9);
        RelativeAssert.Equal(0.01, plan.Rows[^1].Spent, ClosedForm);
        RelativeAssert.Equal(plan.Most / 54.0, plan.MostMinutes!.Value, ClosedForm);                      // 60 x 1/s x 0.9
        Assert.Equal(plan.Most <= 1620, plan.FitsSession);                                                // 1800 x 0.9
    }

    [Fact]
    public void PlannedAnalyses_BesideALockedArtefact_StandOnWhatItLeaves()
    {
        // 0.04 uV of the 0.4 uV: d falls to 0.09, trials grow by (10/9)^2.
        DetectionChoice rule = new(0.01, 0.9, 1) { Stopping = new(2, Spending.PocockType) };
        StoppingResult free = Eeg(Study(new() { Rate = 1 }, rule)).Stopping!, held = Eeg(Study(new() { Rate = 1 }, rule) with { ArtefactEeg = 4e-8 }).Stopping!;
        Assert.InRange(held.Most / (double)free.Most, 100 / 81.0 - 0.003, 100 / 81.0 + 0.003);
    }

    [Theory]
    // One piece, A = 1 - b ln(rate): A^2 rate is largest where A = 2 b, ln(rate) = 1/b - 2 (by hand).
    [InlineData(0.25)]
    [InlineData(0.2)]
    public void BestRate_OfAStraightLineOverTheLogarithm_IsTheClosedForm(double slope)
    {
        RatePoint[] curve = [new(1, 1), new(50, 1 - slope * Math.Log(50))];
        RelativeAssert.Equal(Math.Exp(1 / slope - 2), RateOptimum.Best(curve), ClosedForm);
    }

    [Fact]
    public void BestRate_IsAnEnd_WhereAmplitudeHardlyFallsOrFallsAtOnce()
    {
        Assert.Equal(80, RateOptimum.Best([new(5, 1), new(80, 1)]));
        Assert.Equal(5, RateOptimum.Best([new(5, 1), new(20, 0.2), new(80, 0.05)]));
        Assert.Equal(80, RateOptimum.Best([new(5, 1), new(20, 0), new(80, 1)]));
    }

    [Fact]
    public void BestRate_BeatsAFineGridOfTheCurve() => Gen.Double[0, 2].Array[2, 6].Sample(amplitudes =>
    {
        RatePoint[] curve = [.. amplitudes.Select((a, k) => new RatePoint(2 * Math.Pow(2, k), a))];
        double best = RateOptimum.Best(curve), gain = Gain(best);
        Assert.InRange(best, curve[0].Rate, curve[^1].Rate);
        for (int i = 0; i <= 200; i++)
        {
            Assert.True(Gain(curve[0].Rate * Math.Pow(curve[^1].Rate / curve[0].Rate, i / 200.0)) <= gain * (1 + 1e-9));
        }

        double Gain(double rate) => RateOptimum.Amplitude(curve, rate) is var a ? a * a * rate : 0;
    }, seed: "0N0XIzNsQ0O2", iter: 300, threads: 1);

    [Fact]
    public void Rate_SaysWhatTheStatedOneCosts()
    {
        // Amplitude halves from 5 to 20/s: 4 x 900 trials come four times as fast, in the same time; 5/s and 20/s tie, and between them lies the best.
        VerdictResult verdict = Eeg(Study(new() { Rate = 5, Session = 600 }) with { RateCurve = [new(5, 1), new(20, 0.5)], Window = 0.15 });
        RateResult rate = verdict.Rate!;
        double slope = 0.5 / Math.Log(4), best = 5 * Math.Exp(1 / slope - 2), amplitude = 2 * slope;
        RelativeAssert.Equal(best, rate.Best, ClosedForm);
        RelativeAssert.Equal(amplitude, rate.Amplitude, ClosedForm);
        Assert.Equal((long)Math.Ceiling(900 / (amplitude * amplitude)), rate.Trials);
        RelativeAssert.Equal(900 / 300.0 - rate.Trials!.Value / (60 * best), rate.Saved!.Value, ClosedForm);
        Assert.True(rate.Overlaps);                                                                       // 0.15 s at 10.8/s
        Assert.Null(Eeg(Study(new() { Rate = 5, Session = 600 })).Rate);
    }
}
