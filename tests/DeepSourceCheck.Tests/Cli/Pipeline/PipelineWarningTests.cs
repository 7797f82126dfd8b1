using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Cli.Pipeline;

/// <summary>Every warning and refusal of the pipeline is provoked.</summary>
public sealed class PipelineWarningTests : IDisposable
{
    private readonly PreparedText _text = new();

    public void Dispose() => _text.Dispose();

    private static void Says(IEnumerable<string> warnings, string what) => Assert.Contains(warnings, w => w.Contains(what, StringComparison.Ordinal));

    [Fact]
    public void PlainStudy_HasNoWarnings() => Assert.Empty(_text.Assess(PreparedText.Study).Warnings);

    [Fact]
    public void NoMeg_SaysThatABuiltInArraySplits() =>
        Says(_text.Warnings(PreparedText.Study, ("  meg: {coil: magnetometer, sites: 40, gap_mm: 20}\n", ""), (", meg_sensor_fT_rms: 200", "")), "serves to split the directions, and for nothing else");

    [Fact]
    public void ElectrodesOffTheSphere_SayHowFarTheyWereMoved()
    {
        _text.With("electrodes.tsv", "name\tx\ty\tz\nA\t0\t-18\t100\nB\t95\t-18\t5\nC\t-92\t-18\t5\n");
        Says(_text.Warnings(PreparedText.Study, ("layout: ten-twenty-21", "electrodes: electrodes.tsv")), "by 2.0 mm on average and 3.0 mm at most");
    }

    [Fact]
    public void ImportedLeadfieldsWithoutMeg_SayWhichDirectionsAreLeft()
    {
        _text.WithImported().With("rows.tsv", "row\tmodality\tkind\tunit\nE1\tEEG\telectrode\tV/(A m)\nE2\tEEG\telectrode\tV/(A m)\nE3\tEEG\telectrode\tV/(A m)\n");
        Assessment assessment = _text.Assess(PreparedText.ImportedStudy, (" meg: meg.npy,", ""), (", meg_sensor_fT_rms: 200", ""));
        Says(assessment.Warnings, "only isotropic, best and given figures are reported");
        RegionResult region = assessment.Responses[0].Regions[0];
        Assert.Null(region.Split);
        Assert.Equal([DirectionName.Isotropic, DirectionName.Best], region.Results.Select(r => r.Direction).Distinct());
        Assert.Single(region.Verdicts);
    }

    [Fact]
    public void ImportedLeadfields_SayThatThereIsNoBrainNoise() =>
        Says(_text.WithImported().Warnings(PreparedText.ImportedStudy, ("eeg_sensor_uV_rms: 2", "eeg_total: {rms_uV: 10, derivation: E1-E2, band_Hz: [1, 100]}, eeg_sensor_nV_per_rtHz: 20")), "with imported leadfields there is no brain noise");

    [Fact]
    public void ImportedRegionThatLosesPoints_SaysSo_AndOneThatLosesAllIsRefused()
    {
        _text.WithImported(double.NaN).With("points.tsv", "name\tx\ty\tz\nq\t20\t-20\t30\np\t30\t-20\t30\n");
        PreparedStudy prepared = _text.Prepare(PreparedText.ImportedStudy);
        Says(prepared.Warnings, "probe: 1 of its 2 points are unusable");
        Says(prepared.Warnings, "1 of 2 imported points are unusable");
        _text.With("points.tsv", "name\tx\ty\tz\nq\t20\t-20\t30\n");
        Assert.Contains("region 'probe' keeps no point", _text.Refusal(PreparedText.ImportedStudy), StringComparison.Ordinal);
    }

    [Fact]
    public void ImportedRegion_OfUnknownPointOrShapeOrLibrary_IsRefused()
    {
        _text.WithImported().With("points.tsv", "name\tx\ty\tz\nunknown\t20\t-20\t30\n");
        Assert.Contains("'unknown' is not among the imported points", _text.Refusal(PreparedText.ImportedStudy), StringComparison.Ordinal);
        Assert.Contains("imported", _text.Refusal(PreparedText.ImportedStudy, ("points: points.tsv}]", "ellipsoid: {centre_mm: [0, 0, 0], semi_axes_mm: [3, 3, 3]}}]")), StringComparison.Ordinal);
        Assert.Contains("the library's region pons has no place among imported leadfields", _text.Refusal(PreparedText.ImportedStudy, ("regions: [probe]", "regions: [pons]")), StringComparison.Ordinal);
    }

