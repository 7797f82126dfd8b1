using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Planning;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Waveforms;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>Detection on a known waveform against closed forms and a slow twin; the peak that is left for the other rules.</summary>
public class KnownWaveformTests
{
    /// <summary>(z_.99 + z_.9)^2, to the rounding of quantiles.</summary>
    private const double Needed = 13.016943;

    /// <summary>A smallest moment against its formula with quantiles to seven digits.</summary>
    private const double Quantiles = 1e-6;

    /// <summary>Quadrature of slowly changing noise: two nodes a piece of a factor of 1.2, against trapezoids.</summary>
    private const double Quadrature = 2e-4;

    private static readonly Vec3 Up = new(0, 0, 1);

    private static readonly DetectionChoice Detection = new(0.01, 0.9, 1);

    private static readonly OscillationChoice Course = new(40, 3);

    private static SmallStudy Study(int seed = 5, int points = 1)
    {
        var random = new Random(seed);
        return new SmallStudy
        {
            Eeg = SmallStudy.Random(random, points, 6, 100),
            Meg = SmallStudy.Random(random, points, 8, 1e-6),
            EegCovariance = SmallStudy.RandomCovariance(random, 6, 1e-6),
            MegCovariance = SmallStudy.RandomCovariance(random, 8, 1e-13),
            Derivations = [("E0-E1", [1, -1, 0, 0, 0, 0]), ("E2-E5", [0, 0, 1, 0, 0, -1])],
            Targets = [new AmplitudeRatioChoice(3), Detection],
            Given = Up,
        };
    }

    // The smallest moment is real-valued where a count is rounded: N d^2 = needed.
    private static double SquaredDistance(SmallStudy study, RegionResult region, Modality modality, string measure)
    {
        TargetResult target = region.Find(modality, DirectionName.Given, measure)!.Targets[1];
        double session = SessionPlan.Trials(study.Protocol)!.Value, ratio = study.Moment / target.SmallestMoment!.Value;
        return Needed / session * ratio * ratio;
    }

    [Theory]
    [InlineData(Modality.Eeg, "E0-E1")]
    [InlineData(Modality.Eeg, Names.BestChannel)]
    [InlineData(Modality.Eeg, Names.MatchedFilter)]
    [InlineData(Modality.Meg, Names.BestChannel)]
    [InlineData(Modality.Meg, Names.MatchedFilter)]
    [InlineData(Modality.Both, Names.MatchedFilter)]
    [InlineData(Modality.Both, "E0-E1")]
    public void WhiteNoise_GivesTwiceTheEnergyOverTheDensity(Modality modality, string measure)
    {
        // Noise per trial counts as white over the band: S0 = s^2/B, d^2 = 2 E a^2/S0 = 2 E B P of the peak before filter and jitter (Kay 1998 II, ch. 4).
        SmallStudy plain = Study(), known = plain with { Waveform = Course, Jitter = 1e-3 };
        var recorded = new RecordedWaveform(new WindowedOscillation(Course.Frequency, Course.Cycles), plain.Band, Measured.BaselineToPeak, 1e-3, []);
        double power = SquaredDistance(plain, plain.Assess(), modality, measure);
        RelativeAssert.Equal(2 * recorded.Energy * plain.Band.Width * power, SquaredDistance(known, known.Assess(), modality, measure), 1e-10);
    }

    [Fact]
    public void OtherRules_ReadThePeakThatIsLeft()
    {
        SmallStudy plain = Study(), known = plain with { Waveform = Course, Jitter = 3e-3 };
        ResponseResult result = Assessor.Assess(known.Setup(), null, null, CancellationToken.None)[0];
        double kept = result.Waveform!.Kept;
        Assert.InRange(kept, 0.1, 0.9);
        foreach (MeasureResult row in plain.Assess().Results)
        {
            MeasureResult own = result.Regions[0].Find(row.Modality, row.Direction, row.Measure)!;
            RelativeAssert.Equal(row.SnrDb.P50!.Value + 20 * Math.Log10(kept), own.SnrDb.P50!.Value, 1e-10);
            RelativeAssert.Equal(row.Targets[0].SmallestMoment!.Value / kept, own.Targets[0].SmallestMoment!.Value, 1e-12);
            if (row.Peak is { } peak)
            {
                RelativeAssert.Equal(peak.Value * kept, own.Peak!.Value, 1e-12);
            }
        }
    }

