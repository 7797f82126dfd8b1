using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Core.Studies;

/// <summary>The registry against the study file's page, and against itself.</summary>
public class StudyKeysTests
{
    // Every key that the study file's page shows, transcribed from it.
    private const string Page =
        """
        title head sensors noise regions responses target protocol unknowns variants accept_implausible
        head.spheres head.spheres.preset head.spheres.centre_mm head.spheres.layers head.spheres.layers[].tissue head.spheres.layers[].radius_mm
        head.spheres.layers[].conductivity_S_per_m head.spheres.layers[].radial_S_per_m head.spheres.layers[].tangential_S_per_m
        head.voxels head.voxels.labels head.voxels.tissues head.voxels.tissues[].label head.voxels.tissues[].tissue head.voxels.tissues[].conductivity_S_per_m
        head.voxels.grid head.voxels.dipole_load head.voxels.tensors head.voxels.tensors.file head.voxels.tensors.tissues
        head.voxels.landmarks_mm head.voxels.landmarks_mm.Nz head.voxels.landmarks_mm.Iz head.voxels.landmarks_mm.LPA head.voxels.landmarks_mm.RPA
        head.voxels.overlays head.voxels.overlays[].mask head.voxels.overlays[].tissue
        head.leadfields head.leadfields.eeg head.leadfields.meg head.leadfields.points head.leadfields.rows
        sensors.eeg sensors.eeg.layout sensors.eeg.electrodes sensors.eeg.coordinates sensors.eeg.reference sensors.eeg_derivations
        sensors.meg sensors.meg.coil sensors.meg.sites sensors.meg.baseline_mm sensors.meg.gap_mm sensors.meg.coils
        sensors.meg_edge_deg sensors.meg_edge_deg.front sensors.meg_edge_deg.back sensors.bandwidth_Hz sensors.bandwidth_Hz.meg sensors.sampling_Hz
        regions[].name regions[].mask regions[].label regions[].threshold regions[].points regions[].spacing_mm
        regions[].ellipsoid regions[].ellipsoid.centre_mm regions[].ellipsoid.semi_axes_mm regions[].ellipsoid.rotation_deg
        responses[].name responses[].kind responses[].frequency_Hz responses[].seconds responses[].regions responses[].counts
        responses[].moment_nAm responses[].moment_nAm.low responses[].moment_nAm.typical responses[].moment_nAm.high
        responses[].amplitude responses[].amplitude.peak_uV responses[].amplitude.derivation
        responses[].density responses[].density.nAm_per_mm2 responses[].density.area_mm2 responses[].density.open_field
        responses[].measured responses[].band_Hz responses[].direction responses[].waveform responses[].component_Hz responses[].cycles responses[].window_ms responses[].jitter_ms
        responses[].locked_artefact responses[].locked_artefact.eeg_uV responses[].locked_artefact.meg_fT
        responses[].competitors responses[].competitors[].region responses[].competitors[].moment_nAm
        responses[].measure responses[].measure.eeg responses[].measure.meg
        target.amplitude_ratio target.detection target.detection.alpha target.detection.power target.detection.topography target.detection.covariance target.detection.looks
        target.variance_ratio target.variance_ratio.critical target.variance_ratio.power target.variance_ratio.window_rms_uV target.variance_ratio.degrees target.residual_nV
        protocol.rate_per_s protocol.rejected_fraction protocol.session_min protocol.preparation_min protocol.breaks_min protocol.conditions protocol.replications
        protocol.participants protocol.spread_between_people
        unknowns.skull_conductivity_ratio unknowns.skull_conductivity_ratio.low unknowns.skull_conductivity_ratio.typical unknowns.skull_conductivity_ratio.high
        unknowns.noise_factor unknowns.noise_factor.low unknowns.noise_factor.typical unknowns.noise_factor.high unknowns.head_shift_mm unknowns.centre_shift_mm unknowns.samples
        variants[].name
        noise.eeg_sensor_nV_per_rtHz noise.eeg_corner_Hz noise.meg_corner_Hz noise.meg_sensor_fT_per_rtHz noise.meg_planar_fT_per_cm_rtHz
        noise.eeg_total noise.eeg_total.rms_uV noise.eeg_total.derivation noise.eeg_total.band_Hz
        noise.brain noise.brain.eeg_table noise.brain.meg_table noise.environment noise.environment.meg_fT_per_rtHz noise.environment.removed
        noise.eeg_sensor_uV_rms noise.meg_sensor_fT_rms
        noise.eeg_covariance noise.eeg_covariance.file noise.eeg_covariance.samples noise.eeg_covariance.averaged_trials
        noise.meg_covariance noise.meg_covariance.file noise.meg_covariance.samples
        noise.eeg_recording noise.eeg_recording.file noise.eeg_recording.channels noise.eeg_recording.from_s noise.eeg_recording.to_s
        """;

