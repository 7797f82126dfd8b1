using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Waveforms;

namespace DeepSourceCheck.Core.Planning;

/// <summary>A study with all of its parts built: head, sensors, regions, noise. What `assess` and `why` compute from.</summary>
public sealed record StudySetup
{
    /// <summary>The study.</summary>
    public required Study Study { get; init; }

    /// <summary>Head.</summary>
    public required IHead Head { get; init; }

    /// <summary>Leadfields, unreferenced.</summary>
    public required ILeadfieldSource Source { get; init; }

    /// <summary>Referencing of the electrodes; null without EEG.</summary>
    public ChannelOperator? Reference { get; init; }

    /// <summary>Derivations; null without.</summary>
    public ChannelOperator? Derivations { get; init; }

    /// <summary>Names of the MEG rows.</summary>
    public IReadOnlyList<string> MegNames { get; init; } = [];

    /// <summary>Kinds of the MEG rows.</summary>
    public IReadOnlyList<CoilKind> MegKinds { get; init; } = [];

    /// <summary>Places of the MEG rows [m]; empty where not known.</summary>
    public IReadOnlyList<Vec3> MegSites { get; init; } = [];

    /// <summary>False where the MEG rows are a built-in array that serves the split alone.</summary>
    public bool MegReported { get; init; }

    /// <summary>What removal of the room's terms is compared with; null where nothing is removed.</summary>
    public RemovalBaseline? Removal { get; init; }

    /// <summary>Noise; null where only leadfields are asked for.</summary>
    public NoiseModel? Noise { get; init; }

    /// <summary>Regions, the study's own in its order, then those of the library that responses name.</summary>
    public required IReadOnlyList<FilledRegion> Regions { get; init; }

    /// <summary>Share of the largest field around the head that a generated array captures of a region; null where not known.</summary>
    public Func<FilledRegion, double?> FieldCaptured { get; init; } = _ => null;

    /// <summary>What becomes of a region's MEG when the sphere's centre moves, for the noise standard deviation of each channel; null where that is not asked.</summary>
    public Func<FilledRegion, IReadOnlyList<double>, CentreSensitivity?> CentreSensitivity { get; init; } = (_, _) => null;

    /// <summary>The head with what is not known of it; null where it cannot be varied.</summary>
    public IPerturbableHead? Perturbable { get; init; }

    /// <summary>What the head's model leaves out, sentence by sentence, with the figures of this head and its sensors.</summary>
    public IReadOnlyList<string> Limits { get; init; } = [];

    /// <summary>One sentence on where a generated array lies about a real head; null for others.</summary>
    public string? ArrayPlace { get; init; }

    /// <summary>Sampled waveforms of responses, by the response's key.</summary>
    public IReadOnlyDictionary<string, SampledWaveform> Waveforms { get; init; } = new Dictionary<string, SampledWaveform>();

    /// <summary>Leadfields of other heads for which a realistic filter may have been built; empty: of this head.</summary>
    public IReadOnlyList<ILeadfieldSource> OtherHeads { get; init; } = [];

    /// <summary>Index of the imported point nearest to a place [m]; null for heads that compute leadfields anywhere.</summary>
    public Func<Vec3, int>? NearestPoint { get; init; }

    /// <summary>Geometry for figures.</summary>
    public Scene Scene { get; init; } = new();

    /// <summary>A region by name.</summary>
    public FilledRegion Region(string name) => Regions.First(r => r.Name == name);
}
