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

    /// <summary>Moment [A m], in the convention of <see cref="Measured"/>.</summary>
    public required double Moment { get; init; }

    /// <summary>Amplitude convention.</summary>
    public Measured Measured { get; init; }

    /// <summary>Band of the response [Hz].</summary>
    public required Band Band { get; init; }

    /// <summary>The direction that carries the verdict.</summary>
    public required DirectionChoice Direction { get; init; }

    /// <summary>Length of the analysis window [s], or null.</summary>
    public double? Window { get; init; }

    /// <summary>Dominant frequency of the response [Hz], or null.</summary>
    public double? ComponentFrequency { get; init; }

    /// <summary>Absolute level of a locked artefact in EEG [V].</summary>
    public double LockedArtefactEeg { get; init; }

    /// <summary>Absolute level of a locked artefact in MEG [T].</summary>
    public double LockedArtefactMeg { get; init; }

    /// <summary>EEG measure of the verdict as stated, or null.</summary>
    public string? EegMeasure { get; init; }

    /// <summary>MEG measure of the verdict as stated, or null.</summary>
    public string? MegMeasure { get; init; }
}

/// <summary>Convention in which amplitudes are stated and read.</summary>
public enum Measured
{
    /// <summary>Peak against the baseline; noise is the rms s of one sample.</summary>
    BaselineToPeak,

    /// <summary>Peak against the following trough; noise of the difference is sqrt(2) s.</summary>
    PeakToTrough,
}
