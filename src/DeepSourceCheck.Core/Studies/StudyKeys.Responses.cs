namespace DeepSourceCheck.Core.Studies;

public static partial class StudyKeys
{
    private static StudyKey[] Regions() =>
    [
        new("regions", "Regions of the study's own, beside the library's.",
            new ListShape("a region {name, and one of ellipsoid, mask, points}"))
        {
            Example = "[{name: probes, points: points.tsv}]",
        },
        new("regions[].name", "Name by which responses call the region.", new TextShape("a name"))
        {
            Required = true,
            Example = "my-nucleus",
        },
        new("regions[].ellipsoid", "An ellipsoid.", new MapShape()) { Example = "{centre_mm: [10, -38, -40], semi_axes_mm: [4, 3, 2]}" },
        new("regions[].ellipsoid.centre_mm", "Centre.", PlaceMm) { Unit = "mm", Required = true, Example = "[10, -38, -40]" },
        new("regions[].ellipsoid.semi_axes_mm", "Semi-axes before turning.", new VectorShape(3, new NumberShape(0.1, 150)))
        {
            Unit = "mm",
            Required = true,
            Example = "[4, 3, 2]",
        },
        new("regions[].ellipsoid.rotation_deg", "Successive turns about the fixed x, then y, then z axis.",
            new VectorShape(3, new NumberShape(-360, 360)))
        {
            Unit = "deg",
            Example = "[0, 0, 30]",
            Defaults = Default(Numbers(0, 0, 0), "no turn unless stated", Grade.Derived),
        },
        new("regions[].mask", "A label volume or a probability mask.", new FileShape("a NIfTI volume")) { Example = "atlas.nii.gz" },
        new("regions[].label", "The label of the region in the mask.", new NumberShape(-1e9, 1e9)) { Example = "3" },
        new("regions[].threshold", "Values of the mask of at least this are inside.", new NumberShape(-1e9, 1e9)) { Example = "0.5" },
        new("regions[].points", "A table of points.", new FileShape("a table with columns name, x, y, z")) { Example = "points.tsv" },
        new("regions[].spacing_mm", "Distance between neighbouring dipoles; a stated one is never refined.", new NumberShape(0.05, 50))
        {
            Unit = "mm",
            Example = "1.0",
        },
    ];

