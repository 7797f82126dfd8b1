using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>What competitors leave of a response: nothing changes without strength, the same topography leaves nothing, more strength never helps.</summary>
public class CompetitorReportTests
{
    // Two whitenings of the same noise agree to the rounding of a Cholesky factor.
    private const double Rounding = 1e-9;

    private const int Eeg = 6, Meg = 5;

    private static SmallStudy Study(double moment, int seed = 5, bool sameField = false)
    {
        var random = new Random(seed);
        double[][][] e = SmallStudy.Random(random, 2, Eeg, 100), m = SmallStudy.Random(random, 2, Meg, 1e-5);
        return new SmallStudy
        {
            Eeg = sameField ? [e[0], e[0]] : e,
            Meg = sameField ? [m[0], m[0]] : m,
            EegCovariance = SmallStudy.RandomCovariance(random, Eeg, 1e-6),
            MegCovariance = SmallStudy.RandomCovariance(random, Meg, 1e-13),
            Derivations = [("E0-E1", [1, -1, 0, 0, 0, 0])],
            Given = new Vec3(0.6, 0, 0.8),
            Regions = 2,
            RegionsOfResponse = 1,
            Competitors = [new CompetitorChoice("region1", moment)],
        };
    }

    private static double Left(CompetitorsResult competitors, Modality modality, string measure) =>
        competitors.Readings.Single(r => r.Modality == modality && r.Measure == measure).PowerLeftDb.P50!.Value;

    public static TheoryData<Modality, string> Measures => new()
    {
        { Modality.Eeg, "E0-E1" }, { Modality.Eeg, Names.MatchedFilter }, { Modality.Meg, Names.BestChannel }, { Modality.Meg, Names.MatchedFilter },
        { Modality.Both, "E0-E1" }, { Modality.Both, Names.MatchedFilter },
    };

    [Theory]
    [MemberData(nameof(Measures))]
    public void ZeroStrength_LeavesEveryFigureAsItWas(Modality modality, string measure)
    {
        RegionResult region = Study(0).Assess();
        CompetitorReading reading = region.Competitors!.Readings.Single(r => r.Modality == modality && r.Measure == measure);
        Assert.Equal(0.0, reading.PowerLeftDb.P50);
        MeasureResult row = region.Find(modality, DirectionName.Given, measure)!;
        RelativeAssert.Equal(row.SnrDb.P50!.Value, reading.SnrDb.P50!.Value, Rounding);
        Assert.Equal(row.Targets[0].Trials.P50, reading.Counts[0].Trials.P50);
        Assert.Equal(row.Targets[0].Trials.P50, reading.Counts[0].Without);
    }

    [Theory]
    [MemberData(nameof(Measures))]
    public void MoreStrength_LeavesLess(Modality modality, string measure)
    {
        double[] left = [.. new[] { 0, 1e-9, 1e-8, 1e-7, 1e-6 }.Select(m => Left(Study(m).Assess().Competitors!, modality, measure))];
        Assert.All(left.Zip(left.Skip(1)), p => Assert.True(p.Second < p.First, string.Join(", ", left)));
    }

    [Fact]
    public void SameTopography_LeavesAlmostNothing_AndAnotherOneDoes()
    {
        // A competitor that makes every field that the response can make. With k = m^2/3 the power is a^2 u'(G^-1 + k I)^-1 u <= a^2/k = 3 (a/m)^2 whatever the noise: no filter passes that.
        const double Moment = 1e-6, Response = 1e-8;
        double most = 10 * Math.Log10(3 * (Response / Moment) * (Response / Moment));
        CompetitorsResult same = Study(Moment, sameField: true).Assess().Competitors!, other = Study(Moment).Assess().Competitors!;
        foreach (Modality modality in new[] { Modality.Eeg, Modality.Meg, Modality.Both })
        {
            CompetitorReading filter = same.Readings.Single(r => r.Modality == modality && r.Measure == Names.MatchedFilter);
            Assert.InRange(filter.SnrDb.P50!.Value, double.NegativeInfinity, most + Rounding);
            Assert.InRange(filter.PowerLeftDb.P50!.Value, double.NegativeInfinity, -30);
        }

        Assert.True(Left(other, Modality.Both, Names.MatchedFilter) > Left(same, Modality.Both, Names.MatchedFilter) + 20);
        const double Alike = 1e-4;
        Assert.All(same.Sources[0].Overlaps, o => Assert.InRange(o.AngleDeg.P50!.Value, 0, Alike));
        Assert.True(other.Sources[0].Overlaps[^1].AngleDeg.P50 > 10);
    }

