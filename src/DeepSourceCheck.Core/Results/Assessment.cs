using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>EEG, MEG or both together.</summary>
public enum Modality
{
    /// <summary>`EEG`.</summary>
    Eeg,

    /// <summary>`MEG`.</summary>
    Meg,

    /// <summary>`EEG+MEG`.</summary>
    Both,
}

/// <summary>Percentiles by linear interpolation, in the unit of their quantity; null where the value is minus infinity or undefined.</summary>
public sealed record Percentiles(double? P05, double? P25, double? P50, double? P75, double? P95);

/// <summary>Percentiles of counts by nearest rank; null where not reachable.</summary>
public sealed record CountPercentiles(long? P05, long? P25, long? P50, long? P75, long? P95);

/// <summary>Largest absolute channel.</summary>
/// <param name="Value">Median over dipoles and directions, in <paramref name="Unit"/>.</param>
/// <param name="Unit">uV, fT or fT/cm.</param>
/// <param name="Channel">The channel that is most often the largest.</param>
public sealed record PeakAmplitude(double Value, string Unit, string Channel);

/// <summary>What one rule asks of one measure.</summary>
/// <param name="Rule">`amplitude_ratio`, `detection`.</param>
/// <param name="Trials">Accepted trials.</param>
/// <param name="Minutes">Recording minutes; null without a protocol.</param>
/// <param name="SmallestMoment">Moment [A m] that the session's trials reach, p50 over dipoles; null without a session or where silent.</param>
/// <param name="SmallestAmplitude">The peak amplitude at that moment, in the unit of the peak; null likewise.</param>
/// <param name="Reason">Why a figure is null; null where none is.</param>
public sealed record TargetResult(
    string Rule, CountPercentiles Trials, Percentiles? Minutes, double? SmallestMoment, double? SmallestAmplitude, string? Reason);

/// <summary>The figures at the published leak of realistic heads, shown beside a silent direction.</summary>
/// <param name="Leak">Amplitude relative to the strongest direction.</param>
/// <param name="SnrDb">SNR of one trial [dB].</param>
/// <param name="Targets">Counts.</param>
public sealed record LeakResult(double Leak, Percentiles SnrDb, IReadOnlyList<TargetResult> Targets);

/// <summary>One modality, direction and measure in one region.</summary>
/// <param name="Modality">EEG, MEG or both.</param>
/// <param name="Direction">Which direction.</param>
/// <param name="Measure">`channel-mean`, `best-channel`, `matched-filter` or a derivation's name.</param>
/// <param name="Peak">Null for both together and where silent.</param>
/// <param name="SnrDb">SNR of one trial [dB].</param>
/// <param name="Targets">A result per target, in the study's order.</param>
/// <param name="Reason">Why figures are null, or null.</param>
/// <param name="AtLeak">For silent directions.</param>
public sealed record MeasureResult(
    Modality Modality, DirectionName Direction, string Measure, PeakAmplitude? Peak, Percentiles SnrDb,
    IReadOnlyList<TargetResult> Targets, string? Reason, LeakResult? AtLeak);

/// <summary>One number of the chain from moment to minutes, with all that is needed to recompute it.</summary>
/// <param name="Name">Symbol and words, for instance `A: amplitude at Cz-mastoids`.</param>
/// <param name="Symbol">Symbol by which other lines refer to it.</param>
/// <param name="Value">Value in <paramref name="Unit"/>; for counts an integer.</param>
/// <param name="Unit">Unit, or empty.</param>
/// <param name="Formula">Formula in the symbols of earlier lines; empty for inputs.</param>
/// <param name="Source">Published source, or where the input comes from.</param>
/// <param name="Grade">Grade of the source, or null.</param>
public sealed record DerivedNumber(string Symbol, string Name, double Value, string Unit, string Formula, string Source, Grade? Grade);

/// <summary>The answer for one modality and rule.</summary>
public sealed record VerdictResult
{
    /// <summary>EEG, MEG or both.</summary>
    public required Modality Modality { get; init; }

    /// <summary>Rule.</summary>
    public required string Rule { get; init; }

    /// <summary>Measure that the verdict stands on.</summary>
    public required string Measure { get; init; }

    /// <summary>Direction that the verdict stands on.</summary>
    public required DirectionName Direction { get; init; }

    /// <summary>Plain words with the reason.</summary>
    public required string Text { get; init; }