    [Fact]
    public void RegionOutsideTheHead_SaysWhatItLost()
    {
        Says(_text.Warnings(PreparedText.Study, ("points: points.tsv", "ellipsoid: {centre_mm: [0, 50, 5], semi_axes_mm: [15, 15, 15]}, spacing_mm: 5")), "does not fit");
        _text.With("points.tsv", "name\tx\ty\tz\np\t0\t300\t0\n");
        Assert.Contains("keeps no dipole", _text.Refusal(PreparedText.Study), StringComparison.Ordinal);
    }

    [Fact]
    public void NamedSideOfAMask_IsHeldAgainstItsCentroid()
    {
        var voxels = new double[8 * 8 * 8];
        voxels[(4 * 8 + 4) * 8 + 1] = 1;
        // voxels of 4 mm; (1, 4, 4) stands at (-12, -20, 6)
        NiftiBytes volume = new() { Dim = [3, 8, 8, 8, 1, 1, 1, 1], Pixdim = [1, 4, 4, 4, 1, 0, 0, 0], Rows = [4, 0, 0, -16, 0, 4, 0, -36, 0, 0, 4, -10], Values = voxels };
        File.WriteAllBytes(_text.At("mask.nii"), volume.File());
        string mask = "mask: mask.nii, label: 1, spacing_mm: 1";
        Says(_text.Warnings(PreparedText.Study, ("name: probe, points: points.tsv", "name: nucleus-right, " + mask), ("[probe]", "[nucleus-right]")), "nucleus-right: its centroid lies on the left");
        Assert.DoesNotContain(_text.Warnings(PreparedText.Study, ("name: probe, points: points.tsv", "name: nucleus-left, " + mask), ("[probe]", "[nucleus-left]")), w => w.Contains("centroid lies", StringComparison.Ordinal));
    }

    [Fact]
    public void Moment_IsHeldAgainstTheSizeOfItsRegion()
    {
        // 2 nAm/mm2 over the cross-section of a sphere of 3 mm radius, pi 9 mm2 = 28.3: 56.5 nAm; warned above 170, refused above 565.
        (string, string) ball = ("points: points.tsv", "ellipsoid: {centre_mm: [30, -20, 30], semi_axes_mm: [3, 3, 3]}");
        Assert.Empty(_text.Warnings(PreparedText.Study, ball, ("moment_nAm: 10", "moment_nAm: 169")));
        Says(_text.Warnings(PreparedText.Study, ball, ("moment_nAm: 10", "moment_nAm: 171")), "responses.r.moment_nAm: against 2 nAm/mm2 over the 28.3 mm2 of probe (cross-section of a sphere of its volume), the moment of 171 nAm is far from the usual 0 to 56.5 nAm");
        (string, string) huge = ("moment_nAm: 10", "moment_nAm: 570");
        Assert.Contains("study.yaml:8:", _text.Refusal(PreparedText.Study, ball, huge), StringComparison.Ordinal);
        Says(_text.Warnings(PreparedText.Study + "\naccept_implausible: [responses.r.moment_nAm]", ball, huge), "accepted by accept_implausible");

        // Points have no size: nothing to hold against. Regions that act together share the moment.
        Assert.Empty(_text.Warnings(PreparedText.Study, ("moment_nAm: 10", "moment_nAm: 171")));
        (string, string) pair = ("regions: [{name: probe, points: points.tsv}]",
            "regions: [{name: probe, ellipsoid: {centre_mm: [30, -20, 30], semi_axes_mm: [3, 3, 3]}}, {name: other, ellipsoid: {centre_mm: [-30, -20, 30], semi_axes_mm: [3, 3, 3]}}]");
        Assert.Empty(_text.Warnings(PreparedText.Study, pair, ("regions: [probe], moment_nAm: 10", "regions: [probe, other], counts: together, moment_nAm: 300")));
        Assert.Equal(2, _text.Warnings(PreparedText.Study, pair, ("regions: [probe], moment_nAm: 10", "regions: [probe, other], moment_nAm: 300")).Count);
        RelativeAssert.Equal(Math.PI * 9e-6, MomentCheck.CrossSection(4.0 / 3 * Math.PI * 27e-9), 1e-12);
    }