    [Fact]
    public void Derivation_GetsNoisierByTheCompetitorsRms()
    {
        // By hand: reading of the competitor E0 - E1 at unit moment along each axis, its rms over directions, and (s^2 + n^2)/s^2.
        const double Moment = 3e-8;
        SmallStudy study = Study(Moment);
        double[] row = [.. Enumerable.Range(0, 3).Select(a => study.Eeg[1][0][a] - study.Eeg[1][1][a])];
        double n2 = Moment * Moment / 3 * row.Sum(x => x * x);
        double[] c = study.EegCovariance!;
        double s2 = c[0] + c[Eeg + 1] - 2 * c[1];
        CompetitorReading reading = study.Assess().Competitors!.Readings.Single(r => r.Measure == "E0-E1" && r.Modality == Modality.Eeg);
        RelativeAssert.Equal(-10 * Math.Log10(1 + n2 / s2), reading.PowerLeftDb.P50!.Value, Rounding);
        RelativeAssert.Equal(1e6 * Math.Sqrt(n2), reading.Rms!.Value, Rounding);
        Assert.Equal("uV", reading.Rms.Unit);
    }

    [Fact]
    public void MatchedFilter_IsThatOfTheSumOfBothCovariances()
    {
        // A competitor of the response's own field L: by the matrix inversion lemma the filter's power is a^2 u'(G^-1 + m^2/3 I)^-1 u with G = L'C^-1 L, 3 x 3.
        const double Moment = 3e-8;
        SmallStudy study = Study(Moment, sameField: true);
        Matrix<double> l = Matrix<double>.Build.Dense(Meg, 3, (row, axis) => study.Meg[0][row][axis]), c = Matrix<double>.Build.Dense(Meg, Meg, (i, j) => study.MegCovariance![i * Meg + j]);
        Matrix<double> g = 1e-18 * (l.Transpose() * (1e26 * c).Inverse() * 1e26 * l);       // per (nA m)^2
        Vector<double> u = Vector<double>.Build.Dense([0.6, 0, 0.8]);
        double power = 100 * (u * (g.Inverse() + 300 * Matrix<double>.Build.DenseIdentity(3)).Inverse() * u);
        CompetitorReading filter = study.Assess().Competitors!.Readings.Single(r => r.Modality == Modality.Meg && r.Measure == Names.MatchedFilter);
        RelativeAssert.Equal(10 * Math.Log10(power), filter.SnrDb.P50!.Value, Rounding);
    }

    [Fact]
    public void Chain_RecomputesTheTrials()
    {
        foreach (CompetitorReading reading in Study(3e-8).Assess().Competitors!.Readings)
        {
            CompetitorCount count = reading.Counts[0];
            Assert.Equal(count.Trials.P50, (long)ChainArithmetic.Recompute(count.Chain)["N"]);
        }
    }

    [Fact]
    public void Location_OfImportedLeadfields_SaysWhyThereIsNone()
    {
        LocationResult location = Study(0).Assess().Location!;
        Assert.Empty(location.Bounds);
        Assert.Contains("point by point", location.Reason, StringComparison.Ordinal);
    }

    [Fact]
    public void Electrodes_AreTheSameWhateverTheReference()
    {
        SmallStudy study = Study(0) with { ChooseSensors = true, Competitors = [] };
        SensorChoiceResult average = study.Assess().Electrodes!, first = (study with { Reference = [1, 0, 0, 0, 0, 0], EegMeasure = "E0-E1" }).Assess().Electrodes!;
        Assert.Equal(average.Steps.Select(s => s.Electrode), first.Steps.Select(s => s.Electrode));
        Assert.Equal(average.Steps.SelectMany(s => s.Trials.Select(t => t.Trials)), first.Steps.SelectMany(s => s.Trials.Select(t => t.Trials)));
        Assert.Equal(average.Derivations.Select(d => d.Name), first.Derivations.Select(d => d.Name));
        // All electrodes together are the matched filter of the results.
        Assert.Equal(study.Assess().Find(Modality.Eeg, DirectionName.Given, Names.MatchedFilter)!.Targets[0].Trials.P50, average.Steps[^1].Trials[0].Trials);
        Assert.Null((study with { ChooseSensors = false }).Assess().Electrodes);
    }
}
