namespace DeepSourceCheck.Core.Studies;

/// <summary>A study as read: everything in SI units, files still named by path. One variant of the study file.</summary>
public sealed record Study
{
    /// <summary>Path as the user gave it; `default study` for the embedded one.</summary>
    public required string File { get; init; }

    /// <summary>Folder against which relative paths are taken.</summary>
    public required string Folder { get; init; }

    /// <summary>Title of the study.</summary>
    public required string Title { get; init; }

    /// <summary>The head.</summary>
    public required HeadChoice Head { get; init; }

    /// <summary>Electrodes, or null without EEG.</summary>
    public EegChoice? Eeg { get; init; }

    /// <summary>Names of the derivations as written, for instance `Cz-mastoids`.</summary>
    public IReadOnlyList<string> Derivations { get; init; } = [];

    /// <summary>Coils, or null without MEG.</summary>
    public MegChoice? Meg { get; init; }

    /// <summary>Band that the EEG passes [Hz], or null.</summary>
    public Band? EegBandwidth { get; init; }

    /// <summary>Band that the MEG sensors pass [Hz], or null.</summary>
    public Band? MegBandwidth { get; init; }

    /// <summary>Sampling rate [Hz], or null.</summary>
    public double? SamplingRate { get; init; }

    /// <summary>False where the trigger falls anywhere between two samples: the latency then scatters by 1/(sampling rate sqrt(12)).</summary>
    public bool TriggerSynchronised { get; init; } = true;

    /// <summary>Standard deviation of the latency from trial to trial [s]: jitter of the response and of a free trigger.</summary>
    /// <param name="response">The response.</param>
    public double LatencyDeviation(Response response) => TriggerSynchronised || SamplingRate is not { } rate
        ? response.Jitter : Math.Sqrt(response.Jitter * response.Jitter + 1 / (12 * rate * rate));

    /// <summary>Noise; null where the study states none.</summary>
    public NoiseChoice? Noise { get; init; }

    /// <summary>The study's own regions.</summary>
    public IReadOnlyList<RegionChoice> Regions { get; init; } = [];

    /// <summary>Responses; empty where only leadfields are asked for.</summary>
    public IReadOnlyList<Response> Responses { get; init; } = [];

    /// <summary>Targets; amplitude ratio 3 where the study states none.</summary>
    public IReadOnlyList<TargetChoice> Targets { get; init; } = [];

    /// <summary>Protocol, or null.</summary>
    public Protocol? Protocol { get; init; }

    /// <summary>The protocol as it runs for one response: trials of a steady-state response cannot follow faster than they are long.</summary>
    /// <param name="response">The response.</param>
    public Protocol? ProtocolFor(Response response) =>
        response.Steady is { } steady && Protocol is { } stated ? stated with { Rate = Math.Min(stated.Rate, 1 / steady.Seconds) } : Protocol;

    /// <summary>What is not known, or null.</summary>
    public UnknownsChoice? Unknowns { get; init; }

    /// <summary>Keys whose implausible values the study accepts.</summary>
    public IReadOnlyList<string> AcceptImplausible { get; init; } = [];
}
