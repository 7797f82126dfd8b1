using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Verification.EndToEnd;

/// <summary>Noise as it is, through the whole chain: slow responses with a usual total, corners, the room and its removal, invariances.</summary>
public class NoiseKeysTests
{
    // Eyes open, 8 to 12 uV rms at 1-40 Hz (practice, from memory).
    private const string Slow =
        WholeChain.Adult + """
        sensors:
          eeg: {layout: ten-ten-64, reference: average}
          eeg_derivations: [Cz-mastoids]
          meg: {coil: axial-gradiometer, sites: 120, baseline_mm: 60, gap_mm: 30}
        noise:
          eeg_total: {rms_uV: 10, derivation: Cz-mastoids, band_Hz: [1, 40]}
          eeg_sensor_nV_per_rtHz: 20
          eeg_corner_Hz: 1
          meg_sensor_fT_per_rtHz: 5
          meg_corner_Hz: 1
          brain: {scale: 0.7}
          environment: {meg_fT_per_rtHz: 10, corner_Hz: 5, removed: true}
        responses:
          - {name: slow, regions: [hippocampus-left, thalamus-left], moment_nAm: 20, band_Hz: [1, 40], direction: tangential}
        target: {amplitude_ratio: 3}
        protocol: {rate_per_s: 0.5, session_min: 60}
        """;

    private static readonly Lazy<WholeChain> Study = new(() => WholeChain.Run(Slow));

    private static WholeChain Run(params (string From, string To)[] changes) => WholeChain.Run(WholeChain.Changed(Slow, changes));

    private static double Meg(WholeChain study, string measure = Names.BestChannel, int region = 0) => study.Db(Modality.Meg, DirectionName.Tangential, measure, 0, region);

    [Fact]
    public void StatedTotal_IsMet_AndEveryCauseIsInIt()
    {
        ReadingSpectrum eeg = Study.Value.Assessment.Responses[0].Spectra[0];
        Assert.Equal(["instrument", "brain", "muscle and electrode"], eeg.Noise.Select(c => c.Cause));
        Assert.All(eeg.Noise, c => Assert.InRange(c.Share, 0, 1));
        double[] cz = Study.Value.Prepared.Setup.Derivations!.Weights(0);
        RelativeAssert.Equal(10e-6, Math.Sqrt(Study.Value.Prepared.Setup.Noise!.Contributions(cz, -1, 1, 40).Sum(c => c.Variance)), 1e-9);
    }

    [Fact]
    public void TwiceTheNoise_IsFourTimesTheTrials_WithEveryCauseInIt()
    {
        // Every density, table and total twice: in decibels -20 log10 2, whatever the causes and whatever is removed.
        WholeChain loud = Run(("rms_uV: 10", "rms_uV: 20"), ("eeg_sensor_nV_per_rtHz: 20", "eeg_sensor_nV_per_rtHz: 40"), ("meg_sensor_fT_per_rtHz: 5", "meg_sensor_fT_per_rtHz: 10"),
            ("scale: 0.7", "scale: 1.4"), ("meg_fT_per_rtHz: 10, corner", "meg_fT_per_rtHz: 20, corner"));
        double step = 20 * Math.Log10(2);
        foreach ((Modality modality, string measure) in new[]
        {
            (Modality.Eeg, "Cz-mastoids"), (Modality.Eeg, Names.MatchedFilter), (Modality.Meg, Names.BestChannel), (Modality.Meg, Names.MatchedFilter), (Modality.Both, Names.MatchedFilter),
        })
        {
            RelativeAssert.Equal(step, Study.Value.Db(modality, DirectionName.Tangential, measure) - loud.Db(modality, DirectionName.Tangential, measure), 1e-6, $"{modality} {measure}");
        }

        long trials = Study.Value.Trials(Modality.Meg, DirectionName.Tangential, Names.BestChannel);
        Assert.InRange(loud.Trials(Modality.Meg, DirectionName.Tangential, Names.BestChannel), 4 * (trials - 1), 4 * trials);
    }

