using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>What the typed study holds: SI units, defaults, and nothing else.</summary>
public class StudyReaderTests
{
    // One rounding when a unit is converted, one when a square root is taken.
    private const double Rounding = 1e-15;

    [Fact]
    public void DefaultStudy_ReadsAsItsPageStates()
    {
        StudyReading reading = DefaultStudy.Read(Purpose.Assess, StudyText.Library);
        Study study = reading.Study;
        Assert.Empty(reading.Warnings);
        Assert.Equal("Click response of the brainstem, adult volunteers", study.Title);
        var head = Assert.IsType<SphereHeadChoice>(study.Head);
        Assert.Equal(("adult-4", 1.0), (head.Preset, head.LibraryScale));
        Assert.Equal([0.078, 0.080, 0.086, 0.092], head.Sphere.Layers.Select(l => l.OuterRadius));
        Assert.Equal([0.33, 1.79, 0.0132, 0.43], head.Sphere.Layers.Select(l => l.RadialConductivity));
        Near(new(0, -0.018, 0.005), head.Sphere.Centre);
        Assert.Equal(("ten-ten-64", ReferenceKind.Average), (study.Eeg!.Layout, study.Eeg.Reference.Kind));
        Assert.Equal(["Cz-mastoids"], study.Derivations);
        CoilArrayChoice array = study.Meg!.Generated!;
        Assert.Equal(("axial-gradiometer", 200, 0.060, 0.030), (array.Coil, array.Sites, array.Baseline, array.Gap));
        RelativeAssert.Equal(10 * Math.PI / 180, array.EdgeFront, Rounding);
        RelativeAssert.Equal(-35 * Math.PI / 180, array.EdgeBack, Rounding);
        Assert.Equal(new EegTotalChoice(2e-6, "Cz-mastoids", new(100, 3000)), study.Noise!.EegTotal);
        RelativeAssert.Equal(20e-9, study.Noise.EegDensity!.Value, Rounding);
        RelativeAssert.Equal(5e-15, study.Noise.MegDensity!.Value, Rounding);
        Assert.Null(study.Noise.Brain);
        Response response = Assert.Single(study.Responses);
        Assert.Equal(("wave V", "responses.wave V", false, Measured.BaselineToPeak), (response.Name, response.Key, response.Together, response.Measured));
        Assert.Equal(["inferior-colliculus-left", "inferior-colliculus-right"], response.Regions);
        RelativeAssert.Equal(3.5e-9, response.Moment, Rounding);
        Assert.Equal(new Band(100, 1500), response.Band);
        Assert.Equal(new DirectionChoice(DirectionName.Given, new Vec3(0, 0, 1)), response.Direction);
        Assert.Equal([new AmplitudeRatioChoice(3)], study.Targets);
        Assert.Equal(new Protocol { Rate = 11.1, RejectedFraction = 0.1, Session = 2400 }, study.Protocol);
    }

    [Fact]
    public void ExampleStudy_ReadsWithoutWarnings_AndStatesEverySupportedKey()
    {
        StudyReading reading = StudyText.Read(ExampleStudy.Text);
        Assert.Empty(reading.Warnings);
        Assert.Equal("touch response", Assert.Single(reading.Study.Responses).Name);
        Assert.Equal(2, reading.Study.Targets.Count);

        // In the text as a key or, where it is an alternative, in a comment.
        Assert.All(StudyKeys.All.Where(k => k.NotYet is null), key => Assert.Matches($@"(?m)(^|[ #{{]){System.Text.RegularExpressions.Regex.Escape(key.Name)}:", ExampleStudy.Text));
    }

    [Fact]
    public void ExampleStudy_CommentsEveryLineThatStatesAValue() =>
        Assert.All(ExampleStudy.Text.Split('\n').Where(l => l.Length > 0 && !l.TrimStart().StartsWith('#') && !l.TrimEnd().EndsWith(':') && !l.Contains("name:", StringComparison.Ordinal)
            && !l.Contains(": known", StringComparison.Ordinal) && !l.Contains("regions: [", StringComparison.Ordinal)),
            line => Assert.Contains(" # ", line, StringComparison.Ordinal));

