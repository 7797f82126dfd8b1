namespace DeepSourceCheck.Core.Studies;

/// <summary>Noise as stated, in SI units; null is "not stated".</summary>
public sealed record NoiseChoice
{
    /// <summary>Amplifier noise per electrode [V/sqrt(Hz)].</summary>
    public double? EegDensity { get; init; }

    /// <summary>Magnetometers and axial gradiometers [T/sqrt(Hz)].</summary>
    public double? MegDensity { get; init; }

    /// <summary>Planar gradiometers [T/m/sqrt(Hz)].</summary>
    public double? MegPlanarDensity { get; init; }

    /// <summary>Frequency below which the amplifiers' noise rises [Hz]; 0 for white.</summary>
    public double EegCorner { get; init; }

    /// <summary>Frequency below which the MEG sensors' noise rises [Hz]; 0 for white.</summary>
    public double MegCorner { get; init; }

    /// <summary>Everything that is in one EEG trial.</summary>
    public EegTotalChoice? EegTotal { get; init; }

    /// <summary>True: brain noise; false: none; null: not stated (on when <see cref="EegTotal"/> is given, else off).</summary>
    public bool? Brain { get; init; }

    /// <summary>Standard deviation, without unit, of ln s from trial to trial, s the rms of one trial; null: not stated.</summary>
    public double? SpreadBetweenTrials { get; init; }

    /// <summary>File of the study's own table of the brain in EEG, relative to the study; null for the default table.</summary>
    public string? BrainEegTable { get; init; }

    /// <summary>File of the study's own table of the brain in MEG, likewise.</summary>
    public string? BrainMegTable { get; init; }

    /// <summary>Factor of the brain's amplitude densities, EEG and MEG alike.</summary>
    public double BrainScale { get; init; } = 1;

    /// <summary>Magnetic noise of the room; null for none.</summary>
    public EnvironmentChoice? Environment { get; init; }

    /// <summary>Flat figure per trial, every electrode alike [V].</summary>
    public double? EegRms { get; init; }

    /// <summary>Flat figure per trial, every channel alike [T].</summary>
    public double? MegRms { get; init; }

    /// <summary>Measured EEG covariance.</summary>
    public CovarianceChoice? EegCovariance { get; init; }

    /// <summary>Measured MEG covariance.</summary>
    public CovarianceChoice? MegCovariance { get; init; }

    /// <summary>Baseline recording of the EEG.</summary>
    public RecordingChoice? EegRecording { get; init; }
}

/// <summary>Total EEG noise in one trial.</summary>
/// <param name="Rms">rms [V] in the band, in the derivation.</param>
/// <param name="Derivation">Name of the derivation.</param>
/// <param name="Band">Band [Hz].</param>
public sealed record EegTotalChoice(double Rms, string Derivation, Band Band);

/// <summary>Magnetic noise of the room.</summary>
/// <param name="Density">Density of each homogeneous field well above the corner [T/sqrt(Hz)].</param>
/// <param name="Corner">Frequency below which it rises [Hz]; 0 for white.</param>
/// <param name="Removed">Whether the room's spatial terms are projected out of signal and noise.</param>
public sealed record EnvironmentChoice(double Density, double Corner, bool Removed);

/// <summary>A covariance file.</summary>
/// <param name="File">Path relative to the study.</param>
/// <param name="Samples">Number of independent samples it was estimated from; null: exact.</param>
/// <param name="AveragedTrials">Number of trials that were averaged before it was estimated.</param>
public sealed record CovarianceChoice(string File, double? Samples, double AveragedTrials);

/// <summary>A baseline recording, from which each response's band is taken.</summary>
/// <param name="File">Path relative to the study.</param>
/// <param name="Limit">Largest size of an electrode against the average in a segment that is kept [V].</param>
public sealed record RecordingChoice(string File, double Limit)
{
    /// <summary>Labels of the file in the order of the study's electrodes; null: found by name.</summary>
    public IReadOnlyList<string>? Channels { get; init; }

    /// <summary>Electrode of the study against which was recorded and which has no signal; null where the labels or nothing says so.</summary>
    public string? Reference { get; init; }

    /// <summary>Start [s] after the first sample; null: the first sample.</summary>
    public double? From { get; init; }

    /// <summary>End [s], likewise; null: the last sample.</summary>
    public double? To { get; init; }

    /// <summary>Length of a segment [s]; null: the response's window.</summary>
    public double? Segment { get; init; }
}
