using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;

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

    /// <summary>Keys whose implausible values the study accepts.</summary>
    public IReadOnlyList<string> AcceptImplausible { get; init; } = [];
}

/// <summary>A frequency band.</summary>
/// <param name="Low">Lower edge [Hz].</param>
/// <param name="High">Upper edge [Hz].</param>
public readonly record struct Band(double Low, double High)
{
    /// <summary>Width [Hz].</summary>
    public double Width => High - Low;
}

/// <summary>Which head.</summary>
public abstract record HeadChoice;

/// <summary>Layered spheres.</summary>
/// <param name="Sphere">The head.</param>
/// <param name="Preset">Name of the preset, or null for stated layers.</param>
/// <param name="LibraryScale">Factor by which library regions scale about the centre (child and neonate presets), else 1.</param>
public sealed record SphereHeadChoice(LayeredSphere Sphere, string? Preset, double LibraryScale) : HeadChoice;

/// <summary>Imported leadfields: paths relative to the study.</summary>
public sealed record ImportedHeadChoice(string? Eeg, string? Meg, string Points, string Rows) : HeadChoice;

/// <summary>What the EEG is measured against.</summary>
public enum ReferenceKind
{
    /// <summary>The mean of the electrodes in use.</summary>
    Average,

    /// <summary>As computed: mean zero over the sphere.</summary>
    None,

    /// <summary>The mean of named electrodes.</summary>
    Electrodes,
}

/// <summary>The reference of the EEG.</summary>
/// <param name="Kind">Average, none or named electrodes.</param>
/// <param name="Electrodes">The named electrodes; empty otherwise.</param>
public sealed record ReferenceChoice(ReferenceKind Kind, IReadOnlyList<string> Electrodes);

/// <summary>Electrodes: a layout or a table; neither for imported leadfields.</summary>
public sealed record EegChoice(string? Layout, string? ElectrodesFile, string? CoordinatesFile, ReferenceChoice Reference);

/// <summary>MEG channels: a table or a generated array; neither for imported leadfields.</summary>
public sealed record MegChoice(string? CoilsFile, CoilArrayChoice? Generated);

/// <summary>A generated array.</summary>
/// <param name="Coil">magnetometer, axial-gradiometer, planar-gradiometer, on-scalp or on-scalp-triaxial.</param>
/// <param name="Sites">Number of sites.</param>
/// <param name="Baseline">Distance between the coils of a gradiometer [m]; 0 for magnetometers.</param>
/// <param name="Gap">Scalp to the nearest coil [m].</param>
/// <param name="EdgeFront">Elevation of the lower edge in front, seen from the centre [rad].</param>
/// <param name="EdgeBack">Elevation of the lower edge at the back [rad].</param>
public sealed record CoilArrayChoice(string Coil, int Sites, double Baseline, double Gap, double EdgeFront, double EdgeBack);

/// <summary>Noise as stated, in SI units; null is "not stated".</summary>
public sealed record NoiseChoice
{
    /// <summary>Amplifier noise per electrode [V/sqrt(Hz)].</summary>
    public double? EegDensity { get; init; }

    /// <summary>Magnetometers and axial gradiometers [T/sqrt(Hz)].</summary>
    public double? MegDensity { get; init; }

    /// <summary>Planar gradiometers [T/m/sqrt(Hz)].</summary>
    public double? MegPlanarDensity { get; init; }

    /// <summary>Everything that is in one EEG trial.</summary>
    public EegTotalChoice? EegTotal { get; init; }

    /// <summary>True: default brain tables; false: none; null: not stated (on when <see cref="EegTotal"/> is given, else off).</summary>
    public bool? Brain { get; init; }

    /// <summary>Flat figure per trial, every electrode alike [V].</summary>
    public double? EegRms { get; init; }

    /// <summary>Flat figure per trial, every channel alike [T].</summary>
    public double? MegRms { get; init; }

    /// <summary>Measured EEG covariance.</summary>
    public CovarianceChoice? EegCovariance { get; init; }

    /// <summary>Measured MEG covariance.</summary>
    public CovarianceChoice? MegCovariance { get; init; }
}

/// <summary>Total EEG noise in one trial.</summary>
/// <param name="Rms">rms [V] in the band, in the derivation.</param>
/// <param name="Derivation">Name of the derivation.</param>
/// <param name="Band">Band [Hz].</param>
public sealed record EegTotalChoice(double Rms, string Derivation, Band Band);

/// <summary>A covariance file.</summary>
/// <param name="File">Path relative to the study.</param>
/// <param name="Samples">Number of independent samples it was estimated from; null: exact.</param>
/// <param name="AveragedTrials">Number of trials that were averaged before it was estimated.</param>
public sealed record CovarianceChoice(string File, double? Samples, double AveragedTrials);