    // Units as they end a key's name, with the unit that the registry must state.
    private static readonly Dictionary<string, string> UnitOfEnding = new()
    {
        ["_mm"] = "mm",
        ["_deg"] = "deg",
        ["_Hz"] = "Hz",
        ["_S_per_m"] = "S/m",
        ["_nV_per_rtHz"] = "nV/sqrt(Hz)",
        ["_fT_per_rtHz"] = "fT/sqrt(Hz)",
        ["_fT_per_cm_rtHz"] = "fT/cm/sqrt(Hz)",
        ["_uV"] = "uV",
        ["_fT"] = "fT",
        ["_nAm"] = "nAm",
        ["_ms"] = "ms",
        ["_min"] = "min",
        ["_per_s"] = "1/s",
        ["_uV_rms"] = "uV",
        ["_fT_rms"] = "fT",
        ["_nV"] = "nV",
        ["_s"] = "s",
    };

    [Fact]
    public void Registry_HoldsEveryKeyOfThePage()
    {
        string[] page = Page.Split((char[])[' ', '\n'], StringSplitOptions.RemoveEmptyEntries);
        Assert.All(page, path => Assert.NotNull(StudyKeys.Find(path)));
    }

    // Keys of our own choosing, beside the page.
    private static readonly string[] Ours =
    [
        "responses[].shares",
        "responses[].lags_ms",
        // A search that costs time.
        "responses[].choose_sensors",
        "responses[].waveform.gaussian_fwhm_ms",
        "responses[].place_error_mm",
        "responses[].baseline_s",
        "sensors.trigger",
        // Several people, planned analyses, amplitude against rate.
        "protocol.dropout_fraction",
        "protocol.people_test",
        "protocol.people_test.alpha",
        "protocol.people_test.power",
        "protocol.people_test.groups_differ_by",
        "target.detection.stopping",
        "target.detection.stopping.analyses",
        "target.detection.stopping.spending",
        "responses[].rate_curve",
        "responses[].rate_curve[].rate_per_s",
        "responses[].rate_curve[].amplitude",
        // The exact critical value instead of a rounded one, and averaging as it really is.
        "target.variance_ratio.alpha",
        "protocol.interval_jitter_ms",
        "noise.spread_between_trials",
        // The default brain exceeds a usual total at 1 to 40 Hz, and rooms are not white.
        "noise.brain.scale",
        "noise.environment.corner_Hz",
        // What a baseline needs beside file, channels and times.
        "noise.eeg_recording.reference",
        "noise.eeg_recording.segment_ms",
        "noise.eeg_recording.limit_uV",
        // The exact critical value instead of a rounded one, and averaging as it really is.
        "target.variance_ratio.alpha",
        "protocol.interval_jitter_ms",
        "noise.spread_between_trials",
    ];

    [Fact]
    public void Registry_HoldsNothingBesideThePageButWhatIsNamedHere()
    {
        // The page shows bandwidth_Hz for MEG and averaged_trials for EEG; both stand for either modality.
        string[] page = [.. Page.Split((char[])[' ', '\n'], StringSplitOptions.RemoveEmptyEntries), "sensors.bandwidth_Hz.eeg", "noise.meg_covariance.averaged_trials"];
        Assert.Empty(StudyKeys.All.Select(k => k.Path).Except([.. page, .. Ours]));
    }

    [Fact]
    public void Paths_AreUnique_AndEveryParentIsInTheRegistry()
    {
        Assert.Equal(StudyKeys.All.Count, StudyKeys.All.Select(k => k.Path).Distinct().Count());
        Assert.All(StudyKeys.All.Where(k => k.Parent.Length > 0), key => Assert.NotNull(StudyKeys.Find(key.Parent.EndsWith("[]", StringComparison.Ordinal) ? key.Parent[..^2] : key.Parent)));
        Assert.All(StudyKeys.All.Where(k => k.NotYet is null && k.Parent.Length > 0), key => Assert.Contains(key, StudyKeys.Below(key.Parent)));
    }