    [Fact]
    public void EveryExampleValueOfTheRegistry_IsAdmittedByItsKey()
    {
        // Each key that is acted on, put where it belongs with its own example: no problem may be at that key.
        foreach (StudyKey key in StudyKeys.All.Where(k => k.NotYet is null && !k.Path.Contains("[]", StringComparison.Ordinal) && k.Path != "accept_implausible"))
        {
            string[] parts = key.Path.Split('.');
            string value = parts.Skip(1).Reverse().Aggregate(key.Example, (inner, name) => $"{{{name}: {inner}}}");
            string text = $"{parts[0]}: {value}\n";
            IReadOnlyList<InputProblem> problems = StudyText.Problems(text);
            Assert.DoesNotContain(problems, p => p.Key == key.Path && !p.Message.Contains("does not exist", StringComparison.Ordinal)
                && !p.Message.Contains("beside", StringComparison.Ordinal) && !p.Message.Contains("states n", StringComparison.Ordinal));
        }
    }

    [Fact]
    public void Tables_ReadInSiUnits()
    {
        Study study = StudyText.Read(StudyText.Tables).Study;
        var head = Assert.IsType<SphereHeadChoice>(study.Head);
        Assert.Null(head.Preset);
        Assert.Equal((0.0132, 0.03), (head.Sphere.Layers[2].RadialConductivity, head.Sphere.Layers[2].TangentialConductivity));
        Assert.Equal(("electrodes.tsv", "coordsystem.json"), (study.Eeg!.ElectrodesFile, study.Eeg.CoordinatesFile));
        Assert.Equal(["M1", "M2"], study.Eeg.Reference.Electrodes);
        Assert.Equal(new MegChoice("coils.tsv", null), study.Meg);
        Assert.Equal((8e-6, 200e-15), (study.Noise!.EegRms!.Value, study.Noise.MegRms!.Value));
        Assert.Equal(("points.tsv", "mask.nii.gz", 1.0), (study.Regions[0].Points, study.Regions[1].Mask, study.Regions[1].Label));
        Assert.Equal(new Vec3(0, 0.6, 0.8), study.Responses[0].Direction.Vector);
        Assert.Null(study.Protocol);
        Assert.Equal([new AmplitudeRatioChoice(3)], study.Targets);
    }

    [Fact]
    public void Imported_ReadsArraysAndCovariances()
    {
        Study study = StudyText.Read(StudyText.Imported).Study;
        Assert.Equal(new ImportedHeadChoice("eeg.npy", "meg.npy", "points.tsv", "rows.tsv"), study.Head);
        Assert.Equal(ReferenceKind.None, study.Eeg!.Reference.Kind);
        Assert.Equal(new MegChoice(null, null), study.Meg);
        Assert.Equal(new CovarianceChoice("eeg.npy", 20000, 1), study.Noise!.EegCovariance);
        Assert.Equal(new CovarianceChoice("meg.npy", null, 1), study.Noise.MegCovariance);
    }

    [Fact]
    public void Imported_WithoutSensors_IsComplete()
    {
        string text = StudyText.Imported.With("sensors:\n  eeg: {reference: none}\n", "");
        Assert.Equal(ReferenceKind.Average, StudyText.Read(text).Study.Eeg!.Reference.Kind);
        text = text.With("eeg: eeg.npy, ", "").With("  eeg_covariance: {file: eeg.npy, samples: 20000, averaged_trials: 1}\n", "");
        Assert.Null(StudyText.Read(text).Study.Eeg);
    }

    [Theory]
    [InlineData("child", 68.5 / 78)]
    [InlineData("neonate", 49.0 / 78)]
    [InlineData("adult-3", 1)]
    [InlineData("adult", 1)]
    public void Presets_ScaleTheLibraryByTheInnerRadius(string preset, double scale)
    {
        var head = Assert.IsType<SphereHeadChoice>(StudyText.Read(StudyText.Small.With("adult-4", preset)).Study.Head);
        Assert.Equal(scale, head.LibraryScale);
        Assert.Equal(preset == "adult" ? "adult-4" : preset, head.Preset);
    }