    [Fact]
    public void MegTrials_HardlyMoveWithTheSkull_WithBrainAndRoomInThem()
    {
        // Noise is a measured fact. In a sphere MEG leadfields do not know the skull at all; the brain's pattern is scaled to the tables' own sensors.
        const double hardly = 0.01;
        WholeChain resistive = WithSkull(0.004), conductive = WithSkull(0.033);
        for (int region = 0; region < 2; region++)
        {
            Assert.InRange(Meg(resistive, Names.BestChannel, region) - Meg(conductive, Names.BestChannel, region), -hardly, hardly);
            Assert.InRange(Meg(resistive, Names.MatchedFilter, region) - Meg(conductive, Names.MatchedFilter, region), -hardly, hardly);
        }

        double eeg = conductive.Db(Modality.Eeg, DirectionName.Tangential, "Cz-mastoids") - resistive.Db(Modality.Eeg, DirectionName.Tangential, "Cz-mastoids");
        Assert.True(eeg > 2, $"EEG moves: {eeg:F1} dB");

        static WholeChain WithSkull(double conductivity) => Run(("spheres: {preset: adult-4}", FormattableString.Invariant(
            $"spheres: {{centre_mm: [0, -18, 5], layers: [{{tissue: brain, radius_mm: 78, conductivity_S_per_m: 0.33}}, {{tissue: csf, radius_mm: 80, conductivity_S_per_m: 1.79}}, {{tissue: skull, radius_mm: 86, conductivity_S_per_m: {conductivity}}}, {{tissue: scalp, radius_mm: 92, conductivity_S_per_m: 0.43}}]}}")));
    }

    [Fact]
    public void JointFigures_AreAtLeastEach_AfterRemoval()
    {
        const double rounding = 1e-9;
        foreach (DirectionName direction in new[] { DirectionName.Tangential, DirectionName.StrongestTangential, DirectionName.Isotropic, DirectionName.Best })
        {
            double joint = Study.Value.Db(Modality.Both, direction, Names.MatchedFilter);
            Assert.True(joint >= Study.Value.Db(Modality.Eeg, direction, Names.MatchedFilter) - rounding, $"{direction}");
            Assert.True(joint >= Study.Value.Db(Modality.Meg, direction, Names.MatchedFilter) - rounding, $"{direction}");
        }
    }

    [Fact]
    public void RemovedRoom_IsTheLimitOfALoudOne_ForTheMatchedFilter()
    {
        // As one over the power of the room: 1e5 fT/sqrt(Hz), some 1e4 in a gradiometer, against 5 to 25 of sensors and brain leave some 1e-6, 1e-5 dB. (Ten times more would leave less, but whitens worse.)
        const double decibels = 1e-4;
        const string meant = "accept_implausible: [noise.environment.meg_fT_per_rtHz]\n";
        WholeChain endless = WholeChain.Run(meant + WholeChain.Changed(Slow, ("environment: {meg_fT_per_rtHz: 10, corner_Hz: 5, removed: true}", "environment: {meg_fT_per_rtHz: 100000, removed: false}")));
        for (int region = 0; region < 2; region++)
        {
            // Isotropic: the same directions in both studies. Those of the tangential plane begin at v1, which the removal turns.
            double difference = Study.Value.Db(Modality.Meg, DirectionName.Isotropic, Names.MatchedFilter, 0, region) - endless.Db(Modality.Meg, DirectionName.Isotropic, Names.MatchedFilter, 0, region);
            Assert.InRange(difference, -decibels, decibels);
        }
    }

    [Fact]
    public void Removal_DoesNotDependOnTheRoomsDensity()
    {
        WholeChain other = Run(("meg_fT_per_rtHz: 10, corner_Hz: 5", "meg_fT_per_rtHz: 3, corner_Hz: 0"));
        Assert.Equal(Meg(Study.Value), Meg(other), 0.0);
        Assert.Equal(Meg(Study.Value, Names.MatchedFilter), Meg(other, Names.MatchedFilter), 0.0);
    }

