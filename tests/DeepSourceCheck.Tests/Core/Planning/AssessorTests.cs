using System.Text.Json;

using CsCheck;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Planning;

/// <summary>The chain from leadfield to trials, on arrays.</summary>
public class AssessorTests
{
    /// <summary>The plain twin inverts by eigenvalues: agreement to the condition of random covariances, about 1e3, times rounding.</summary>
    private const double TwinTolerance = 1e-10;

    /// <summary>Limit that the reference cases state for dB.</summary>
    private const double ReferenceDb = 1e-9;

    private static readonly Vec3 Direction = new Vec3(0.3, -0.5, 0.8).Unit();

    private static double Db(RegionResult region, Modality modality, DirectionName direction, string measure) =>
        region.Find(modality, direction, measure)!.SnrDb.P50!.Value;

    private static double Power(RegionResult region, Modality modality, DirectionName direction, string measure) =>
        Math.Pow(10, Db(region, modality, direction, measure) / 10);

    private static SmallStudy Random(int seed, int electrodes = 9, int channels = 12, int points = 1)
    {
        var random = new Random(seed);
        return new SmallStudy
        {
            Eeg = SmallStudy.Random(random, points, electrodes, 100),
            Meg = SmallStudy.Random(random, points, channels, 1e-6),
            EegCovariance = SmallStudy.RandomCovariance(random, electrodes, 1e-6),
            MegCovariance = SmallStudy.RandomCovariance(random, channels, 1e-13),
            Derivations = [("E0-E1", [1, -1, .. new double[electrodes - 2]]), ("E2-pair", [-0.5, -0.5, 1, .. new double[electrodes - 3]])],
            Given = Direction,
        };
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    public void Measures_OfRandomLeadfields_EqualThePlainTwin(int seed)
    {
        SmallStudy study = Random(seed);
        RegionResult region = study.Assess();
        int n = study.ElectrodeNames.Count;
        double[] weights = [.. Enumerable.Repeat(1.0 / n, n)];
        Matrix<double> p = PlainMeasures.Referencing(weights), c = PlainMeasures.Square(study.EegCovariance!);
        Matrix<double> eegNoise = p * c * p.Transpose(), megNoise = PlainMeasures.Square(study.MegCovariance!);
        Vector<double> eeg = p * PlainMeasures.Project(study.Eeg[0], Direction), meg = PlainMeasures.Project(study.Meg[0], Direction);

        void Check(double expected, Modality modality, string measure) =>
            RelativeAssert.Equal(expected, Power(region, modality, DirectionName.Given, measure), TwinTolerance, $"seed {seed}, {modality} {measure}");
        Check(PlainMeasures.ChannelMean(eeg, eegNoise, study.Moment), Modality.Eeg, Names.ChannelMean);
        Check(PlainMeasures.BestChannel(eeg, eegNoise, study.Moment), Modality.Eeg, Names.BestChannel);
        Check(PlainMeasures.MatchedFilter(eeg, eegNoise, study.Moment), Modality.Eeg, Names.MatchedFilter);
        Check(PlainMeasures.ChannelMean(meg, megNoise, study.Moment), Modality.Meg, Names.ChannelMean);
        Check(PlainMeasures.BestChannel(meg, megNoise, study.Moment), Modality.Meg, Names.BestChannel);
        Check(PlainMeasures.MatchedFilter(meg, megNoise, study.Moment), Modality.Meg, Names.MatchedFilter);
        foreach ((string name, double[] w) in study.Derivations)
        {
            Vector<double> v = Vector<double>.Build.Dense(w);
            double amplitude = study.Moment * v.DotProduct(PlainMeasures.Project(study.Eeg[0], Direction));
            Check(amplitude * amplitude / (v * c * v), Modality.Eeg, name);
        }

        double both = PlainMeasures.MatchedFilter(eeg, eegNoise, study.Moment) + PlainMeasures.MatchedFilter(meg, megNoise, study.Moment);
        Check(both, Modality.Both, Names.MatchedFilter);
        Check(Power(region, Modality.Eeg, DirectionName.Given, "E0-E1") + Power(region, Modality.Meg, DirectionName.Given, Names.BestChannel), Modality.Both, "E0-E1");
    }

    [Theory]
    [InlineData(Names.MatchedFilter, Names.BestChannel, Names.BestChannel)]
    [InlineData("E0-E1", Names.MatchedFilter, "E0-E1")]
    public void FilterBesideASingleReading_AddsItsPower(string eeg, string meg, string both)
    {
        // Independent noise: the covariance of the two chosen readings is diagonal, their power ratios add.
        RegionResult region = (Random(6) with { EegMeasure = eeg, MegMeasure = meg }).Assess();
        double sum = Power(region, Modality.Eeg, DirectionName.Given, eeg) + Power(region, Modality.Meg, DirectionName.Given, meg);
        RelativeAssert.Equal(sum, Power(region, Modality.Both, DirectionName.Given, both), TwinTolerance);
        Assert.Equal(both, region.Verdicts.Single(v => v.Modality == Modality.Both).Measure);
    }

    [Theory]
    [InlineData(4)]
    [InlineData(5)]
    public void Sets_OfDirections_EqualTheirDefinition(int seed)
    {
        // The contract: tangential = 64 equally spaced angles from v1, isotropic = 256 points of the golden-angle spiral, best = the largest over directions.
        SmallStudy study = Random(seed);
        var sink = new KeepingSink();
        RegionResult region = study.Assess(sink);
        Vec3 v1 = sink.Chunks[0].Directions[0], v2 = sink.Chunks[0].Directions[1], v3 = sink.Chunks[0].Directions[2];
        double[] tangential = [.. Enumerable.Range(0, 64).Select(k => Math.Cos(2 * Math.PI * k / 64) * v1 + Math.Sin(2 * Math.PI * k / 64) * v2).Select(u => Plain(u))];
        double[] isotropic = [.. Enumerable.Range(0, 256).Select(k => Plain(GoldenSpiral.Point(k, 256)))];
        double Plain(Vec3 u) => PlainMeasures.BestChannel(PlainMeasures.Project(study.Meg[0], u), PlainMeasures.Square(study.MegCovariance!), study.Moment);

        Compare(tangential, region.Find(Modality.Meg, DirectionName.Tangential, Names.BestChannel)!.SnrDb);
        Compare(isotropic, region.Find(Modality.Meg, DirectionName.Isotropic, Names.BestChannel)!.SnrDb);
        RelativeAssert.Equal(Plain(v1), Power(region, Modality.Meg, DirectionName.StrongestTangential, Names.BestChannel), TwinTolerance);
        RelativeAssert.Equal(Plain(v3), Power(region, Modality.Meg, DirectionName.QuasiRadial, Names.BestChannel), 1e-8);
        double best = Enumerable.Range(0, study.Meg[0].Length).Max(k => study.Moment * study.Moment * study.Meg[0][k].Sum(x => x * x) / study.MegCovariance![k * study.Meg[0].Length + k]);
        RelativeAssert.Equal(best, Power(region, Modality.Meg, DirectionName.Best, Names.BestChannel), TwinTolerance);

        int column = sink.Columns.ToList().FindIndex(c => c.Name == "MEG|isotropic|best-channel");
        RelativeAssert.Equal(isotropic.Average(), Math.Pow(10, sink.Chunks[0].SnrDb[column][0] / 10), TwinTolerance, "dipoles.csv holds the mean power over the set");

        static void Compare(double[] powers, Percentiles found)
        {
            Array.Sort(powers);
            double At(double share)
            {
                double h = share * (powers.Length - 1);
                int k = (int)h;
                double a = 10 * Math.Log10(powers[k]), b = 10 * Math.Log10(powers[Math.Min(k + 1, powers.Length - 1)]);
                return a + (h - k) * (b - a);
            }

            Assert.True(Math.Abs(At(0.05) - found.P05!.Value) < 1e-8 && Math.Abs(At(0.5) - found.P50!.Value) < 1e-8 && Math.Abs(At(0.95) - found.P95!.Value) < 1e-8);
        }
    }

    [Fact]
    public void BestDirection_OfEveryMeasure_IsNotExceededByAnyDirection()
    {
        RegionResult region = Random(6).Assess();
        foreach (MeasureResult row in region.Results.Where(r => r.Direction == DirectionName.Best))
        {
            MeasureResult isotropic = region.Find(row.Modality, DirectionName.Isotropic, row.Measure)!;
            MeasureResult given = region.Find(row.Modality, DirectionName.Given, row.Measure)!;
            Assert.True(row.SnrDb.P50 >= isotropic.SnrDb.P95 - 1e-9 && row.SnrDb.P50 >= given.SnrDb.P50 - 1e-9, $"{row.Modality} {row.Measure}");
            Assert.True(row.SnrDb.P50 < isotropic.SnrDb.P95 + 1.5, $"{row.Modality} {row.Measure}: the spiral comes within some degrees of the best direction");
        }
    }

    [Fact]
    public void MatchedFilter_OfEeg_DoesNotChangeWithTheReference()
    {
        // Referenced EEG has a singular covariance (rank m - 1); the filter works in its range.
        Gen.Int[1, 1_000_000].Sample(seed =>
        {
            SmallStudy study = Random(seed);
            int n = study.ElectrodeNames.Count;
            double average = Power(study.Assess(), Modality.Eeg, DirectionName.Given, Names.MatchedFilter);
            double[] single = new double[n];
            single[seed % n] = 1;
            double[] pair = new double[n];
            pair[1] = pair[3] = 0.5;
            RelativeAssert.Equal(average, Power((study with { Reference = single }).Assess(), Modality.Eeg, DirectionName.Given, Names.MatchedFilter), 1e-8);
            RelativeAssert.Equal(average, Power((study with { Reference = pair }).Assess(), Modality.Eeg, DirectionName.Given, Names.MatchedFilter), 1e-8);
        }, iter: 20, seed: "0000KeqOG7K1");
    }

    [Fact]
    public void JointPower_IsAtLeastThatOfEachModality()
    {
        Gen.Int[1, 1_000_000].Sample(seed =>
        {
            RegionResult region = Random(seed).Assess();
            foreach (DirectionName direction in new[] { DirectionName.Given, DirectionName.StrongestTangential, DirectionName.QuasiRadial, DirectionName.Best })
            {
                double joint = Db(region, Modality.Both, direction, Names.MatchedFilter), pair = Db(region, Modality.Both, direction, "E0-E1");
                Assert.True(joint >= Db(region, Modality.Eeg, direction, Names.MatchedFilter) - 1e-9);
                Assert.True(joint >= Db(region, Modality.Meg, direction, Names.MatchedFilter) - 1e-9);
                Assert.True(pair >= Db(region, Modality.Eeg, direction, "E0-E1") - 1e-9);
                Assert.True(pair >= Db(region, Modality.Meg, direction, Names.BestChannel) - 1e-9);
            }
        }, iter: 20, seed: "0000KeqOG7K1");
    }

    [Fact]
    public void SquareLaws_HoldForMomentAndNoise()
    {
        SmallStudy study = Random(7);
        RegionResult one = study.Assess(), two = (study with { Moment = 2 * study.Moment }).Assess();
        RegionResult loud = (study with { EegCovariance = [.. study.EegCovariance!.Select(v => 4 * v)], MegCovariance = [.. study.MegCovariance!.Select(v => 4 * v)] }).Assess();
        for (int k = 0; k < one.Results.Count; k++)
        {
            Assert.True(Math.Abs(two.Results[k].SnrDb.P50!.Value - one.Results[k].SnrDb.P50!.Value - 20 * Math.Log10(2)) < 1e-9);
            Assert.True(Math.Abs(one.Results[k].SnrDb.P50!.Value - loud.Results[k].SnrDb.P50!.Value - 20 * Math.Log10(2)) < 1e-9);
        }
    }

    [Fact]
    public void PeakToTrough_TakesTheNoiseOfADifference()
    {
        SmallStudy study = Random(8);
        RegionResult peak = study.Assess(), trough = (study with { Measured = Measured.PeakToTrough }).Assess();
        Assert.True(Math.Abs(Db(peak, Modality.Eeg, DirectionName.Given, "E0-E1") - Db(trough, Modality.Eeg, DirectionName.Given, "E0-E1") - 10 * Math.Log10(2)) < 1e-9);
        PeakAmplitude a = peak.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Peak!, b = trough.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Peak!;
        RelativeAssert.Equal(a.Value, b.Value, 1e-12, "the amplitude itself does not change");
    }

    [Fact]
    public void WaveV_OfPoint45MicrovoltsPeakToTrough_On2MicrovoltsRms_Needs356Trials()
    {
        // facts.md, end-to-end row 1, fixed inputs: 356 in the peak-to-trough convention (sqrt(2) s), 712 for the baseline-to-peak half, 178 if the convention is ignored.
        SmallStudy study = new()
        {
            Eeg = [[[0.45e-6 / 7e-9, 0, 0], [0, 0, 0]]],
            EegCovariance = [4e-12, 0, 0, 1e-30],
            Reference = [0, 1],
            Derivations = [("E0-E1", [1, -1])],
            Given = new Vec3(1, 0, 0),
            Moment = 7e-9,
        };
        Assert.Equal(356, (study with { Measured = Measured.PeakToTrough }).Assess().Verdicts[0].Chain.Single(l => l.Symbol == "N").Value, 0.0);
        Assert.Equal(178, (study with { Measured = Measured.BaselineToPeak }).Assess().Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[0].Trials.P50);
        Assert.Equal(712, (study with { Moment = 3.5e-9 }).Assess().Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[0].Trials.P50);
    }

    [Fact]
    public void ReferenceCase10_SnrAndTrials_AreMet()
    {
        JsonElement c = ReferenceCase.Sphere("10");
        JsonElement inputs = c.GetProperty("inputs"), expected = c.GetProperty("expected");
        double worst = 0;
        for (int q = 0; q < inputs.GetProperty("snr").GetArrayLength(); q++)
        {
            JsonElement i = inputs.GetProperty("snr")[q], e = expected.GetProperty("snr")[q];
            bool meg = i.TryGetProperty("leadfield_T_per_A_m", out JsonElement leadfield);
            leadfield = meg ? leadfield : i.GetProperty("leadfield_V_per_A_m");
            double[][] rows = [.. leadfield.EnumerateArray().Select(r => r.Numbers())];
            double[] variance = i.GetProperty(meg ? "noise_variance_T2" : "noise_variance_V2").Numbers();
            double[] u = i.GetProperty("direction").Numbers();
            var study = new SmallStudy
            {
                Eeg = meg ? [] : [rows],
                Meg = meg ? [rows] : [],
                EegCovariance = meg ? null : Diagonal(variance),
                MegCovariance = meg ? Diagonal(variance) : null,
                Unreferenced = true,                            // the case's EEG rows and variances are those after referencing
                Given = new Vec3(u[0], u[1], u[2]),
                Moment = i.GetProperty("amplitude_A_m").GetDouble(),
                Targets = [.. inputs.GetProperty("targets").EnumerateArray().Select(t => new AmplitudeRatioChoice(Ratio(t)))],
            };
            RegionResult region = study.Assess();
            Modality modality = meg ? Modality.Meg : Modality.Eeg;
            MeasureResult mean = region.Find(modality, DirectionName.Given, Names.ChannelMean)!, filter = region.Find(modality, DirectionName.Given, Names.MatchedFilter)!;
            if (e.GetProperty("snr_db_is_minus_infinity").GetBoolean())
            {
                Assert.Null(mean.SnrDb.P50);
                Assert.NotNull(mean.Reason);
            }
            else
            {
                worst = Math.Max(worst, Math.Abs(mean.SnrDb.P50!.Value - e.GetProperty("snr_db").GetDouble()));
            }

            for (int t = 0; t < study.Targets.Count; t++)
            {
                Assert.Equal(Count(e.GetProperty("trials_mean_channel")[t]), mean.Targets[t].Trials.P50);
                Assert.Equal(Count(e.GetProperty("trials_detector")[t]), filter.Targets[t].Trials.P50);
            }
        }

        Assert.True(worst <= ReferenceDb, $"worst {worst:E1} dB");

        static long? Count(JsonElement e) => e.GetProperty("trials").ValueKind == JsonValueKind.Null ? null : e.GetProperty("trials").GetInt64();
        static double Ratio(JsonElement t) => t.GetProperty("kind").GetString() switch
        {
            "amplitude" => t.GetProperty("target").GetDouble(),
            "power" => Math.Sqrt(t.GetProperty("target").GetDouble()),
            _ => Math.Pow(10, t.GetProperty("target").GetDouble() / 20),
        };
    }

    [Fact]
    public void ReferenceCase10_ListOfCounts_IsExact()
    {
        JsonElement c = ReferenceCase.Sphere("10");
        JsonElement inputs = c.GetProperty("inputs").GetProperty("trials"), expected = c.GetProperty("expected").GetProperty("trials");
        for (int k = 0; k < inputs.GetArrayLength(); k++)
        {
            double power = inputs[k].GetProperty("single_trial_power_snr").GetDouble(), target = inputs[k].GetProperty("target").GetDouble();
            double asked = inputs[k].GetProperty("kind").GetString() switch { "amplitude" => target * target, "power" => target, _ => Math.Pow(10, target / 10) };
            JsonElement e = expected[k].GetProperty("trials");
            long? found = power > 0 ? TrialCount.Ceiling(asked / power) : null;
            Assert.Equal(e.ValueKind == JsonValueKind.Null ? null : e.GetInt64(), found);
        }
    }

    [Fact]
    public void SilentDirection_IsNullWithAReason_AndGivesTheFiguresAtTheLeak()
    {
        // Rows that see nothing along z: a source along z is silent, not -320 dB.
        var random = new Random(9);
        double[][][] meg = SmallStudy.Random(random, 3, 12, 1e-6);
        foreach (double[] row in meg.SelectMany(p => p))
        {
            row[2] = 0;
        }

        RegionResult region = new SmallStudy { Meg = meg, Given = new Vec3(0, 0, 1) }.Assess();
        MeasureResult strongest = region.Find(Modality.Meg, DirectionName.StrongestTangential, Names.BestChannel)!;
        foreach (DirectionName direction in new[] { DirectionName.QuasiRadial, DirectionName.Given })
        {
            MeasureResult silent = region.Find(Modality.Meg, direction, Names.BestChannel)!;
            Assert.Null(silent.SnrDb.P50);
            Assert.Null(silent.Targets[0].Trials.P50);
            Assert.Contains("silent", silent.Reason, StringComparison.Ordinal);
            Assert.Contains("silent", silent.Targets[0].Reason, StringComparison.Ordinal);
            Assert.True(Math.Abs(strongest.SnrDb.P50!.Value + 20 * Math.Log10(0.06) - silent.AtLeak!.SnrDb.P50!.Value) < 1e-9);
            Assert.True(silent.AtLeak.Targets[0].Trials.P50 >= (strongest.Targets[0].Trials.P50 - 1) / 0.0036);
        }

        Assert.Contains("out of reach", region.Verdicts[0].Text, StringComparison.Ordinal);
        Assert.False(region.Verdicts[0].FitsSession);
    }

    [Theory]
    [InlineData(Measured.BaselineToPeak)]
    [InlineData(Measured.PeakToTrough)]
    public void LockedArtefact_RaisesTheCount_OrPutsItOutOfReach(Measured measured)
    {
        // methods 6: N = rho^2 s^2 / (A^2 - rho^2 r^2), not reachable where A <= rho r.
        const double amplitude = 1e-6, noise = 5e-6;
        SmallStudy study = new()
        {
            Eeg = [[[amplitude / 1e-8, 0, 0], [0, 0, 0]]],
            EegCovariance = [noise * noise, 0, 0, 1e-30],
            Reference = [0, 1],
            Derivations = [("E0-E1", [1, -1])],
            Given = new Vec3(1, 0, 0),
            Measured = measured,
        };
        double c = measured == Measured.PeakToTrough ? Math.Sqrt(2) : 1;
        foreach (double r in new[] { 0.1e-6, 0.2e-6, 0.3e-6 })
        {
            TargetResult target = (study with { ArtefactEeg = r }).Assess().Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[0];
            Assert.Equal((long)Math.Ceiling(9 * c * c * noise * noise / (amplitude * amplitude - 9 * r * r)), target.Trials.P50);
        }

        RegionResult buried = (study with { ArtefactEeg = 0.34e-6 }).Assess();
        TargetResult none = buried.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets[0];
        Assert.Null(none.Trials.P50);
        Assert.Contains("averaging", none.Reason, StringComparison.Ordinal);
        TargetResult filter = buried.Find(Modality.Eeg, DirectionName.Given, Names.MatchedFilter)!.Targets[0];
        Assert.Null(filter.Trials.P50);
        Assert.Contains("filter", filter.Reason, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(0, 0)]
    [InlineData(1e-3, 0)]                                       // EEG buried: MEG alone remains
    [InlineData(0, 1e-9)]                                       // MEG buried: EEG alone remains
    [InlineData(1e-8, 0)]
    public void Pair_UnderALockedArtefact_IsNeverWorseThanOneReadingAlone(double eegVolts, double megTesla)
    {
        SmallStudy study = Random(17, points: 11) with { ArtefactEeg = eegVolts, ArtefactMeg = megTesla, Targets = [new AmplitudeRatioChoice(3), new DetectionChoice(0.01, 0.9, 1)] };
        RegionResult region = study.Assess();
        for (int rule = 0; rule < 2; rule++)
        {
            TargetResult Of(Modality modality, string measure) => region.Find(modality, DirectionName.Given, measure)!.Targets[rule];
            TargetResult eeg = Of(Modality.Eeg, "E0-E1"), meg = Of(Modality.Meg, Names.BestChannel), pair = Of(Modality.Both, "E0-E1");
            Assert.True(pair.Trials.P50 <= Math.Min(eeg.Trials.P50 ?? long.MaxValue, meg.Trials.P50 ?? long.MaxValue), $"{eeg.Trials.P50} {meg.Trials.P50} {pair.Trials.P50}");
            Assert.True(pair.SmallestMoment <= Math.Min(eeg.SmallestMoment ?? double.MaxValue, meg.SmallestMoment ?? double.MaxValue) * (1 + 1e-12));
            VerdictResult verdict = region.Verdicts.Where(v => v.Modality == Modality.Both).ElementAt(rule);
            Assert.Equal(pair.Trials.P50, (long)ChainArithmetic.Recompute(verdict.Chain)["N"]);
        }
    }

    [Fact]
    public void FiniteSamples_LowerTheFilterAsPublished()
    {
        // power / (nu/(nu-p-1)) * (nu-p+2)/(nu+1); p is the rank: 12 MEG channels, 8 of 9 referenced electrodes.
        SmallStudy study = Random(10);
        RegionResult exact = study.Assess(), estimated = (study with { MegSamples = 100, EegSamples = 50 }).Assess();
        double meg = (100.0 - 12 - 1) / 100 * (100 - 12 + 2) / 101, eeg = (50.0 - 8 - 1) / 50 * (50 - 8 + 2) / 51;
        RelativeAssert.Equal(meg * Power(exact, Modality.Meg, DirectionName.Given, Names.MatchedFilter), Power(estimated, Modality.Meg, DirectionName.Given, Names.MatchedFilter), 1e-12);
        RelativeAssert.Equal(eeg * Power(exact, Modality.Eeg, DirectionName.Given, Names.MatchedFilter), Power(estimated, Modality.Eeg, DirectionName.Given, Names.MatchedFilter), 1e-12);
        RelativeAssert.Equal(Power(estimated, Modality.Eeg, DirectionName.Given, Names.MatchedFilter) + Power(estimated, Modality.Meg, DirectionName.Given, Names.MatchedFilter),
            Power(estimated, Modality.Both, DirectionName.Given, Names.MatchedFilter), 1e-12);
        Assert.Equal(exact.Find(Modality.Meg, DirectionName.Given, Names.BestChannel)!.SnrDb, estimated.Find(Modality.Meg, DirectionName.Given, Names.BestChannel)!.SnrDb);
    }

    [Fact]
    public void Together_SumsFieldsAndSharesTheMoment()
    {
        SmallStudy two = Random(11, points: 4) with { Regions = 2, Together = true };
        RegionResult joint = two.Assess();
        double[][] mean = [.. Enumerable.Range(0, 9).Select(row => Enumerable.Range(0, 3).Select(axis => two.Eeg.Average(p => p[row][axis])).ToArray())];
        SmallStudy one = two with { Eeg = [mean], Meg = [[.. Enumerable.Range(0, 12).Select(row => Enumerable.Range(0, 3).Select(axis => two.Meg.Average(p => p[row][axis])).ToArray())]], Regions = 1, Together = false };
        RegionResult single = one.Assess();
        Assert.Equal("region0 + region1", joint.Region);
        Assert.Equal(4, joint.Dipoles);
        RelativeAssert.Equal(Power(single, Modality.Eeg, DirectionName.Given, "E0-E1"), Power(joint, Modality.Eeg, DirectionName.Given, "E0-E1"), 1e-12);
        RelativeAssert.Equal(Power(single, Modality.Meg, DirectionName.Tangential, Names.MatchedFilter), Power(joint, Modality.Meg, DirectionName.Tangential, Names.MatchedFilter), 1e-9);
    }

    [Fact]
    public void Opposite_SourcesTogether_CancelToSilence()
    {
        var random = new Random(12);
        double[][][] meg = SmallStudy.Random(random, 1, 12, 1e-6);
        double[][] minus = [.. meg[0].Select(row => row.Select(x => -x).ToArray())];
        RegionResult joint = new SmallStudy { Meg = [meg[0], minus], Regions = 2, Together = true, Given = Direction }.Assess();
        Assert.Null(joint.Find(Modality.Meg, DirectionName.Given, Names.BestChannel)!.SnrDb.P50);
    }

    [Theory]
    [InlineData(DirectionName.Given)]
    [InlineData(DirectionName.Tangential)]
    [InlineData(DirectionName.StrongestTangential)]
    [InlineData(DirectionName.Isotropic)]
    [InlineData(DirectionName.Best)]
    [InlineData(DirectionName.QuasiRadial)]
    public void Chain_OfEveryVerdict_RecomputesToTheReportedCount(DirectionName direction)
    {
        SmallStudy study = Random(13, points: 23) with
        {
            Direction = direction,
            Targets = [new AmplitudeRatioChoice(3), new DetectionChoice(0.01, 0.9, 28)],
            Measured = Measured.PeakToTrough,
        };
        RegionResult region = study.Assess();
        Assert.Equal(6, region.Verdicts.Count);
        foreach (VerdictResult verdict in region.Verdicts)
        {
            MeasureResult row = region.Find(verdict.Modality, verdict.Direction, verdict.Measure)!;
            long? reported = row.Targets.Single(t => t.Rule == verdict.Rule).Trials.P50;
            Assert.Equal(reported, (long)ChainArithmetic.Recompute(verdict.Chain)["N"]);
        }
    }

    [Fact]
    public void SmallestMoment_NeedsExactlyTheSession()
    {
        SmallStudy study = Random(14, points: 9) with { Targets = [new AmplitudeRatioChoice(3), new DetectionChoice(0.01, 0.9, 1)] };
        RegionResult region = study.Assess();
        foreach (string rule in new[] { "amplitude_ratio", "detection" })
        {
            double smallest = region.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets.Single(t => t.Rule == rule).SmallestMoment!.Value;
            RegionResult at = (study with { Moment = smallest * (1 + 1e-9) }).Assess(), below = (study with { Moment = smallest * (1 - 1e-3) }).Assess();
            Assert.True(at.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets.Single(t => t.Rule == rule).Trials.P50 <= 6000);
            Assert.True(below.Find(Modality.Eeg, DirectionName.Given, "E0-E1")!.Targets.Single(t => t.Rule == rule).Trials.P50 > 6000);
        }
    }

    [Fact]
    public void WithoutProtocol_ThereAreNoMinutesAndNoSession()
    {
        RegionResult region = (Random(15) with { Protocol = null }).Assess();
        Assert.All(region.Results, r => Assert.Null(r.Targets[0].Minutes));
        Assert.All(region.Verdicts, v => Assert.Null(v.FitsSession));
        Assert.All(region.Results, r => Assert.Null(r.Targets[0].SmallestMoment));
    }

    [Fact]
    public void Reference_ItselfCarriesNothing_AndIsLeftOutOfTheMean()
    {
        SmallStudy study = Random(16);
        double[] single = new double[9];
        single[4] = 1;
        RegionResult region = (study with { Reference = single }).Assess();
        Matrix<double> p = PlainMeasures.Referencing(single), c = PlainMeasures.Square(study.EegCovariance!);
        Matrix<double> noise = p * c * p.Transpose();
        Vector<double> b = p * PlainMeasures.Project(study.Eeg[0], Direction);
        double expected = Enumerable.Range(0, 9).Where(k => k != 4).Average(k => study.Moment * study.Moment * b[k] * b[k] / noise[k, k]);
        RelativeAssert.Equal(expected, Power(region, Modality.Eeg, DirectionName.Given, Names.ChannelMean), TwinTolerance);
    }

    private static double[] Diagonal(double[] variance)
    {
        double[] c = new double[variance.Length * variance.Length];
        for (int k = 0; k < variance.Length; k++)
        {
            c[k * variance.Length + k] = variance[k];
        }

        return c;
    }
}