    [Theory]
    [InlineData("on-scalp", 0.007, 0)]
    [InlineData("on-scalp-triaxial", 0.007, 0)]
    [InlineData("axial-gradiometer", 0.030, 0.060)]
    [InlineData("magnetometer", 0.030, 0)]
    public void GeneratedArrays_TakeTheDefaultsOfTheirCoil(string coil, double gap, double baseline)
    {
        CoilArrayChoice array = StudyText.Read(StudyText.Small.With("coil: magnetometer", $"coil: {coil}")).Study.Meg!.Generated!;
        Assert.Equal((gap, baseline, 200), (array.Gap, array.Baseline, array.Sites));
    }

    [Fact]
    public void PlanarArray_TakesItsOwnDensityAndBaseline()
    {
        Study study = StudyText.Read(StudyText.Small.With("coil: magnetometer", "coil: planar-gradiometer").With("meg_sensor_fT_per_rtHz: 5", "meg_planar_fT_per_cm_rtHz: 3")).Study;
        Assert.Equal(0.015, study.Meg!.Generated!.Baseline);

        // 3 fT/cm = 3e-13 T/m.
        RelativeAssert.Equal(3e-13, study.Noise!.MegPlanarDensity!.Value, Rounding);
    }

    [Theory]
    [InlineData("mastoids", new[] { "M1", "M2" })]
    [InlineData("Cz", new[] { "Cz" })]
    [InlineData("[M1, 5]", new[] { "M1", "5" })]
    public void Reference_MayNameElectrodes(string reference, string[] electrodes)
    {
        ReferenceChoice choice = StudyText.Read(StudyText.Small.With("reference: average", $"reference: {reference}")).Study.Eeg!.Reference;
        Assert.Equal(ReferenceKind.Electrodes, choice.Kind);
        Assert.Equal(electrodes, choice.Electrodes);
    }

    [Fact]
    public void Response_WithEveryKey_ReadsInSiUnits()
    {
        string text = StudyText.Small.With("direction: tangential",
            "kind: transient\n    counts: together\n    measured: peak-to-trough\n    component_Hz: 500\n    window_ms: 10\n    locked_artefact: {eeg_uV: 0.02, meg_fT: 3}\n    measure: {eeg: Cz-M1, meg: matched-filter}");
        Response response = StudyText.Read(text).Study.Responses[0];
        Assert.Equal((true, Measured.PeakToTrough, 500.0, 0.010), (response.Together, response.Measured, response.ComponentFrequency, response.Window));
        Assert.Equal((0.02e-6, 3e-15), (response.LockedArtefactEeg, response.LockedArtefactMeg));
        Assert.Equal(("Cz-M1", "matched-filter", DirectionName.Isotropic), (response.EegMeasure, response.MegMeasure, response.Direction.Name));
    }

    [Theory]
    [InlineData("[1e-9, 0, 1e-9]")]
    [InlineData("[1e+9, 0, 1e+9]")]
    [InlineData("[3, 0, 3]")]
    public void Direction_OfAnyLength_IsNormalised(string direction)
    {
        Vec3 v = StudyText.Read(StudyText.Small.With("direction: tangential", $"direction: {direction}")).Study.Responses[0].Direction.Vector!.Value;
        RelativeAssert.Equal(Math.Sqrt(0.5), v.X, Rounding);
        RelativeAssert.Equal(Math.Sqrt(0.5), v.Z, Rounding);
    }