    [Theory]
    [InlineData("moment_nAm: 250", "points.tsv", null)]
    [InlineData("moment_nAm: 0.05", "deep.tsv", "far below anything published")]
    public void PredictedPeak_FarBelowAnythingRecorded_Warns(string moment, string points, string? says)
    {
        _text.With("deep.tsv", "name\tx\ty\tz\np\t2\t-20\t6\n");
        IReadOnlyList<string> warnings = _text.Assess(PreparedText.Study, ("moment_nAm: 10", moment), ("points.tsv", points)).Warnings;
        Assert.Equal(says is not null, warnings.Any(w => w.Contains(says ?? "published", StringComparison.Ordinal)));
    }

    [Fact]
    public void PredictedPeak_AboveAnythingRecorded_WarnsThenStopsUnlessAccepted()
    {
        // Leadfields of 100 uV/nAm stand for a wrong unit: 10 nAm give 1 mV (warned above 450 uV), 30 nAm 3 mV (refused above 1500 uV).
        _text.WithImported().WithArray("eeg.npy", [3, 2, 3], [.. Enumerable.Range(0, 18).Select(k => k < 6 ? 1e5 : 10.0)]);
        (string, string) given = ("direction: isotropic", "direction: [1, 0, 0]");
        Says(_text.Assess(PreparedText.ImportedStudy, given).Warnings, "the predicted peak at E1 (probe) of 1000 uV is far from the usual 0.01 to 150 uV");
        Assert.Contains("3000 uV", Assert.Throws<InputException>(() => _text.Assess(PreparedText.ImportedStudy, given, ("moment_nAm: 10", "moment_nAm: 30"))).Message, StringComparison.Ordinal);
        Says(_text.Assess(PreparedText.ImportedStudy + "\naccept_implausible: [responses.r.moment_nAm]", given, ("moment_nAm: 10", "moment_nAm: 30")).Warnings, "accepted by accept_implausible");
    }

    [Fact]
    public void ImplausibleAmplitude_IsRefusedWhereItStands()
    {
        (string, string) amplitude = ("moment_nAm: 10", "amplitude: {peak_uV: 3000, derivation: Cz-Oz}");
        InputProblem problem = Assert.Throws<InputException>(() => _text.Assess(PreparedText.Study, amplitude)).Problems[0];
        Assert.Equal("responses.r.amplitude.peak_uV", problem.Key);
        Assert.Equal(8, problem.Line);
        Assert.Contains("follows from amplitude.peak_uV", problem.Message, StringComparison.Ordinal);
        Assert.Contains("add `responses.r.moment_nAm` to accept_implausible", problem.Message, StringComparison.Ordinal);
        Says(_text.Assess(PreparedText.Study + "\naccept_implausible: [responses.r.moment_nAm]", amplitude).Warnings, "accepted by accept_implausible");
    }

    [Fact]
    public void WaveformTable_ThatStartsAwayFromTheBaseline_IsSaid()
    {
        _text.With("step.csv", "time_ms,value\n0,0.5\n20,1\n40,0\n").With("rest.csv", "time_ms,value\n0,0\n20,1\n40,0\n");
        (string, string) Table(string file) => ("moment_nAm: 10", $"moment_nAm: 10, waveform: {file}");
        Says(_text.Assess(PreparedText.Study, Table("step.csv")).Warnings, "starts or ends at 50 % of its peak");
        Assert.DoesNotContain(_text.Assess(PreparedText.Study, Table("rest.csv")).Warnings, w => w.Contains("starts or ends", StringComparison.Ordinal));
    }