    private static StudyKey[] Responses() =>
    [
        new("responses", "The responses to plan for.", new ListShape("a response {name, regions, moment_nAm, band_Hz}"))
        {
            Example = "[{name: wave V, regions: [inferior-colliculus-left], moment_nAm: 3.5, band_Hz: [100, 1500]}]",
        },
        new("responses[].name", "Name of the response.", new TextShape("a name")) { Required = true, Example = "wave V", LabelOnly = true },
        new("responses[].kind", "Transient: an average over trials. Steady-state: one frequency that follows the stimulus, read in the bin that one trial resolves.",
            Choice("transient", "steady-state"))
        {
            Example = "transient",
            Defaults = Default("transient", "the usual case of an averaged response", Grade.Derived),
        },
        new("responses[].frequency_Hz", "Frequency of a steady-state response.", Above0(1e6))
        {
            Unit = "Hz",
            Example = "40",
        },
        new("responses[].seconds", "Length of one trial of a steady-state response.", Above0(1e6))
        {
            Unit = "s",
            Example = "10",
        },
        new("responses[].regions", "Regions in which the source may be: of the study or of the library.",
            new TextListShape("the name of a region"))
        {
            Required = true,
            Example = "[inferior-colliculus-left, inferior-colliculus-right]",
        },
        new("responses[].counts", "Each: the moment is each region's. Together: the regions act at once and share the moment.",
            Choice("each", "together"))
        {
            Example = "each",
            Defaults = Default("each", "each region on its own unless stated", Grade.Derived),
        },
        new("responses[].shares", "Signed share of each region in the moment, in the order of `regions`, for regions that act together; only their ratios count.",
            new NumberListShape("the share of a region, negative for opposite sign", new NumberShape(-1e6, 1e6)))
        {
            Example = "[1, -0.5]",
        },
        new("responses[].lags_ms", "Latency of each region against the first, in the order of `regions`, for regions that act together; needs component_Hz.",
            new NumberListShape("the lag of a region", new NumberShape(-1e4, 1e4)))
        {
            Unit = "ms",
            Example = "[0, 0.6]",
        },
        new("responses[].moment_nAm", "Dipole moment in the convention of `measured`; as {low, typical, high} the figures stand on the typical one.",
            Above0(1e6), new MapShape())
        {
            Unit = "nAm",
            Example = "3.5",
            Typical = new(0.05, 300),
        },
        new("responses[].moment_nAm.low", "The 5 % point of the moment.", Above0(1e6))
        {
            Unit = "nAm",
            Required = true,
            Typical = new(0.05, 300),
            Example = "3",
        },
        new("responses[].moment_nAm.typical", "The median of the moment.", Above0(1e6))
        {
            Unit = "nAm",
            Required = true,
            Typical = new(0.05, 300),
            Example = "5",
        },
        new("responses[].moment_nAm.high", "The 95 % point of the moment.", Above0(1e6))
        {
            Unit = "nAm",
            Required = true,
            Typical = new(0.05, 300),
            Example = "9",
        },
        new("responses[].amplitude",
            "What is read off an average, filtered and blurred by jitter as this study's will be, instead of a moment: the moment of each region is found through the leadfield, so that the median over its dipoles and the verdict's directions reads this peak.",
            new MapShape())
        {
            Example = "{peak_uV: 0.45, derivation: Cz-mastoids}",
        },
        new("responses[].amplitude.peak_uV", "Peak of the response in the derivation.", Above0(1e6))
        {
            Unit = "uV",
            Required = true,
            Example = "0.45",
            Typical = new(0.01, 150),
        },
        new("responses[].amplitude.derivation", "Derivation of the peak.", new TextShape("a difference such as Cz-mastoids", 120))
        {
            Required = true,
            Example = "Cz-mastoids",
        },
        new("responses[].density", "A moment density over an active area instead of a moment: moment = density x area x open field.", new MapShape())
        {
            Example = "{nAm_per_mm2: 0.5, area_mm2: 300, open_field: 0.4}",
        },
        new("responses[].density.nAm_per_mm2", "Moment density.", Above0(1e3))
        {
            Unit = "nAm/mm2",
            Required = true,
            Example = "0.5",
            Typical = new(0.1, 2),
        },
        new("responses[].density.area_mm2", "Active area.", Above0(1e6)) { Unit = "mm2", Required = true, Example = "300" },
        new("responses[].density.open_field", "Share of the moments that does not cancel: |sum of vectors| over sum of lengths.", new NumberShape(0, 1, AboveLow: true))
        {
            Example = "0.4",
            Defaults = Default(1.0, "a flat, fully open sheet unless stated: an upper bound, folds cancel", Grade.Derived),
        },
        new("responses[].measured", "Convention of the moment and of every amplitude.", Choice("baseline-to-peak", "peak-to-trough"))
        {
            Example = "baseline-to-peak",
            Defaults = Default("baseline-to-peak", "dipole moments are usually published from the baseline; " + CommonPractice, Grade.Memory),
        },
        new("responses[].band_Hz", "Band in which the response is recorded and the noise is counted; a steady-state response needs none.", BandHz)
        {
            Unit = "Hz",
            Example = "[100, 1500]",
        },
        new("responses[].direction", "The direction whose figures carry the verdict; a vector stands in the frame of the regions.",
            Choice("quasi-radial", "tangential", "strongest-tangential", "isotropic", "best"), new VectorShape(3, new NumberShape(-1e9, 1e9)))
        {
            Example = "[0, 0, 1]",
            Defaults = Default("isotropic", "no orientation is stated: every direction is equally likely", Grade.Derived),
        },
        new("responses[].waveform", "Course of the response in time: samples, or a Gaussian; its peak, in the convention of `measured`, is the moment.",
            new FileShape("a table with columns time_ms, value, separated by commas or tabs"), new MapShape())
        {
            Example = "waveform.csv",
        },
        new("responses[].waveform.gaussian_fwhm_ms", "Full width at half of the peak of a Gaussian.", Above0(1e5))
        {
            Unit = "ms",
            Required = true,
            Example = "1.2",
        },
        new("responses[].component_Hz", "Dominant frequency of the response; must lie in its band.", Above0(1e6))
        {
            Unit = "Hz",
            Example = "500",
        },
        new("responses[].cycles", "Cycles of the dominant frequency under a raised cosine, from the first to the last value other than zero; with component_Hz it makes the waveform known.",
            new NumberShape(0.5, 1000))
        {
            Example = "2",
        },
        new("responses[].window_ms", "Length of the analysis window.", Above0(1e6)) { Unit = "ms", Example = "10" },
        new("responses[].rate_curve", "How the amplitude falls with the rate, straight lines over the logarithm of the rate between its points; the moment is that at protocol.rate_per_s.",
            new ListShape("a point {rate_per_s, amplitude}, rates rising"))
        {
            Example = "[{rate_per_s: 5, amplitude: 1}, {rate_per_s: 50, amplitude: 0.6}]",
        },
        new("responses[].rate_curve[].rate_per_s", "Stimuli per second.", Above0(1e5))
        {
            Unit = "1/s",
            Required = true,
            Example = "5",
        },
        new("responses[].rate_curve[].amplitude", "Amplitude at that rate, in any unit: only ratios count.", From0(1e9)) { Required = true, Example = "1" },
        new("responses[].jitter_ms", "Standard deviation of the latency from trial to trial; needs a waveform, component_Hz or frequency_Hz.", From0(1e4))
        {
            Unit = "ms",
            Example = "0.3",
            Defaults = Default(0.0, "every trial alike unless stated", Grade.Derived),
        },
        new("responses[].place_error_mm", "By how much the place may be off for which a realistic filter was built: standard deviation, each axis.", From0(100))
        {
            Unit = "mm",
            Example = "5",
            Defaults = Default(5.0, "registration of a deep target; " + CommonPractice, Grade.Memory),
        },
        new("responses[].baseline_s", "Length of the baseline from which a realistic filter takes its covariance, where noise states no samples; without either it is exact.",
            Above0(1e7))
        {
            Unit = "s",
            Example = "60",
        },
        new("responses[].locked_artefact", "Artefact locked to the stimulus, which averaging does not reduce.", new MapShape())
        {
            Example = "{eeg_uV: 0.0, meg_fT: 0.0}",
        },
        new("responses[].locked_artefact.eeg_uV", "Its level in the EEG.", From0(1e6))
        {
            Unit = "uV",
            Example = "0.05",
            Defaults = Default(0.0, "no locked artefact unless stated", Grade.Derived),
        },
        new("responses[].locked_artefact.meg_fT", "Its level in the MEG.", From0(1e9))
        {
            Unit = "fT",
            Example = "2",
            Defaults = Default(0.0, "no locked artefact unless stated", Grade.Derived),
        },
        new("responses[].competitors",
            "Other sources that may be active, each with a random moment from trial to trial: anywhere in its region, in any direction. They add to the noise; they are not projected out.",
            new ListShape("a source {region, moment_nAm}"))
        {
            Example = "[{region: cortex, moment_nAm: 10}]",
        },
        new("responses[].competitors[].region", "Region of the other source, of the study or of the library.", new TextShape("the name of a region"))
        {
            Required = true,
            Example = "cortex",
        },
        new("responses[].competitors[].moment_nAm", "Root mean square of its moment over trials.", From0(1e6))
        {
            Unit = "nAm",
            Required = true,
            Example = "10",
        },
        new("responses[].choose_sensors", "Whether to find which electrodes carry the response: trials against their number, and the best differences of two.", new FlagShape())
        {
            Example = "true",
            Defaults = Default("false", "only when asked for: it takes time", Grade.Derived),
        },
        new("responses[].measure", "What the verdict stands on.", new MapShape()) { Example = "{eeg: Cz-mastoids, meg: best-channel}" },
        new("responses[].measure.eeg", "Measure of the EEG: best-channel, matched-filter, realistic-filter or a derivation of sensors.eeg_derivations.",
            Choice("best-channel", "matched-filter", "realistic-filter"), new TextShape("one of sensors.eeg_derivations", 120))
        {
            Example = "Cz-mastoids",
            Defaults =
            [
                new("best-channel", "no derivation is listed: what is read off the best channel", Grade.Derived, "no derivation"),
                new("the first derivation", "the first of sensors.eeg_derivations: what is read off a trace", Grade.Derived, "derivation"),
            ],
        },
        new("responses[].measure.meg", "Measure of the MEG.",
            Choice("best-channel", "matched-filter", "realistic-filter"))
        {
            Example = "best-channel",
            Defaults = Default("best-channel", "what is read off the best channel", Grade.Derived),
        },
    ];
}