    /// <summary>Whether the median count fits the session; null without a session.</summary>
    public bool? FitsSession { get; init; }

    /// <summary>Mean power over what is not known, as a fraction; null without unknowns.</summary>
    public double? Assurance { get; init; }

    /// <summary>The chain for the dipole at the median: what `why` prints.</summary>
    public IReadOnlyList<DerivedNumber> Chain { get; init; } = [];
}

/// <summary>How well the directions split in one region.</summary>
public sealed record SplitSummary(Percentiles WeakestOverStrongest, Percentiles AngleToRadialDeg, int UndefinedDipoles, int DegenerateDipoles);

/// <summary>All results of one region under one response.</summary>
public sealed record RegionResult
{
    /// <summary>Name; `A + B` where regions act together.</summary>
    public required string Region { get; init; }

    /// <summary>Kept dipoles.</summary>
    public required int Dipoles { get; init; }

    /// <summary>Dipoles that the head refused.</summary>
    public required int Dropped { get; init; }

    /// <summary>Spacing [m], null for points.</summary>
    public double? Spacing { get; init; }

    /// <summary>Dipoles times spacing cubed [m^3], null for points.</summary>
    public double? Volume { get; init; }

    /// <summary>Split of directions; null where there is none.</summary>
    public SplitSummary? Split { get; init; }

    /// <summary>Share of the largest field around the head that the array's cap captures (1 inside it); null without generated MEG.</summary>
    public double? FieldCaptured { get; init; }

    /// <summary>All figures.</summary>
    public required IReadOnlyList<MeasureResult> Results { get; init; }

    /// <summary>Answers.</summary>
    public required IReadOnlyList<VerdictResult> Verdicts { get; init; }

    /// <summary>What the user must know about this region.</summary>
    public IReadOnlyList<string> Warnings { get; init; } = [];

    /// <summary>The row of a modality, direction and measure, or null.</summary>
    public MeasureResult? Find(Modality modality, DirectionName direction, string measure) =>
        Results.FirstOrDefault(r => r.Modality == modality && r.Direction == direction && r.Measure == measure);
}

/// <summary>All regions of one response.</summary>
/// <param name="Response">As stated.</param>
/// <param name="Regions">One result a region; a single one where regions act together.</param>
public sealed record ResponseResult(Response Response, IReadOnlyList<RegionResult> Regions);

/// <summary>An input file.</summary>
/// <param name="Path">As the study names it.</param>
/// <param name="Sha256">Lower-case hexadecimal digest of its bytes.</param>
public sealed record InputFile(string Path, string Sha256);

/// <summary>Points of the scene, for the geometry figure.</summary>
public sealed record Scene
{
    /// <summary>Centre of the head [m]; null for imported leadfields.</summary>
    public Vec3? Centre { get; init; }

    /// <summary>Layers of the head as (tissue, outer radius [m]), innermost first; empty for imported leadfields.</summary>
    public IReadOnlyList<(string Tissue, double Radius)> Layers { get; init; } = [];

    /// <summary>Electrodes (name, place [m]).</summary>
    public IReadOnlyList<(string Name, Vec3 Position)> Electrodes { get; init; } = [];

    /// <summary>Coil sites [m], one a channel site.</summary>
    public IReadOnlyList<Vec3> CoilSites { get; init; } = [];

    /// <summary>Regions (name, at most 2,000 of its dipoles, evenly picked [m]).</summary>
    public IReadOnlyList<(string Name, IReadOnlyList<Vec3> Points)> Regions { get; init; } = [];
}

/// <summary>The result of `assess`: one variant of the study.</summary>
public sealed record Assessment
{
    /// <summary>Study.</summary>
    public required Study Study { get; init; }

    /// <summary>Program version.</summary>
    public required string Version { get; init; }

    /// <summary>Files that were read, with digests.</summary>
    public IReadOnlyList<InputFile> Inputs { get; init; } = [];

    /// <summary>Every value that entered.</summary>
    public IReadOnlyList<Assumption> Assumptions { get; init; } = [];

    /// <summary>Warnings, gravest first.</summary>
    public IReadOnlyList<string> Warnings { get; init; } = [];

    /// <summary>Results.</summary>
    public required IReadOnlyList<ResponseResult> Responses { get; init; }

    /// <summary>Accepted trials that the session affords, or null.</summary>
    public long? SessionTrials { get; init; }

    /// <summary>Geometry.</summary>
    public required Scene Scene { get; init; }
}
