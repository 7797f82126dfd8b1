using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Regions;

/// <summary>A point that the head refused.</summary>
/// <param name="Row">Its row among all points of the region.</param>
/// <param name="Name">Its name where the study gave one, else empty.</param>
/// <param name="Position">Place [m].</param>
/// <param name="Reason">Why, with the distance.</param>
public sealed record DroppedPoint(int Row, string Name, Vec3 Position, string Reason);

/// <summary>A region filled with dipoles, in the order in which every result lists them.</summary>
public sealed class FilledRegion
{
    /// <summary>The region's name.</summary>
    public required string Name { get; init; }

    /// <summary>Kept positions [m].</summary>
    public required Vec3[] Positions { get; init; }

    /// <summary>Row of each kept position among all points of the region, dropped ones included.</summary>
    public required int[] Rows { get; init; }

    /// <summary>Names of the kept points where the study gave them, else empty.</summary>
    public PointNames PointNames { get; init; } = [];

    /// <summary>Index among the imported points, or empty for computed heads.</summary>
    public int[] SourceIndices { get; init; } = [];

    /// <summary>Place in the cortex of each kept position, null where it is not known; empty where the region is no folded cortex.</summary>
    public CorticalPlace?[] CorticalPlaces { get; init; } = [];

    /// <summary>Points that the head refused.</summary>
    public IReadOnlyList<DroppedPoint> Dropped { get; init; } = [];

    /// <summary>Grid spacing [m]; null for points.</summary>
    public double? Spacing { get; init; }

    /// <summary>True when the spacing was halved from the default so that the region holds enough dipoles.</summary>
    public bool SpacingRefined { get; init; }

    /// <summary>Dipoles times spacing cubed [m^3]; null for points and surfaces.</summary>
    public double? Volume => Spacing is { } h && !IsSurface ? Positions.Length * h * h * h : null;

    /// <summary>True for points on a surface, which has no volume.</summary>
    public bool IsSurface { get; init; }

    /// <summary>Analytic or voxel volume of the shape [m^3] where it has one.</summary>
    public double? ShapeVolume { get; init; }

    /// <summary>Mean of all points of the region, dropped ones included [m].</summary>
    public Vec3 Centroid { get; init; }

    /// <summary>Where the shape comes from, for instance `library`, `mask atlas.nii.gz label 3`.</summary>
    public string Origin { get; init; } = "";

    /// <summary>What a realistic head changes here; null for regions of the study's own and where nothing was measured.</summary>
    public RealisticHeadEffect? RealisticHead { get; init; }

    /// <summary>What the user must know about this region: losses, side, sphere misfit.</summary>
    public IReadOnlyList<string> Warnings { get; init; } = [];

    /// <summary>The same region with one more warning at the end.</summary>
    public FilledRegion WithWarning(string warning) => With(RealisticHead, [.. Warnings, warning]);

    /// <summary>The same region, with what a realistic head changes there.</summary>
    public FilledRegion WithRealisticHead(RealisticHeadEffect? effect) => With(effect, Warnings);

    private FilledRegion With(RealisticHeadEffect? effect, IReadOnlyList<string> warnings) => new()
    {
        Name = Name,
        Positions = Positions,
        Rows = Rows,
        PointNames = PointNames,
        SourceIndices = SourceIndices,
        CorticalPlaces = CorticalPlaces,
        Dropped = Dropped,
        Spacing = Spacing,
        SpacingRefined = SpacingRefined,
        IsSurface = IsSurface,
        ShapeVolume = ShapeVolume,
        Centroid = Centroid,
        Origin = Origin,
        RealisticHead = effect,
        Warnings = warnings,
    };
}
