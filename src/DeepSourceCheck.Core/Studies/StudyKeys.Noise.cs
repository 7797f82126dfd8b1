namespace DeepSourceCheck.Core.Studies;

public static partial class StudyKeys
{
    private const string CornersNotYet = "state the density in the response's band without a corner";
    private const string EnvironmentNotYet = "only `none` is acted on; put the room's share into the sensor's density or into a measured covariance";

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
        new("noise.eeg_corner_Hz", "Frequency below which the amplifier's noise rises.", From0(1e6))
        {
            Unit = "Hz",
            Example = "1",
            NotYet = CornersNotYet,
        },
        new("noise.meg_corner_Hz", "Frequency below which the MEG sensors' noise rises.", From0(1e6))
        {
            Unit = "Hz",
            Example = "1",
            NotYet = CornersNotYet,
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
        new("noise.brain", "Background activity of the brain from the default tables; on when stated or when eeg_total is given, else off.",
            Choice("default", "none"))
        {
            Example = "default",
            ShapesNotYet = [new MapShape()],
            InsteadOfShape = "tables of the user's own are not acted on; write brain: default or brain: none, or give measured covariances",
            Defaults =
            [
                new("default",
                    "the default tables go with eeg_total; amplitude densities from memory of Hamalainen et al. 1993 and of practice",
                    Grade.Memory, "eeg_total"),
                new("none", "off where neither it nor eeg_total is stated", Grade.Derived),
            ],
        },
        new("noise.brain.eeg_table", "Table of the brain's share in the EEG.", new FileShape("a CSV table"))
        {
            Example = "f.csv",
            NotYet = "write brain: default or brain: none",
        },
        new("noise.brain.meg_table", "Table of the brain's share in the MEG.", new FileShape("a CSV table"))
        {
            Example = "f.csv",
            NotYet = "write brain: default or brain: none",
        },
        new("noise.environment", "Magnetic noise of the room.", Choice("none"))
        {
            Example = "none",
            ShapesNotYet = [new MapShape()],
            InsteadOfShape = EnvironmentNotYet,
            Defaults = Default("none", "no room noise beside the sensors' unless stated", Grade.Derived),
        },
        new("noise.environment.meg_fT_per_rtHz", "Density of the room's noise.", Above0(1e6))
        {
            Unit = "fT/sqrt(Hz)",
            Example = "3",
            NotYet = EnvironmentNotYet,
        },
        new("noise.environment.removed", "Whether the room's spatial terms are projected out.", new FlagShape())
        {
            Example = "false",
            NotYet = EnvironmentNotYet,
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
    ];

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
