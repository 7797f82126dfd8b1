namespace DeepSourceCheck.Core.Studies;

public static partial class StudyKeys
{
    private const string SteadyNotYet = "only kind: transient is acted on; plan a steady-state response as a transient one with its band";
    private const string RangeNotYet = "ranges are not acted on; write one number, the typical moment";
    private const string AmplitudeNotYet = "state moment_nAm instead";
    private const string CompetitorsNotYet = "other sources are not acted on; remove the key";

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
        new("responses[].kind", "Transient: an average over trials.", new ChoiceShape(["transient"]) { NotYet = ["steady-state"] })
        {
            Example = "transient",
            InsteadOfShape = SteadyNotYet,
            Defaults = Default("transient", "the usual case of an averaged response", Grade.Derived),
        },
        new("responses[].frequency_Hz", "Frequency of a steady-state response.", Above0(1e6))
        {
            Unit = "Hz",
            Example = "40",
            NotYet = SteadyNotYet,
        },
        new("responses[].seconds", "Length of one trial of a steady-state response.", Above0(1e6))
        {
            Unit = "s",
            Example = "10",
            NotYet = SteadyNotYet,
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
        new("responses[].moment_nAm", "Dipole moment in the convention of `measured`.", Above0(1e6))
        {
            Unit = "nAm",
            Example = "3.5",
            Typical = new(0.05, 300),
            ShapesNotYet = [new MapShape()],
            InsteadOfShape = RangeNotYet,
        },
        new("responses[].moment_nAm.low", "The 5 % point of the moment.", Above0(1e6))
        {
            Unit = "nAm",
            Example = "3",
            NotYet = RangeNotYet,
        },
        new("responses[].moment_nAm.typical", "The median of the moment.", Above0(1e6))
        {
            Unit = "nAm",
            Example = "5",
            NotYet = RangeNotYet,
        },
        new("responses[].moment_nAm.high", "The 95 % point of the moment.", Above0(1e6))
        {
            Unit = "nAm",
            Example = "9",
            NotYet = RangeNotYet,
        },
        new("responses[].amplitude", "A known scalp amplitude instead of a moment.", new MapShape())
        {
            Example = "{peak_uV: 0.45, derivation: Cz-mastoids}",
            NotYet = AmplitudeNotYet,
        },
        new("responses[].amplitude.peak_uV", "Peak of the response in the derivation.", Above0(1e6))
        {
            Unit = "uV",
            Example = "0.45",
            NotYet = AmplitudeNotYet,
        },
        new("responses[].amplitude.derivation", "Derivation of the peak.", new TextShape("a difference such as Cz-mastoids", 120))
        {
            Example = "Cz-mastoids",
            NotYet = AmplitudeNotYet,
        },
        new("responses[].density", "A moment density over an area instead of a moment.", new MapShape())
        {
            Example = "{nAm_per_mm2: 0.5, area_mm2: 300, open_field: 0.4}",
            NotYet = AmplitudeNotYet,
        },
        new("responses[].density.nAm_per_mm2", "Moment density.", Above0(1e3))
        {
            Unit = "nAm/mm2",
            Example = "0.5",
            NotYet = AmplitudeNotYet,
        },
        new("responses[].density.area_mm2", "Active area.", Above0(1e6)) { Unit = "mm2", Example = "300", NotYet = AmplitudeNotYet },
        new("responses[].density.open_field", "Share that does not cancel.", new NumberShape(0, 1, AboveLow: true))
        {
            Example = "0.4",
            NotYet = AmplitudeNotYet,
        },
        new("responses[].measured", "Convention of the moment and of every amplitude.", Choice("baseline-to-peak", "peak-to-trough"))
        {
            Example = "baseline-to-peak",
            Defaults = Default("baseline-to-peak", "dipole moments are usually published from the baseline; " + CommonPractice, Grade.Memory),
        },
        new("responses[].band_Hz", "Band in which the response is recorded and the noise is counted.", BandHz)
        {
            Unit = "Hz",
            Required = true,
            Example = "[100, 1500]",
        },
        new("responses[].direction", "The direction whose figures carry the verdict; a vector stands in the frame of the regions.",
            Choice("quasi-radial", "tangential", "strongest-tangential", "isotropic", "best"), new VectorShape(3, new NumberShape(-1e9, 1e9)))
        {
            Example = "[0, 0, 1]",
            Defaults = Default("isotropic", "no orientation is stated: every direction is equally likely", Grade.Derived),
        },
        new("responses[].waveform", "Samples of the response.", new FileShape("a CSV table"))
        {
            Example = "waveform.csv",
            NotYet = "state component_Hz instead",
        },
        new("responses[].component_Hz", "Dominant frequency of the response; must lie in its band.", Above0(1e6))
        {
            Unit = "Hz",
            Example = "500",
        },
        new("responses[].cycles", "Cycles of the dominant frequency.", Above0(1e6)) { Example = "2", NotYet = "state component_Hz alone" },
        new("responses[].window_ms", "Length of the analysis window.", Above0(1e6)) { Unit = "ms", Example = "10" },
        new("responses[].jitter_ms", "Standard deviation of the latency from trial to trial.", From0(1e4))
        {
            Unit = "ms",
            Example = "0.3",
            NotYet = "lower moment_nAm by the loss that the jitter causes",
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
        new("responses[].competitors", "Other sources that may be active.", new ListShape("a source {region, moment_nAm}"))
        {
            Example = "[{region: cortex, moment_nAm: 10}]",
            NotYet = CompetitorsNotYet,
        },
        new("responses[].competitors[].region", "Region of the other source.", new TextShape("the name of a region"))
        {
            Example = "cortex",
            NotYet = CompetitorsNotYet,
        },
        new("responses[].competitors[].moment_nAm", "Moment of the other source.", Above0(1e6))
        {
            Unit = "nAm",
            Example = "10",
            NotYet = CompetitorsNotYet,
        },
        new("responses[].measure", "What the verdict stands on.", new MapShape()) { Example = "{eeg: Cz-mastoids, meg: best-channel}" },
        new("responses[].measure.eeg", "Measure of the EEG: best-channel, matched-filter or a derivation of sensors.eeg_derivations.",
            new ChoiceShape(["best-channel", "matched-filter"]) { NotYet = ["realistic-filter"] }, new TextShape("one of sensors.eeg_derivations", 120))
        {
            Example = "Cz-mastoids",
            InsteadOfShape = "write best-channel, matched-filter or a derivation",
            Defaults =
            [
                new("best-channel", "no derivation is listed: what is read off the best channel", Grade.Derived, "no derivation"),
                new("the first derivation", "the first of sensors.eeg_derivations: what is read off a trace", Grade.Derived, "derivation"),
            ],
        },
        new("responses[].measure.meg", "Measure of the MEG.",
            new ChoiceShape(["best-channel", "matched-filter"]) { NotYet = ["realistic-filter"] })
        {
            Example = "best-channel",
            InsteadOfShape = "write best-channel or matched-filter",
            Defaults = Default("best-channel", "what is read off the best channel", Grade.Derived),
        },
    ];
}
