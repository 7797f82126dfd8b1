using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>All results of one region under one response.</summary>
public sealed record RegionResult
{
    /// <summary>Name; `A + B` where regions act together.</summary>
    public required string Region { get; init; }

    /// <summary>Moment that each dipole carries in turn, or the regions together [A m]: as stated, or as found from an amplitude.</summary>
    public required double Moment { get; init; }

    /// <summary>What opposing fields lose where regions act together; empty for a region on its own.</summary>
    public IReadOnlyList<CancellationResult> Cancellation { get; init; } = [];

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

    /// <summary>SNR by depth and by angle over the cortex; null where the region is no folded cortex.</summary>
    public CorticalProfile? Profile { get; init; }

    /// <summary>What the removal of the room's terms does to this region's MEG; null where nothing is removed or MEG sees nothing.</summary>
    public RemovalLoss? Removal { get; init; }

    /// <summary>What other active sources leave of it; null where the study states none.</summary>
    public CompetitorsResult? Competitors { get; init; }

    /// <summary>How well one dipole in it could be placed; null where not asked for.</summary>
    public LocationResult? Location { get; init; }

    /// <summary>Which electrodes carry it; null where not asked for.</summary>
    public SensorChoiceResult? Electrodes { get; init; }

    /// <summary>What carries its dipoles; null where all are carried alike.</summary>
    public SupportCounts? Supports { get; init; }

    /// <summary>All figures.</summary>
    public required IReadOnlyList<MeasureResult> Results { get; init; }

    /// <summary>Spread over what is not known; null where the study states no unknowns.</summary>
    public UnknownsResult? Unknowns { get; init; }

    /// <summary>Answers.</summary>
    public required IReadOnlyList<VerdictResult> Verdicts { get; init; }

    /// <summary>What a realistic head changes against spheres, as measured once for the library; one entry a library region, several where regions act together.</summary>
    public IReadOnlyList<RealisticHeadEffect> RealisticHeads { get; init; } = [];

    /// <summary>What the user must know about this region.</summary>
    public IReadOnlyList<string> Warnings { get; init; } = [];

    /// <summary>The row of a modality, direction and measure, or null.</summary>
    public MeasureResult? Find(Modality modality, DirectionName direction, string measure) =>
        Results.FirstOrDefault(r => r.Modality == modality && r.Direction == direction && r.Measure == measure);
}

/// <summary>Loss through cancellation between regions that act together.</summary>
/// <param name="Modality">EEG or MEG.</param>
/// <param name="Measure">Measure of the verdict.</param>
/// <param name="Db">Power against the same moments without cancelling [dB], at most 0; minus infinity where nothing is left.</param>
public sealed record CancellationResult(Modality Modality, string Measure, double Db);

/// <summary>How well the directions split in one region.</summary>
public sealed record SplitSummary(Percentiles WeakestOverStrongest, Percentiles AngleToRadialDeg, int UndefinedDipoles, int DegenerateDipoles);