    [Fact]
    public void Loss_IsTheDifferenceOfThreeStudies_AndIsSaid()
    {
        // The same study with its room left in, and without any room.
        const double rounding = 1e-6;
        WholeChain left = Run(("removed: true", "removed: false")), quiet = Run(("environment: {meg_fT_per_rtHz: 10, corner_Hz: 5, removed: true}", "environment: none"));
        for (int region = 0; region < 2; region++)
        {
            RemovalLoss loss = Study.Value.Region(0, region).Removal!;
            Assert.Equal(DirectionName.Tangential, loss.Direction);
            // The tables interpolate between neighbours of an even count, the loss takes the upper of them: thousands of values lie close.
            const double neighbours = 0.05;
            Assert.Equal(Meg(Study.Value, Names.MatchedFilter, region) - Meg(quiet, Names.MatchedFilter, region), loss.MatchedFilterDb, neighbours);
            Assert.Equal(Meg(Study.Value, Names.BestChannel, region) - Meg(quiet, Names.BestChannel, region), loss.BestChannelDb, neighbours);
            Assert.Equal(Meg(Study.Value, Names.MatchedFilter, region) - Meg(left, Names.MatchedFilter, region), loss.MatchedFilterAgainstLeftInDb, neighbours);
            Assert.Equal(Meg(Study.Value, Names.BestChannel, region) - Meg(left, Names.BestChannel, region), loss.BestChannelAgainstLeftInDb, neighbours);
            Assert.True(loss.MatchedFilterDb <= loss.MatchedFilterAgainstLeftInDb + rounding && loss.MatchedFilterAgainstLeftInDb <= rounding, "a quiet room is best, a filter that knows the room next");
            Assert.Contains(Study.Value.Region(0, region).Warnings, w => w.Contains("taking the room's terms out changes the power SNR", StringComparison.Ordinal));
        }

        Assert.Null(left.Region().Removal);
    }

    [Fact]
    public void OutwardMagnetometers_CannotTellADeepSourceFromTheRoom_GradiometersCan()
    {
        // Outside a sphere the radial field of a source near its centre falls with the angle as that of a homogeneous field does, and on one sphere of magnetometers the two look alike;
        // a gradiometer does not see homogeneous fields (potential theory; derived here).
        WholeChain magnetometers = Run(("coil: axial-gradiometer, sites: 120, baseline_mm: 60, gap_mm: 30", "coil: magnetometer, sites: 120, gap_mm: 30"));
        Assert.True(magnetometers.Region(0, 1).Removal!.MatchedFilterDb < -10, "thalamus");
        Assert.True(Study.Value.Region(0, 1).Removal!.MatchedFilterDb > -2);
    }

    [Theory]
    [InlineData("removed: true")]
    [InlineData("removed: false")]
    public void Chain_RecomputesToTheCount_WithTheRoomInIt(string removed)
    {
        WholeChain study = Run(("removed: true", removed));
        foreach (VerdictResult verdict in study.Region().Verdicts)
        {
            long reported = study.Trials(verdict.Modality, verdict.Direction, verdict.Measure);
            Assert.Equal(reported, (long)ChainArithmetic.Recompute(verdict.Chain)["N"]);
            Assert.Equal(verdict.Modality != Modality.Eeg && removed == "removed: false", verdict.Chain.Any(l => l.Name.EndsWith("environment", StringComparison.Ordinal)));
            Assert.Equal(verdict.Modality != Modality.Eeg && removed == "removed: true", verdict.Chain.Any(l => l.Source.Contains("after removal of the room's", StringComparison.Ordinal)));
        }
    }

    [Fact]
    public void DirectionsAfterRemoval_AreThoseOfTheProjectedLeadfield()
    {
        // In a sphere the radial direction is silent before and after: a projection of nothing is nothing.
        SplitSummary split = Study.Value.Region().Split!;
        Assert.InRange(split.AngleToRadialDeg.P95!.Value, 0, 1e-3);
        Assert.Equal(0, split.WeakestOverStrongest.P95!.Value, 0.0);
        Assert.Null(Study.Value.Row(Modality.Meg, DirectionName.QuasiRadial, Names.BestChannel).SnrDb.P50);
    }