    [Fact]
    public void TotalFarFromTheTables_WarnsThenStops()
    {
        // The tables give 2.0 uV over 100-3000 Hz; usual is 0.3 to 3 times that, warned outside by 3 times more, refused by 10 times.
        string Total(double rms) => FormattableString.Invariant($"eeg_total: {{rms_uV: {rms}, derivation: Cz-Pz, band_Hz: [100, 3000]}}");
        (string, string) band = ("band_Hz: [1, 100]", "band_Hz: [100, 1000]");
        const string was = "eeg_sensor_uV_rms: 2";
        Assert.DoesNotContain(_text.Warnings(PreparedText.Study, band, (was, Total(10))), w => w.StartsWith("noise.eeg_total.rms_uV", StringComparison.Ordinal));
        Says(_text.Warnings(PreparedText.Study, band, (was, Total(25))), "noise.eeg_total.rms_uV: the total in this band 25 uV");
        Assert.Contains("more than 10 times outside", _text.Refusal(PreparedText.Study, band, (was, Total(70))), StringComparison.Ordinal);
    }

    [Fact]
    public void CovarianceFarBelowTheInstrument_OrInAnotherUnit_WarnsThenStops()
    {
        // The quietest usual amplifier has 2 nV/sqrt(Hz) x sqrt(99 Hz) = 20 nV: warned below 6.6 nV, refused below 2.0 nV. 4 uV^2 taken for V^2 is 2 V.
        (string, string) measured = ("eeg_sensor_uV_rms: 2", "eeg_covariance: c.npy");
        IReadOnlyList<string> Warned(double sd) => With(sd).Warnings(PreparedText.ImportedStudy, measured);
        PreparedText With(double sd) => _text.WithImported().WithArray("c.npy", [3, 3], PreparedText.Diagonal(4e-12, sd * sd, 4e-12));
        Assert.Empty(Warned(8e-9));
        Says(Warned(5e-9), "noise.eeg_covariance: row 2: the root of its variance");
        Assert.Contains("row 2", With(1e-9).Refusal(PreparedText.ImportedStudy, measured), StringComparison.Ordinal);
        Says(Warned(5e-3), "0.001 V (more than 3 times outside); check the unit");
        Assert.Contains("row 2: the root of its variance", With(2).Refusal(PreparedText.ImportedStudy, measured), StringComparison.Ordinal);
        (string, string) meg = ("meg_sensor_fT_rms: 200", "meg_covariance: m.npy");
        Assert.Contains("noise.meg_covariance", _text.WithArray("m.npy", [4, 4], PreparedText.Diagonal(4e4, 4e4, 4e4, 4e4)).Refusal(PreparedText.ImportedStudy, meg), StringComparison.Ordinal);
    }

    [Fact]
    public void SamplesThatLeaveNoInverse_AreRefused()
    {
        _text.WithImported().WithArray("c.npy", [3, 3], PreparedText.Diagonal(4e-12, 4e-12, 4e-12));
        (string, string) Measured(int samples) => ("eeg_sensor_uV_rms: 2", $"eeg_covariance: {{file: c.npy, samples: {samples}}}");
        Assert.Contains("no usable inverse", _text.Refusal(PreparedText.ImportedStudy, Measured(4)), StringComparison.Ordinal);
        Assert.Empty(_text.Warnings(PreparedText.ImportedStudy, Measured(5)));
    }