    [Fact]
    public void JitterOfAFrequencyAlone_MultipliesEveryAmplitude()
    {
        SmallStudy plain = Study() with { ComponentFrequency = 40 }, smeared = plain with { Jitter = 2e-3 };
        double x = 2 * Math.PI * 40 * 2e-3, kept = Math.Exp(-x * x / 2);
        RegionResult before = plain.Assess(), after = smeared.Assess();
        RelativeAssert.Equal(before.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[1].SmallestMoment!.Value / kept,
            after.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[1].SmallestMoment!.Value, 1e-12);
    }

    [Fact]
    public void FreeTrigger_AddsTheScatterOfASample()
    {
        Study study = Study().Setup().Study with { SamplingRate = 500, TriggerSynchronised = false };
        RelativeAssert.Equal(1 / (500 * Math.Sqrt(12)), study.LatencyDeviation(study.Responses[0]), 1e-14);
        RelativeAssert.Equal(Math.Sqrt(1e-6 + 1 / (500.0 * 500 * 12)), study.LatencyDeviation(study.Responses[0] with { Jitter = 1e-3 }), 1e-14);
    }

    // Two causes of unlike spectrum: white sensors, and sources that fall with frequency and reach both modalities.
    private static SmallStudy Coloured(int seed = 9)
    {
        var random = new Random(seed);
        SmallStudy study = Study(seed);
        var sensors = new InstrumentNoise([.. Enumerable.Repeat(3e-8, 6)], [.. Enumerable.Repeat(4e-15, 8)]);
        double[] eeg = [.. Enumerable.Range(0, 6 * 12).Select(_ => 1e-7 * (2 * random.NextDouble() - 1))], meg = [.. Enumerable.Range(0, 8 * 12).Select(_ => 1e-14 * (2 * random.NextDouble() - 1))];
        return study with { Noise = new NoiseModel { EegRows = 6, MegRows = 8, Terms = [sensors, new Falling(eeg, meg)] }, Waveform = Course, Jitter = 1e-3 };
    }

    private sealed class Falling(double[] eeg, double[] meg) : INoiseTerm
    {
        public string Name => "falling";

        public NoisePattern? Eeg { get; } = new(null, eeg, 12);

        public NoisePattern? Meg { get; } = new(null, meg, 12);

        public IReadOnlyList<double> Breakpoints => [20];

        public NoisePower At(double f) => f < 20 ? new(25, 25, 25) : new(1e4 / (f * f), 1e4 / (f * f), 1e4 / (f * f));
    }

    private static Matrix<double> Density(SmallStudy study, double f)
    {
        var white = (InstrumentNoise)study.Noise!.Terms[0];
        INoiseTerm falling = study.Noise.Terms[1];
        double power = falling.At(f).Eeg;
        double[] diagonal = [.. white.Eeg!.Diagonal!, .. white.Meg!.Diagonal!];
        double[] factor = [.. falling.Eeg!.Factor!, .. falling.Meg!.Factor!];
        Matrix<double> loads = Matrix<double>.Build.Dense(14, 12, (i, j) => factor[i * 12 + j]);
        return Matrix<double>.Build.DenseOfDiagonalArray(diagonal) + power * loads * loads.Transpose();
    }

    [Theory]
    [InlineData(Modality.Eeg, "E0-E1")]
    [InlineData(Modality.Eeg, Names.MatchedFilter)]
    [InlineData(Modality.Meg, Names.MatchedFilter)]
    [InlineData(Modality.Both, Names.MatchedFilter)]
    [InlineData(Modality.Both, "E0-E1")]
    public void ColouredNoise_EqualsTheSlowTwin(Modality modality, string measure)
    {
        SmallStudy study = Coloured();
        RegionResult region = study.Assess();
        double[] field = [.. study.Eeg[0].Select(r => r[2]), .. study.Meg[0].Select(r => r[2])];
        double found = SquaredDistance(study, region, modality, measure);

        // Rows as readings: a derivation is one; all electrodes but one after referencing span the range.
        double[][] rows = [.. Rows(modality, measure, region)];
        Matrix<double> read = Matrix<double>.Build.DenseOfRowArrays(rows);
        var w = new WindowedOscillation(Course.Frequency, Course.Cycles);
        double twin = study.Moment * study.Moment * PlainKnownWaveform.SquaredDistance(w, study.Band.Low, study.Band.High, study.Jitter,
            f => Scaled(read * Density(study, f) * read.Transpose(), rows.Length), Scaled(read * Vector<double>.Build.Dense(field)));
        RelativeAssert.Equal(twin, found, Quadrature);
    }

