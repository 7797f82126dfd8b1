using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>Rows and verdicts of realistic filters.</summary>
public class RealisticFilterRowsTests
{
    private static SmallStudy Study(double placeError, string? eeg = Names.RealisticFilter, string? meg = Names.RealisticFilter)
    {
        var random = new Random(4);
        return new SmallStudy
        {
            Eeg = SmallStudy.Random(random, 9, 6, 100),
            Meg = SmallStudy.Random(random, 9, 8, 1e-6),
            EegCovariance = SmallStudy.RandomCovariance(random, 6, 1e-6),
            MegCovariance = SmallStudy.RandomCovariance(random, 8, 1e-13),
            Derivations = [("E0-E1", [1, -1, 0, 0, 0, 0])],
            Targets = [new AmplitudeRatioChoice(3), new DetectionChoice(0.01, 0.9, 1)],
            Given = new Vec3(0, 0, 1),
            EegMeasure = eeg,
            MegMeasure = meg,
            PlaceError = placeError,
        };
    }

    [Fact]
    public void RowsStandOnlyWhereAVerdictAsksForThem()
    {
        Assert.DoesNotContain(Study(0, null, null).Assess().Results, r => r.Measure == Names.RealisticFilter);
        Assert.Equal(3 * 6, Study(0).Assess().Results.Count(r => r.Measure == Names.RealisticFilter));
    }

    [Fact]
    public void WithoutErrors_EveryRowIsThatOfTheMatchedFilter()
    {
        RegionResult region = Study(0).Assess();
        foreach (MeasureResult row in region.Results.Where(r => r.Measure == Names.RealisticFilter))
        {
            MeasureResult matched = region.Find(row.Modality, row.Direction, Names.MatchedFilter)!;
            Assert.Equal(matched.SnrDb.P50!.Value, row.SnrDb.P50!.Value, 1e-5);
            Assert.Equal(matched.Targets.Select(t => t.Trials.P50), row.Targets.Select(t => t.Trials.P50));
        }
    }

    [Fact]
    public void WithErrors_TheRangeIsWiderAndItsMedianBelow()
    {
        RegionResult region = Study(0.02).Assess();
        foreach (Modality modality in Enum.GetValues<Modality>())
        {
            Percentiles realistic = region.Find(modality, DirectionName.Given, Names.RealisticFilter)!.SnrDb, matched = region.Find(modality, DirectionName.Given, Names.MatchedFilter)!.SnrDb;
            Assert.True(realistic.P50 < matched.P50);
            Assert.True(realistic.P95 - realistic.P05 > matched.P95 - matched.P05);
        }
    }

    [Fact]
    public void Verdicts_StandOnThem_AndTheirChainsGiveTheirCount()
    {
        RegionResult region = Study(0.02).Assess();
        Assert.Equal(6, region.Verdicts.Count);
        foreach (VerdictResult verdict in region.Verdicts)
        {
            Assert.Equal(Names.RealisticFilter, verdict.Measure);
            Assert.Equal(region.Find(verdict.Modality, verdict.Direction, verdict.Measure)!.Targets.First(t => t.Rule == verdict.Rule).Trials.P50, (long)ChainArithmetic.Recompute(verdict.Chain)["N"]);
        }
    }

    [Fact]
    public void KnownWaveform_GoesThroughThem()
    {
        SmallStudy study = Study(0.01) with { Waveform = new OscillationChoice(40, 3) };
        RegionResult region = study.Assess(), plain = (study with { EegMeasure = Names.MatchedFilter, MegMeasure = Names.MatchedFilter }).Assess();
        foreach (VerdictResult verdict in region.Verdicts)
        {
            Assert.Equal(verdict.Chain.First(l => l.Symbol == "N").Value, ChainArithmetic.Recompute(verdict.Chain)["N"]);
            Assert.True(region.Find(verdict.Modality, verdict.Direction, verdict.Measure)!.Targets[1].SmallestMoment > plain.Find(verdict.Modality, verdict.Direction, Names.MatchedFilter)!.Targets[1].SmallestMoment);
        }
    }

    [Fact]
    public void OneModalityAlone_LeavesTheOthersMeasure()
    {
        RegionResult region = Study(0.01, Names.RealisticFilter, null).Assess();
        Assert.Equal([Names.RealisticFilter, Names.BestChannel, Names.RealisticFilter], region.Verdicts.Where(v => v.Rule == Names.AmplitudeRatio).Select(v => v.Measure));
    }
}
