namespace DeepSourceCheck.Core.Studies;

public static partial class StudyKeys
{
    private static StudyKey[] Planning() =>
    [
        new("target", "What counts as enough; one or several rules.", new MapShape()) { Example = "{amplitude_ratio: 3}" },
        new("target.amplitude_ratio", "Amplitude against residual rms, in the convention of `measured`.", Above0(1e6))
        {
            Example = "3",
            Defaults = Default(3.0, "the 3:1 rule; " + CommonPractice, Grade.Memory),
        },
        new("target.detection", "Test at a false-alarm rate and power.", new MapShape())
        {
            Example = "{alpha: 0.01, power: 0.9, looks: 1}",
        },
        new("target.detection.alpha", "Rate of false alarms over all looks.", new NumberShape(0, 0.5, AboveLow: true, BelowHigh: true))
        {
            Example = "0.01",
            Defaults = Default(0.01, "one person against chance; " + CommonPractice, Grade.Memory),
        },
        new("target.detection.power", "Probability of detecting the response.", new NumberShape(0, 1, AboveLow: true, BelowHigh: true))
        {
            Example = "0.9",
            Defaults = Default(0.9, "one person against chance; " + CommonPractice, Grade.Memory),
        },
        new("target.detection.topography",
            "What is known of the field's pattern: known (with its sign: one-sided), plane (two patterns, as of two tangential dipoles) or unknown (as many dimensions as independent rows are read).",
            Choice("known", "plane", "unknown"))
        {
            Example = "known",
            Defaults = Default("known", "the pattern follows from the leadfield", Grade.Derived),
        },
        new("target.detection.covariance", "Known: the noise is given; estimated: from the same trials (t and Hotelling's T2).", Choice("known", "estimated"))
        {
            Example = "known",
            Defaults = Default("known", "the noise is stated by the study", Grade.Derived),
        },
        new("target.detection.looks", "Independent looks (channels x latencies) that are searched.", new NumberShape(1, 1e9))
        {
            Example = "1",
            Defaults = Default(1.0, "channel, latency and polarity are fixed in advance unless stated", Grade.Derived),
        },
        new("target.detection.stopping", "Analyses of the growing average that are planned in advance: the recording may end at each. Only with topography and covariance known.", new MapShape())
        {
            Example = "{analyses: 3, spending: obrien-fleming-type}",
        },
        new("target.detection.stopping.analyses", "How many analyses, at equal steps of trials, the last included; not to be confused with `looks`, which are searched at once.", Count(2, 10))
        {
            Example = "3",
            Required = true,
        },
        new("target.detection.stopping.spending", "How the false-alarm rate is spent over them: little early (obrien-fleming-type), or nearly evenly (pocock-type).",
            Choice("obrien-fleming-type", "pocock-type"))
        {
            Example = "obrien-fleming-type",
            Defaults = Default("obrien-fleming-type", "costs the final analysis little; " + CommonPractice, Grade.Memory),
        },
        new("target.variance_ratio", "The F-ratio rule of averaged evoked responses.", new MapShape())
        {
            Example = "{critical: 3.1, power: 0.9, window_rms_uV: 0.12}",
        },
        new("target.variance_ratio.critical", "Critical value of the ratio; instead of alpha.", Above0(1e6))
        {
            Example = "3.1",
            Defaults = Default(3.1, "Elberling and Don 1984: F(5, 250) at .01", Grade.Memory),
        },
        new("target.variance_ratio.alpha", "Rate of false alarms whose exact critical value of F(degrees) is taken; instead of critical.",
            new NumberShape(0, 0.5, AboveLow: true, BelowHigh: true))
        {
            Example = "0.01",
        },
        new("target.variance_ratio.power", "Probability of passing it; without it, the trials at which the expected ratio equals the critical value.",
            new NumberShape(0, 1, AboveLow: true, BelowHigh: true))
        {
            Example = "0.9",
        },
        new("target.variance_ratio.window_rms_uV", "Rms of the response over the window at the EEG reading of the verdict; other readings and dipoles follow in proportion to their peaks. Not needed where a response's waveform and window_ms are known.", Above0(1e6))
        {
            Unit = "uV",
            Example = "0.12",
        },
        new("target.variance_ratio.degrees", "Degrees of freedom of the ratio: of the average over the window, of the noise.", new BandShape(Count(1, 1e9)))
        {
            Example = "[5, 250]",
            Defaults = Default(Numbers(5, 250), "Elberling and Don 1984: 5 for a window of 10 ms at 100 to 3000 Hz, 250 sweeps of one point", Grade.Memory),
        },
        new("target.residual_nV", "Residual noise of the EEG average, at one point.", Above0(1e9))
        {
            Unit = "nV",
            Example = "40",
        },

        new("protocol", "What the session affords; without it no minutes are given.", new MapShape())
        {
            Example = "{rate_per_s: 11.1, rejected_fraction: 0.1, session_min: 40}",
        },
        new("protocol.rate_per_s", "Stimuli per second; where every response is steady-state, trials follow each other without it.", Above0(1e5))
        {
            Unit = "1/s",
            Example = "11.1",
            Typical = new(0.05, 200),
        },
        new("protocol.rejected_fraction", "Share of the trials that are rejected.", new NumberShape(0, 1, BelowHigh: true))
        {
            Example = "0.1",
            Defaults = Default(0.0, "no trial is taken off unless stated", Grade.Derived),
        },
        new("protocol.session_min", "Recording time, over all conditions and replications.", Above0(1e5)) { Unit = "min", Example = "40" },
        new("protocol.preparation_min", "Preparation before the recording.", From0(1e5)) { Unit = "min", Example = "30" },
        new("protocol.breaks_min", "Breaks during the session.", From0(1e5)) { Unit = "min", Example = "5" },
        new("protocol.conditions", "Conditions that share the session.", Count(1, 10_000))
        {
            Example = "2",
            Defaults = Default(1.0, "one condition unless stated", Grade.Derived),
        },
        new("protocol.replications", "Replications of each condition.", Count(1, 10_000))
        {
            Example = "2",
            Defaults = Default(1.0, "one replication unless stated", Grade.Derived),
        },
        new("protocol.interval_jitter_ms", "Width over which each stimulus is moved at random about its regular time: noise at harmonics of the rate then averages better.", From0(1e6))
        {
            Unit = "ms",
            Example = "10",
        },
        new("protocol.participants", "People whose recordings are analysed; of two groups, in each.", Count(2, 1e6)) { Example = "20" },
        new("protocol.spread_between_people", "Coefficient of variation of the moment between people.", From0(100))
        {
            Example = "0.3",
            Defaults = Default(0.0, "people taken as alike, which no group is: the power with the stated participants is an upper bound", Grade.Derived),
        },
        new("protocol.dropout_fraction", "Share of those invited whose recordings are lost.", new NumberShape(0, 1, BelowHigh: true))
        {
            Example = "0.1",
            Defaults = Default(0.0, "nobody is lost unless stated", Grade.Derived),
        },
        new("protocol.people_test", "The two-sided t test over people.", new MapShape()) { Example = "{alpha: 0.05, power: 0.8}" },
        new("protocol.people_test.alpha", "Its rate of false alarms.", new NumberShape(0, 1, AboveLow: true, BelowHigh: true))
        {
            Example = "0.05",
            Defaults = Default(0.05, "two-sided test over people; " + CommonPractice, Grade.Memory),
        },
        new("protocol.people_test.power", "Probability that it finds the effect.", new NumberShape(0, 1, AboveLow: true, BelowHigh: true))
        {
            Example = "0.8",
            Defaults = Default(0.8, "two-sided test over people; " + CommonPractice, Grade.Memory),
        },
        new("protocol.people_test.groups_differ_by", "Two groups are compared whose mean moments differ by this share of the moment; without it, one group against no response.", Above0(100))
        {
            Example = "0.4",
        },
    ];