    [Fact]
    public void EveryKey_HasADescriptionAnExampleAndAShape() => Assert.All(StudyKeys.All, key =>
    {
        Assert.True(key.Description.Length > 3 && key.Description.EndsWith('.'), key.Path);
        Assert.True(key.Example.Length > 0, key.Path);
        Assert.NotEmpty(key.Shapes);
        Assert.True(key.Allowed.Length > 3, key.Path);
    });

    [Fact]
    public void EveryKeyWhoseNameEndsInAUnit_StatesThatUnit() => Assert.All(StudyKeys.All.Where(k => k.Shapes.Any(s => s is NumberShape or VectorShape or BandShape)), key =>
    {
        string name = key.Name is "low" or "typical" or "high" or "front" or "back" or "eeg" or "meg" or "Nz" or "Iz" or "LPA" or "RPA" ? key.Parent : key.Path;
        string? ending = UnitOfEnding.Keys.Where(e => name.EndsWith(e, StringComparison.Ordinal)).MaxBy(e => e.Length);
        if (ending is not null)
        {
            Assert.Equal(UnitOfEnding[ending], key.Unit);
        }
        else
        {
            Assert.True(key.Unit.Length == 0 || key.Name is "direction" or "nAm_per_mm2" or "area_mm2" or "seconds", key.Path);
        }
    });

    [Fact]
    public void EveryDefault_IsAdmittedByItsKey_AndNamesItsSource() => Assert.All(StudyKeys.All.SelectMany(k => k.Defaults.Select(d => (Key: k, Default: d))), pair =>
    {
        Assert.True(pair.Default.Source.Length > 10, pair.Key.Path);
        bool admitted = pair.Default.Value switch
        {
            double number => pair.Key.Shapes.OfType<NumberShape>().Any(s => s.Admits(number)),
            double[] { Length: 2 } band => pair.Key.Shapes.OfType<BandShape>().Any(s => band.All(s.Each.Admits) && band[0] < band[1]),
            double[] numbers => pair.Key.Shapes.OfType<VectorShape>().Any(s => s.Count == numbers.Length && numbers.All(s.Each.Admits)),
            string word => pair.Key.Shapes.OfType<ChoiceShape>().Any(s => s.Words.Contains(word)) || (pair.Key.Shapes.OfType<FlagShape>().Any() && word is "true" or "false") || pair.Default.For == "derivation",
            _ => false,
        };
        Assert.True(admitted, pair.Key.Path);
        if (pair.Key.Typical is { } usual)
        {
            Assert.InRange((double)pair.Default.Value, usual.Low, usual.High);
        }
    });

    [Theory]
    // The plausibility section of the study file's page.
    [InlineData("responses[].moment_nAm", 0.05, 300)]
    [InlineData("noise.eeg_sensor_nV_per_rtHz", 2, 100)]
    [InlineData("noise.meg_sensor_fT_per_rtHz", 0.2, 50)]
    [InlineData("noise.meg_planar_fT_per_cm_rtHz", 0.5, 20)]
    [InlineData("head.spheres.layers[].radius_mm", 45, 110)]
    [InlineData("protocol.rate_per_s", 0.05, 200)]
    public void UsualRanges_AreThoseOfThePage(string path, double low, double high) => Assert.Equal(new TypicalRange(low, high), StudyKeys.Find(path)!.Typical);

    [Theory]
    [InlineData("adult-4", new[] { 78.0, 80, 86, 92 }, new[] { 0.33, 1.79, 0.0132, 0.43 })]
    [InlineData("adult-3", new[] { 80.0, 86, 92 }, new[] { 0.33, 0.0132, 0.43 })]
    [InlineData("child", new[] { 68.5, 70, 74, 80 }, new[] { 0.33, 1.79, 0.0132, 0.43 })]
    [InlineData("neonate", new[] { 49.0, 50.5, 52, 56 }, new[] { 0.33, 1.79, 0.033, 0.43 })]
    public void Presets_AreThoseOfThePage(string name, double[] radii, double[] conductivities)
    {
        SpherePreset preset = SpherePreset.Find(name)!;
        Assert.Equal(radii, preset.Layers.Select(l => l.RadiusMm));
        Assert.Equal(conductivities, preset.Layers.Select(l => l.Conductivity));
    }
}
