namespace DeepSourceCheck.Core.Studies;

public static partial class StudyKeys
{
    private const string WhiteUnlessStated = "white unless a corner is stated";

    private static StudyKey[] Noise() =>
    [
        new("noise", "What stands beside the response in one trial.", new MapShape())
        {
            Example = "{eeg_sensor_nV_per_rtHz: 20, meg_sensor_fT_per_rtHz: 5}",
        },
        new("noise.spread_between_trials", "Spread of the noise from trial to trial: standard deviation of ln s, s the rms of a trial. The stated noise is the root of the mean of s^2.",
            new NumberShape(0, 3))
        {
            Example = "0.3",
        },
        new("noise.eeg_sensor_nV_per_rtHz", "Amplifier noise of each electrode before referencing, as an amplitude density.", Above0(1e6))
        {
            Unit = "nV/sqrt(Hz)",
            Example = "20",
            Typical = new(2, 100),
            Defaults = Default(20.0, "data sheets of ordinary 24-bit amplifiers, 20-60 nV/sqrt(Hz)", Grade.Memory),
        },
        new("noise.eeg_corner_Hz", "Frequency below which the amplifier's noise rises: its power density is that of the white part times 1 + corner/f.", From0(1e6))
        {
            Unit = "Hz",
            Example = "1",
        },
        new("noise.meg_corner_Hz", "Frequency below which the MEG sensors' noise rises: their power density is that of the white part times 1 + corner/f.", From0(1e6))
        {
            Unit = "Hz",
            Example = "1",
        },
        new("noise.meg_sensor_fT_per_rtHz", "Noise of each magnetometer or axial gradiometer, as an amplitude density.", Above0(1e6))
        {
            Unit = "fT/sqrt(Hz)",
            Example = "5",
            Typical = new(0.2, 50),
        },
        new("noise.meg_planar_fT_per_cm_rtHz", "Noise of each planar gradiometer, as an amplitude density.", Above0(1e6))
        {
            Unit = "fT/cm/sqrt(Hz)",
            Example = "3",
            Typical = new(0.5, 20),
        },
        new("noise.eeg_total", "Everything that is in one EEG trial; sets the scale of the total table.", new MapShape())
        {
            Example = "{rms_uV: 2.0, derivation: Cz-mastoids, band_Hz: [100, 3000]}",
        },
        new("noise.eeg_total.rms_uV", "Root-mean-square of one trial in the stated band and derivation.", Above0(1e5))
        {
            Unit = "uV",
            Required = true,
            Example = "2.0",
        },
        new("noise.eeg_total.derivation", "The derivation in which the rms was read.",
            new TextShape("a difference such as Cz-mastoids", 120))
        {
            Required = true,
            Example = "Cz-mastoids",
        },
        new("noise.eeg_total.band_Hz", "The band in which the rms was read.", BandHz)
        {
            Unit = "Hz",
            Required = true,
            Example = "[100, 3000]",
        },
        new("noise.brain", "Background activity of the brain, from the default tables or your own; on when stated or when eeg_total is given, else off.",
            Choice("default", "none"), new MapShape())
        {
            Example = "default",
            Defaults =
            [
                new("default",
                    "the default tables go with eeg_total; amplitude densities from memory of Hamalainen et al. 1993 and of practice",
                    Grade.Memory, "eeg_total"),
                new("none", "off where neither it nor eeg_total is stated", Grade.Derived),
            ],
        },
        new("noise.brain.eeg_table", "Your own table of the brain's share at Cz against linked mastoids: columns frequency_Hz and density_uV_per_rtHz; without it the default table.",
            new FileShape("a CSV table"))
        {
            Example = "brain-eeg.csv",
        },
        new("noise.brain.meg_table", "Your own table of the brain's share, rms over magnetometers 20 mm from the scalp: columns frequency_Hz and density_fT_per_rtHz; without it the default table.",
            new FileShape("a CSV table"))
        {
            Example = "brain-meg.csv",
        },
        new("noise.brain.scale", "Factor of the brain's amplitude densities in EEG and MEG alike: below 1 for brains that are quieter than the tables.",
            new NumberShape(0, 100, AboveLow: true))
        {
            Example = "0.7",
            Typical = new(0.3, 3),
            Defaults = Default(1.0, "the tables as they stand unless stated", Grade.Derived),
        },
        new("noise.environment", "Magnetic noise of the room: three homogeneous fields and five gradients.", Choice("none"), new MapShape())
        {
            Example = "none",
            Defaults = Default("none", "no room noise beside the sensors' unless stated", Grade.Derived),
        },
        new("noise.environment.meg_fT_per_rtHz",
            "Amplitude density that a magnetometer in the middle of the array reads, along every axis; the gradients carry a quarter of it over the array's radius.", Above0(1e6))
        {
            Unit = "fT/sqrt(Hz)",
            Required = true,
            Example = "3",
            Typical = new(0.3, 30),
        },
        new("noise.environment.corner_Hz", "Frequency below which the room's noise rises: its power density is that of the white part times 1 + corner/f.", From0(1e6))
        {
            Unit = "Hz",
            Example = "5",
            Defaults = Default(0.0, WhiteUnlessStated + "; " + CommonPractice, Grade.Memory),
        },
        new("noise.environment.removed", "Whether the room's spatial terms are projected out of signal and noise.", new FlagShape())
        {
            Example = "false",
            Defaults = Default("false", "left in unless stated", Grade.Derived),
        },
        new("noise.eeg_sensor_uV_rms", "Flat figure for one trial in the response's band, every electrode alike, nothing else added.",
            Above0(1e6))
        {
            Unit = "uV",
            Example = "2.0",
        },
        new("noise.meg_sensor_fT_rms", "Flat figure for one trial in the response's band, every channel alike, nothing else added.",
            Above0(1e9))
        {
            Unit = "fT",
            Example = "180",
        },
        .. Covariance("eeg", "V^2"),
        .. Covariance("meg", "T^2"),
        .. EegRecording(),
    ];