    private static IEnumerable<double[]> Rows(Modality modality, string measure, RegionResult region)
    {
        double[] Row(params (int At, double Weight)[] terms)
        {
            var row = new double[14];
            foreach ((int at, double weight) in terms)
            {
                row[at] = weight;
            }

            return row;
        }

        if (measure == "E0-E1")
        {
            yield return Row((0, 1), (1, -1));
            if (modality == Modality.Both)
            {
                // The pair reads the MEG channel that is best against the waveform; the chain names it.
                string channel = region.Verdicts.First(v => v.Modality == Modality.Both && v.Rule == Names.Detection).Chain.First(l => l.Symbol == "gm").Name;
                yield return Row((6 + channel["leadfield at M".Length..].First() - '0', 1));
            }

            yield break;
        }

        for (int k = 0; modality != Modality.Meg && k < 5; k++)
        {
            yield return Row((k, 1), (5, -1));
        }

        for (int k = 0; modality != Modality.Eeg && k < 8; k++)
        {
            yield return Row((6 + k, 1));
        }
    }

    // V^2 beside T^2: every row in units of its own size.
    private static Matrix<double> Scaled(Matrix<double> c, int n) => Matrix<double>.Build.Dense(n, n, (i, j) => Scale(i, n) * Scale(j, n) * c[i, j]);

    private static Vector<double> Scaled(Vector<double> b) => Vector<double>.Build.Dense(b.Count, k => Scale(k, b.Count) * b[k]);

    private static double Scale(int row, int n) => n is 13 && row >= 5 || n is 8 || (n is 2 && row == 1) ? 1e14 : 1e7;

    [Fact]
    public void MatchedFilter_IsNeverBelowAReading_AndBothNeverBelowEither()
    {
        for (int seed = 1; seed <= 8; seed++)
        {
            SmallStudy study = Coloured(seed);
            RegionResult region = study.Assess();
            double eeg = SquaredDistance(study, region, Modality.Eeg, Names.MatchedFilter), meg = SquaredDistance(study, region, Modality.Meg, Names.MatchedFilter);
            double best = SquaredDistance(study, region, Modality.Eeg, "E0-E1"), channel = SquaredDistance(study, region, Modality.Meg, Names.BestChannel);
            Assert.True(eeg >= best * (1 - 1e-9));
            Assert.True(eeg >= SquaredDistance(study, region, Modality.Eeg, "E2-E5") * (1 - 1e-9));
            Assert.True(meg >= channel * (1 - 1e-9));
            Assert.True(SquaredDistance(study, region, Modality.Both, Names.MatchedFilter) >= Math.Max(eeg, meg) * (1 - 1e-9));
            Assert.True(SquaredDistance(study, region, Modality.Both, "E0-E1") >= Math.Max(best, channel) * (1 - 1e-9));
        }
    }

    [Fact]
    public void Reference_DoesNotChangeTheMatchedFilter()
    {
        SmallStudy study = Coloured();
        SmallStudy other = study with { Reference = [1, 0, 0, 0, 0, 0] };
        RelativeAssert.Equal(SquaredDistance(study, study.Assess(), Modality.Eeg, Names.MatchedFilter),
            SquaredDistance(other, other.Assess(), Modality.Eeg, Names.MatchedFilter), 1e-9);
    }

    [Fact]
    public void Directions_StayThoseOfTheBand()
    {
        SmallStudy study = Coloured() with { Direction = DirectionName.StrongestTangential, Given = null };
        RegionResult plain = (study with { Waveform = null, Jitter = 0 }).Assess(), known = study.Assess();
        double[] Directions(RegionResult r, string rule) => [.. r.Verdicts.First(v => v.Modality == Modality.Meg && v.Rule == rule).Chain.Where(l => l.Symbol is "ux" or "uy" or "uz").Select(l => l.Value)];
        Assert.Equal(Directions(plain, Names.AmplitudeRatio), Directions(known, Names.Detection));
    }

    [Theory]
    [InlineData(Measured.BaselineToPeak)]
    [InlineData(Measured.PeakToTrough)]
    public void Chains_GiveTheirCount(Measured convention)
    {
        foreach (VerdictResult verdict in (Coloured() with { Measured = convention }).Assess().Verdicts)
        {
            Dictionary<string, double> values = ChainArithmetic.Recompute(verdict.Chain);
            Assert.Equal(verdict.Chain.First(l => l.Symbol == "N").Value, values["N"]);
        }
    }

    [Fact]
    public void LouderNoise_NeverNeedsFewerTrials_AndTwiceTheMomentAQuarter()
    {
        SmallStudy study = Coloured(), twice = study with { Moment = 2 * study.Moment };
        RelativeAssert.Equal(4 * SquaredDistance(study, study.Assess(), Modality.Eeg, "E0-E1"), SquaredDistance(twice, twice.Assess(), Modality.Eeg, "E0-E1"), Quantiles);
    }
}