    [Fact]
    public void ReferenceRowOfZeros_IsDroppedWhereTheRecordingIsReferenced()
    {
        // Three electrodes against the first: its row is exactly zero; the others have the variance of a difference.
        double[] referenced = [0, 0, 0, 0, 8e-12, 4e-12, 0, 4e-12, 8e-12];
        _text.WithImported().WithArray("c.npy", [3, 3], referenced).WithArray("d.npy", [3, 3], PreparedText.Diagonal(4e-12, 4e-12, 4e-12));
        (string, string) reference = ("reference: none", "reference: E1");
        Assessment dropped = _text.Assess(PreparedText.ImportedStudy, reference, ("eeg_sensor_uV_rms: 2", "eeg_covariance: c.npy"));
        Assessment whole = _text.Assess(PreparedText.ImportedStudy, reference, ("eeg_sensor_uV_rms: 2", "eeg_covariance: d.npy"));
        foreach ((MeasureResult a, MeasureResult b) in dropped.Responses[0].Regions[0].Results.Zip(whole.Responses[0].Regions[0].Results))
        {
            Assert.True(a.SnrDb.P50 is { } x && b.SnrDb.P50 is { } y && Math.Abs(x - y) < 1e-9, $"{a.Modality} {a.Measure}: a recording referenced before or after is the same");
        }

        // MEG has no reference: a row of zeros there is a broken channel.
        _text.WithArray("m.npy", [4, 4], PreparedText.Diagonal(4e-26, 0, 4e-26, 4e-26));
        Assert.Contains("variance of row 2", _text.Refusal(PreparedText.ImportedStudy, ("meg_sensor_fT_rms: 200", "meg_covariance: m.npy")), StringComparison.Ordinal);
    }

    [Fact]
    public void ReferencedCovarianceBesideUnreferencedPotentials_IsSaid()
    {
        _text.With("electrodes.tsv", "name\tx\ty\tz\nA\t0\t-18\t97\nB\t92\t-18\t5\nC\t-92\t-18\t5\n");
        (string, string)[] changes = [("layout: ten-twenty-21, reference: average", "electrodes: electrodes.tsv, reference: none"), ("eeg_sensor_uV_rms: 2", "eeg_covariance: c.npy")];
        _text.WithArray("c.npy", [3, 3], 0, 0, 0, 0, 8e-12, 4e-12, 0, 4e-12, 8e-12);
        Says(_text.Warnings(PreparedText.Study, changes), "A has no variance) while sensors.eeg.reference is none");
        _text.WithArray("c.npy", [3, 3], [.. new double[] { 2, -1, -1, -1, 2, -1, -1, -1, 2 }.Select(v => v * 1e-12)]);
        Says(_text.Warnings(PreparedText.Study, changes), "its electrodes sum to zero");
        _text.WithArray("c.npy", [3, 3], PreparedText.Diagonal(4e-12, 4e-12, 4e-12));
        Assert.Empty(_text.Warnings(PreparedText.Study, changes));
    }

    [Fact]
    public void DerivationWithoutVariance_IsRefused()
    {
        _text.With("electrodes.tsv", "name\tx\ty\tz\nA\t0\t-18\t97\nB\t92\t-18\t5\nC\t-92\t-18\t5\n").WithArray("c.npy", [3, 3], 4e-12, 4e-12, 0, 4e-12, 4e-12, 0, 0, 0, 4e-12);
        Assert.Contains("the derivation A-B has no variance", _text.Refusal(PreparedText.Study,
            ("layout: ten-twenty-21, reference: average}", "electrodes: electrodes.tsv, reference: average}\n  eeg_derivations: [A-B]"), ("eeg_sensor_uV_rms: 2", "eeg_covariance: c.npy")), StringComparison.Ordinal);
    }

    [Fact]
    public void CentroidNearTheCentre_GetsItsRangeOverShiftsOfTheCentre()
    {
        _text.With("points.tsv", "name\tx\ty\tz\np\t0\t-18\t17\n");           // 12 mm from the centre, as the thalamus
        Assessment near = _text.Assess(PreparedText.Study);
        string said = Assert.Single(near.Warnings, w => w.Contains("where MEG vanishes", StringComparison.Ordinal));
        Assert.Matches(@"^probe: 12 mm from the sphere's centre, where MEG vanishes; a centre off by 5 mm changes its MEG power by -\d+ to \+\d dB, by 10 mm -\d+ to \+\d dB \(best channel, strongest tangential direction\)$", said);
        Assert.Contains(said, near.Responses[0].Regions[0].Warnings);
        _text.With("points.tsv", "name\tx\ty\tz\np\t0\t-18\t31\n");           // 26 mm
        Assert.Empty(_text.Assess(PreparedText.Study).Warnings);
    }
}