    [Fact]
    public void Spectra_AtTheBandsEdges_AreTheTablesByHand()
    {
        // Total table scaled to 10 uV: at 1 Hz and 4 Hz 4 and 3 in the same ratio; brain 0.7 x 4 uV/sqrt(Hz) at 1 Hz; amplifier 20 nV sqrt(1.5) sqrt(1 + 1/1).
        ReadingSpectrum eeg = Study.Value.Assessment.Responses[0].Spectra[0];
        Assert.Equal((40, 1.0, 3000.0), (eeg.Frequencies.Count, eeg.Frequencies[0], eeg.Frequencies[^1]));
        RelativeAssert.Equal(2.8, eeg.Noise.Single(c => c.Cause == "brain").Densities[0]!.Value, 1e-9);
        RelativeAssert.Equal(0.020 * Math.Sqrt(3), eeg.Noise.Single(c => c.Cause == "instrument").Densities[0]!.Value, 1e-9);
        double scale = 10 / (1e6 * Core.Noise.DefaultNoiseTables.EegTotal.Rms(1, 40));
        RelativeAssert.Equal(4 * scale, eeg.Total[0]!.Value, 1e-9);
        RelativeAssert.Equal(0.035 * scale, eeg.Total[^1]!.Value, 1e-9);
        // 20 nAm over sqrt(39 Hz), from the row's own peak.
        RelativeAssert.Equal(Study.Value.Peak(Modality.Eeg, DirectionName.Tangential, "Cz-mastoids") / Math.Sqrt(39), eeg.SignalLevel!.Value, 1e-12);
        ReadingSpectrum meg = Study.Value.Assessment.Responses[0].Spectra[1];
        Assert.Equal(Study.Value.Row(Modality.Meg, DirectionName.Tangential, Names.BestChannel).Peak!.Channel, meg.Channel);
        Assert.Equal(["instrument", "brain"], meg.Noise.Select(c => c.Cause));
        Assert.Equal("fT/sqrt(Hz)", meg.Unit);
    }

    [Fact]
    public void FlatNoise_StandsOverItsBandAlone()
    {
        WholeChain flat = WholeChain.Run(WholeChain.Adult + """
            sensors: {eeg: {layout: ten-twenty-21, reference: average}, meg: {coil: magnetometer, sites: 40, gap_mm: 20}}
            noise: {eeg_sensor_uV_rms: 5, meg_sensor_fT_rms: 140}
            responses: [{name: r, regions: [thalamus-left], moment_nAm: 10, band_Hz: [20, 200], direction: isotropic}]
            """);
        ReadingSpectrum meg = flat.Assessment.Responses[0].Spectra[1];
        Assert.Equal((20.0, 200.0), (meg.Frequencies[0], meg.Frequencies[^1]));
        Assert.Equal("stated per trial", Assert.Single(meg.Noise).Cause);
        RelativeAssert.Equal(140 / Math.Sqrt(180), meg.Total[17]!.Value, 1e-12);
    }

    [Fact]
    public void OwnTables_OutsideTheirRange_AreNotDrawn_ButWarnedOf()
    {
        string study = WholeChain.Changed(Slow, ("brain: {scale: 0.7}", "brain: {eeg_table: e.csv}"));
        WholeChain own = WholeChain.Run(study, ("e.csv", "frequency_Hz,density_uV_per_rtHz\n2,1\n30,0.3\n"));
        Assert.Contains(own.Assessment.Warnings, w => w.Contains("slow: the band 1 to 40 Hz leaves e.csv (2 to 30 Hz)", StringComparison.Ordinal));
        ReadingSpectrum eeg = own.Assessment.Responses[0].Spectra[0];
        for (int k = 0; k < eeg.Frequencies.Count; k++)
        {
            // Within the band the run itself extends the table; beyond it nothing is drawn.
            Assert.Equal(eeg.Frequencies[k] <= 40, eeg.Total[k] is not null);
        }
    }
}