    [Fact]
    public void Targets_KeepTheOrderOfTheFile_AndProtocolIsInSeconds()
    {
        Study study = StudyText.Read(StudyText.Small.With("{amplitude_ratio: 3}", "{detection: {power: 0.8, looks: 2.5}, amplitude_ratio: 2}")
            .With("rate_per_s: 11.1", "rate_per_s: 4, session_min: 40, preparation_min: 30, breaks_min: 5, conditions: 2, replications: 3")).Study;
        Assert.Equal([new DetectionChoice(0.01, 0.8, 2.5), new AmplitudeRatioChoice(2)], study.Targets);
        Assert.Equal(new Protocol { Rate = 4, Session = 2400, Preparation = 1800, Breaks = 300, Conditions = 2, Replications = 3 }, study.Protocol);
    }

    [Fact]
    public void Brain_IsOnWithTheTotal_AndOffAlone()
    {
        object Brain(string text) => StudyText.Read(text).Assumptions.Single(a => a.Key == "noise.brain").Value;
        Assert.Equal("none", Brain(StudyText.Small.With("  brain: default\n", "")));
        Assert.Equal("default", Brain(StudyText.Small.With("  brain: default\n", "  eeg_total: {rms_uV: 2, derivation: Cz-M1, band_Hz: [100, 3000]}\n")));
        Assert.True(StudyText.Read(StudyText.Small).Study.Noise!.Brain);
    }

    [Fact]
    public void OneModality_IsComplete()
    {
        Study eeg = StudyText.Read(StudyText.Small.With("  meg: {coil: magnetometer}\n", "").With("  meg_sensor_fT_per_rtHz: 5\n", "")).Study;
        Assert.Null(eeg.Meg);
        Assert.Null(eeg.Noise!.MegDensity);
        Study meg = StudyText.Read(StudyText.Small.With("  eeg: {layout: ten-ten-64, reference: average}\n  eeg_derivations: [Cz-mastoids, Cz-M1]\n", "").With("  eeg_sensor_nV_per_rtHz: 20\n", "")).Study;
        Assert.Null(meg.Eeg);
        Assert.NotNull(meg.Noise!.MegDensity);
    }

    [Fact]
    public void Problem_ThatShowsLater_IsPlacedAtItsKeyOrTheNextAbove()
    {
        StudyReading reading = StudyText.Read(StudyText.Small);
        InputProblem at = reading.Problem("responses.wave V.moment_nAm", "too much for its region");
        Assert.Equal("study.yaml:16:5: responses.wave V.moment_nAm: too much for its region", at.ToString());
        Assert.Equal((12, 5), (reading.Problem("regions[0].mask", "x").Line, reading.Problem("regions[0].mask", "x").Column));
        Assert.Equal(0, reading.Problem("nowhere", "x").Line);
    }

    private static void Near(Vec3 expected, Vec3 actual) => Assert.True((expected - actual).Norm <= Rounding, $"{expected} {actual}");

    [Fact]
    public void Competitors_AreReadInAmpereMetres_FromEitherKindOfRegion()
    {
        Response response = StudyText.Read(StudyText.Small.With("moment_nAm: 3.5", "moment_nAm: 3.5\n    competitors: [{region: cortex, moment_nAm: 10}, {region: red-nucleus-left, moment_nAm: 0}]\n    choose_sensors: true")).Study.Responses[0];
        Assert.Equal([new CompetitorChoice("cortex", 1e-8), new CompetitorChoice("red-nucleus-left", 0)], response.Competitors);
        Assert.True(response.ChooseSensors);
    }

    [Theory]
    [InlineData("competitors: [{region: cortexx, moment_nAm: 10}]", "cortex")]
    [InlineData("competitors: [{region: cortex, moment_nAm: 10}, {region: cortex, moment_nAm: 5}]", "stands twice among the competitors")]
    [InlineData("competitors: [{region: cortex}]", "moment_nAm")]
    [InlineData("competitors: [{region: cortex, moment_nAm: -1}]", "-1")]
    [InlineData("choose_sensors: maybe", "true or false")]
    public void Competitors_ThatCannotBeRead_AreRefusedWithTheReason(string lines, string expected)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With("moment_nAm: 3.5", $"moment_nAm: 3.5\n    {lines}"));
        Assert.Contains(expected, $"{problem.Key} {problem.Message}", StringComparison.Ordinal);
    }
}