    private static StudyKey[] Unknowns() =>
    [
        new("unknowns", "How far each input may be off.", new MapShape()) { Example = "{head_shift_mm: 5}" },
        .. Spread("skull_conductivity_ratio", "Innermost conductivity over the skull's, of spheres.", "The median, which replaces the head's own ratio.", "15", "25", "80"),
        .. Spread("noise_factor", "Factor on every noise amplitude, EEG and MEG alike.", "The median of the factor in the draws; figures without unknowns stand at the stated noise.", "0.7", "1", "1.5"),
        new("unknowns.head_shift_mm", "Standard deviation of the head's place in the array, each axis.", From0(30))
        {
            Unit = "mm",
            Example = "5",
        },
        new("unknowns.centre_shift_mm", "Standard deviation of the sphere's centre, each axis.", From0(30))
        {
            Unit = "mm",
            Example = "5",
        },
        new("unknowns.samples", "Draws over the unknowns.", Count(16, 65_536))
        {
            Example = "256",
            Defaults = Default(256.0, "measured against 16,384 draws: median of trials within 3 %, 5 and 95 % points within 15 %, assurance within 1 %", Grade.Derived),
        },
        new("variants", "Studies that override keys of this one.", new ListShape("a variant {name, and the keys that it overrides}"))
        {
            Example = "[{name: three layers, head: {spheres: {preset: adult-3}}}]",
        },
        new("variants[].name", "Name of the variant.", new TextShape("a name")) { Required = true, Example = "three layers" },
    ];

    private static StudyKey[] Spread(string name, string description, string median, string low, string typical, string high)
    {
        string key = "unknowns." + name;
        return
        [
            new(key, description, new MapShape())
            {
                Example = $"{{low: {low}, typical: {typical}, high: {high}}}",
                },
            new(key + ".low", "The 5 % point.", Above0(1e6)) { Example = low, Required = true },
            new(key + ".typical", median, Above0(1e6)) { Example = typical, Required = true },
            new(key + ".high", "The 95 % point.", Above0(1e6)) { Example = high, Required = true },
        ];
    }
}