    private static StudyKey[] EegRecording()
    {
        const string key = "noise.eeg_recording";
        var file = new FileShape("a recording in EDF, EDF+ or BDF");
        return
        [
            new(key, "A baseline of the EEG without responses: all of the EEG noise, band-passed to each response's band; a bare file name is the whole of it.", file, new MapShape())
            {
                Example = "{file: baseline.edf, from_s: 10, to_s: 190}",
            },
            new(key + ".file", "The recording; units and prefilters are read from its header.", file) { Required = true, Example = "baseline.edf" },
            new(key + ".channels", "Labels of the file in the order of the study's electrodes, the recording's reference left out; without it, found by name.", new TextListShape("the label of a signal in the file"))
            {
                Example = "[EEG 1, EEG 2]",
            },
            new(key + ".reference", "Electrode of the study against which was recorded and which the file therefore does not hold; any other reference of the recording needs no mention.", new TextShape("an electrode of the study", 80))
            {
                Example = "Cz",
            },
            new(key + ".from_s", "Where the baseline begins, after the first sample of the file.", From0(1e7)) { Unit = "s", Example = "10" },
            new(key + ".to_s", "Where the baseline ends, after the first sample of the file.", Above0(1e7)) { Unit = "s", Example = "190" },
            new(key + ".segment_ms", "Length of the segments that are kept or rejected as a whole; without it the longest window_ms of the responses in the band, else 1000.", Above0(1e6))
            {
                Unit = "ms",
                Example = "500",
            },
            new(key + ".limit_uV", "Largest size of any electrode against the average of all, after the band-pass, in a segment that is kept.", Above0(1e6))
            {
                Unit = "uV",
                Example = "100",
                Typical = new(5, 500),
                Defaults = Default(100.0, "limits of 50 to 150 uV for slow responses, 10 to 40 uV above 100 Hz; " + CommonPractice, Grade.Memory),
            },
        ];
    }

    private static StudyKey[] Covariance(string modality, string unit)
    {
        string key = $"noise.{modality}_covariance";
        string name = modality.ToUpperInvariant();
        var file = new FileShape($"an .npy array, channels x channels, in {unit}");
        return
        [
            new(key, $"Measured covariance of one {name} trial in the response's band; a bare file name is exact and single-trial.",
                file, new MapShape())
            {
                Example = $"noise-covariance-{modality}.npy",
            },
            new(key + ".file", "The covariance.", file) { Required = true, Example = $"noise-covariance-{modality}.npy" },
            new(key + ".samples", "Independent samples from which it was estimated; without it, exact.", new NumberShape(2, 1e12))
            {
                Example = "20000",
            },
            new(key + ".averaged_trials", "Trials that were averaged before it was estimated.", new NumberShape(1, 1e9))
            {
                Example = "1",
                Defaults = Default(1.0, "single trials unless stated", Grade.Derived),
            },
        ];
    }
}