/// <summary>A region of the study's own. Exactly one of ellipsoid, mask, points.</summary>
public sealed record RegionChoice
{
    /// <summary>Name.</summary>
    public required string Name { get; init; }

    /// <summary>Key of the region in the study, for messages: `regions[0]`.</summary>
    public required string Key { get; init; }

    /// <summary>Stated spacing [m]; never refined.</summary>
    public double? Spacing { get; init; }

    /// <summary>Ellipsoid.</summary>
    public EllipsoidChoice? Ellipsoid { get; init; }

    /// <summary>NIfTI mask: path relative to the study.</summary>
    public string? Mask { get; init; }

    /// <summary>Label in the mask, without unit.</summary>
    public double? Label { get; init; }

    /// <summary>Threshold of a probability mask: values of at least this are inside.</summary>
    public double? Threshold { get; init; }

    /// <summary>Table of points: path relative to the study.</summary>
    public string? Points { get; init; }
}

/// <summary>An ellipsoid.</summary>
/// <param name="Centre">Centre [m].</param>
/// <param name="SemiAxes">Semi-axes [m].</param>
/// <param name="Rotation">Successive turns about the fixed x, y, z axes.</param>
public sealed record EllipsoidChoice(Vec3 Centre, Vec3 SemiAxes, Rotation Rotation);

/// <summary>Convention in which amplitudes are stated and read.</summary>
public enum Measured
{
    /// <summary>Peak against the baseline; noise is the rms s of one sample.</summary>
    BaselineToPeak,

    /// <summary>Peak against the following trough; noise of the difference is sqrt(2) s.</summary>
    PeakToTrough,
}

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

/// <summary>Names of the reported directions, as the results write them.</summary>
public enum DirectionName
{
    /// <summary>`quasi-radial`: v3, the direction that the MEG array sees least.</summary>
    QuasiRadial,

    /// <summary>`tangential`: 64 equally spaced angles from v1 in the plane of v1 and v2.</summary>
    Tangential,

    /// <summary>`strongest-tangential`: v1.</summary>
    StrongestTangential,

    /// <summary>`isotropic`: 256 points of the golden-angle spiral.</summary>
    Isotropic,

    /// <summary>`best`: the largest over all directions, for each measure and modality.</summary>
    Best,

    /// <summary>`given`: the vector that the study states.</summary>
    Given,
}

/// <summary>The direction whose figures carry the verdict.</summary>
/// <param name="Name">Which.</param>
/// <param name="Vector">Unit vector for <see cref="DirectionName.Given"/>, else null.</param>
public sealed record DirectionChoice(DirectionName Name, Vec3? Vector);

/// <summary>One target.</summary>
public abstract record TargetChoice;

/// <summary>Amplitude against residual rms.</summary>
/// <param name="Ratio">Ratio rho, positive.</param>
public sealed record AmplitudeRatioChoice(double Ratio) : TargetChoice;

/// <summary>Detection at known topography and covariance, one-sided.</summary>
/// <param name="Alpha">False-alarm rate over all looks.</param>
/// <param name="Power">Probability of detecting the response.</param>
/// <param name="Looks">Number K of independent looks that are searched.</param>
public sealed record DetectionChoice(double Alpha, double Power, double Looks) : TargetChoice;

/// <summary>What the session affords.</summary>
public sealed record Protocol
{
    /// <summary>Stimuli per second [1/s].</summary>
    public required double Rate { get; init; }

    /// <summary>Share of trials that are rejected.</summary>
    public double RejectedFraction { get; init; }

    /// <summary>Recording time [s].</summary>
    public double? Session { get; init; }

    /// <summary>Preparation [s].</summary>
    public double? Preparation { get; init; }

    /// <summary>Breaks [s].</summary>
    public double? Breaks { get; init; }

    /// <summary>Conditions that share the session.</summary>
    public int Conditions { get; init; } = 1;

    /// <summary>Replications of each condition.</summary>
    public int Replications { get; init; } = 1;
}

/// <summary>Where a value comes from.</summary>
public enum Grade
{
    /// <summary>The number stood in the source that was read.</summary>
    Seen,

    /// <summary>From memory of the named source.</summary>
    Memory,

    /// <summary>Derived with stated formulas from stated inputs.</summary>
    Derived,
}

/// <summary>A value that entered the answer.</summary>
/// <param name="Key">Full key in the study.</param>
/// <param name="Value">Number, text or list of numbers, in the key's unit.</param>
/// <param name="Unit">Unit, or empty.</param>
/// <param name="FromStudy">True: stated by the study; false: a default.</param>
/// <param name="Source">Where the default comes from; `stated by the study`.</param>
/// <param name="Grade">Grade of the source; null for stated values.</param>
public sealed record Assumption(string Key, object Value, string Unit, bool FromStudy, string Source, Grade? Grade);
