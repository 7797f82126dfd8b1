namespace DeepSourceCheck.Core.Studies;

/// <summary>One response to plan for.</summary>
public sealed record Response
{
    /// <summary>Name.</summary>
    public required string Name { get; init; }

    /// <summary>Key in the study, for messages: `responses[0]` is written `responses.NAME`.</summary>
    public required string Key { get; init; }

    /// <summary>Names of regions, own or of the library.</summary>
    public required IReadOnlyList<string> Regions { get; init; }

    /// <summary>True: the regions act at once and share the moment.</summary>
    public bool Together { get; init; }

    /// <summary>Moment [A m], in the convention of <see cref="Measured"/>; 1 nAm until it is found where <see cref="Amplitude"/> is stated.</summary>
    public required double Moment { get; init; }

    /// <summary>5 and 95 % points of the moment [A m] about <see cref="Moment"/>, its median; null where one number is stated.</summary>
    public MomentRange? MomentRange { get; init; }

    /// <summary>What is known at the scalp instead of a moment, or null.</summary>
    public AmplitudeChoice? Amplitude { get; init; }

    /// <summary>What the moment was computed from, or null.</summary>
    public DensityChoice? Density { get; init; }

    /// <summary>Signed weight of each region in the moment where regions act together; their absolute values sum to 1. Empty: equal.</summary>
    public IReadOnlyList<double> Shares { get; init; } = [];

    /// <summary>Lag of each region [s] where regions act together; empty: none.</summary>
    public IReadOnlyList<double> Lags { get; init; } = [];

    /// <summary>Amplitude convention.</summary>
    public Measured Measured { get; init; }

    /// <summary>Band of the response [Hz]; of a steady-state response the bin of one trial about its frequency.</summary>
    public required Band Band { get; init; }

    /// <summary>Frequency and length of one trial of a steady-state response; null for a transient one.</summary>
    public SteadyState? Steady { get; init; }

    /// <summary>What is known of its course in time, or null.</summary>
    public WaveformChoice? Waveform { get; init; }

    /// <summary>Standard deviation of the latency from trial to trial [s], as stated.</summary>
    public double Jitter { get; init; }

    /// <summary>How far off the place may be for which a realistic filter was built [m], standard deviation an axis.</summary>
    public double PlaceError { get; init; }

    /// <summary>Length of the baseline [s] from which a realistic filter takes its covariance; null where not stated.</summary>
    public double? Baseline { get; init; }

    /// <summary>The direction that carries the verdict.</summary>
    public required DirectionChoice Direction { get; init; }

    /// <summary>Length of the analysis window [s], or null.</summary>
    public double? Window { get; init; }

    /// <summary>Amplitude at several stimulus rates, rates rising; empty where not stated. The moment is that at the protocol's rate.</summary>
    public IReadOnlyList<RatePoint> RateCurve { get; init; } = [];

    /// <summary>Dominant frequency of the response [Hz], or null.</summary>
    public double? ComponentFrequency { get; init; }

    /// <summary>Absolute level of a locked artefact in EEG [V].</summary>
    public double LockedArtefactEeg { get; init; }

    /// <summary>Absolute level of a locked artefact in MEG [T].</summary>
    public double LockedArtefactMeg { get; init; }

    /// <summary>Other sources that may be active; empty for none.</summary>
    public IReadOnlyList<CompetitorChoice> Competitors { get; init; } = [];

    /// <summary>Whether electrodes are chosen for it.</summary>
    public bool ChooseSensors { get; init; }

    /// <summary>EEG measure of the verdict as stated, or null.</summary>
    public string? EegMeasure { get; init; }

    /// <summary>MEG measure of the verdict as stated, or null.</summary>
    public string? MegMeasure { get; init; }
}

/// <summary>Range of a moment.</summary>
/// <param name="Low">5 % point [A m].</param>
/// <param name="High">95 % point [A m].</param>
public sealed record MomentRange(double Low, double High);

/// <summary>Amplitude of a response at one stimulus rate.</summary>
/// <param name="Rate">Stimuli per second [1/s].</param>
/// <param name="Amplitude">Amplitude, without unit: only ratios along a curve count.</param>
public sealed record RatePoint(double Rate, double Amplitude);

/// <summary>An amplitude at the scalp.</summary>
/// <param name="Peak">Peak [V], in the convention of the response.</param>
/// <param name="Derivation">Where it was read.</param>
public sealed record AmplitudeChoice(double Peak, string Derivation);

/// <summary>A sheet of dipoles.</summary>
/// <param name="MomentDensity">Moment per area [A m/m^2].</param>
/// <param name="Area">Active area [m^2].</param>
/// <param name="OpenField">Share that does not cancel, 0 to 1.</param>
public sealed record DensityChoice(double MomentDensity, double Area, double OpenField)
{
    /// <summary>Net moment [A m].</summary>
    public double Moment => MomentDensity * Area * OpenField;
}

/// <summary>A response that follows a stimulus cycle by cycle.</summary>
/// <param name="Frequency">Frequency [Hz].</param>
/// <param name="Seconds">Length of one trial [s].</param>
public sealed record SteadyState(double Frequency, double Seconds)
{
    /// <summary>The bin that one trial resolves [Hz].</summary>
    public Band Bin => new(Frequency - 0.5 / Seconds, Frequency + 0.5 / Seconds);
}

/// <summary>The course of a response in time.</summary>
public abstract record WaveformChoice;

/// <summary>Cycles of a dominant frequency under a raised cosine.</summary>
/// <param name="Frequency">Frequency [Hz].</param>
/// <param name="Cycles">Number of cycles, without unit, from the first to the last value other than zero.</param>
public sealed record OscillationChoice(double Frequency, double Cycles) : WaveformChoice;

/// <summary>A Gaussian.</summary>
/// <param name="Width">Full width at half of the peak [s].</param>
public sealed record GaussianChoice(double Width) : WaveformChoice;

/// <summary>A table of samples.</summary>
/// <param name="File">Path relative to the study.</param>
public sealed record WaveformFileChoice(string File) : WaveformChoice;

/// <summary>Convention in which amplitudes are stated and read.</summary>
public enum Measured
{
    /// <summary>Peak against the baseline; noise is the rms s of one sample.</summary>
    BaselineToPeak,

    /// <summary>Peak against the following trough; noise of the difference is sqrt(2) s.</summary>
    PeakToTrough,
}
