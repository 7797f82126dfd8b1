using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;

namespace DeepSourceCheck.Core.Results;

/// <summary>A region in the scene.</summary>
/// <param name="Name">Its name.</param>
/// <param name="Points">At most 2,000 of its dipoles, evenly picked [m].</param>
/// <param name="Depth">Their median depth below the scalp [m]; null where the head has no surface.</param>
public sealed record SceneRegion(string Name, IReadOnlyList<Vec3> Points, double? Depth);

/// <summary>Points of the scene, for the geometry figure.</summary>
public sealed record Scene
{
    /// <summary>Centre of the head [m]; null for imported leadfields.</summary>
    public Vec3? Centre { get; init; }

    /// <summary>Layers of a spherical head as (tissue, outer radius [m]), innermost first; empty for others.</summary>
    public IReadOnlyList<(string Tissue, double Radius)> Layers { get; init; } = [];

    /// <summary>Outlines of a real head on three planes through <see cref="Cut"/>; empty for others.</summary>
    public IReadOnlyList<HeadOutline> Outlines { get; init; } = [];

    /// <summary>The point through which the outlines are cut [m].</summary>
    public Vec3 Cut { get; init; }

    /// <summary>Electrodes (name, place [m]).</summary>
    public IReadOnlyList<(string Name, Vec3 Position)> Electrodes { get; init; } = [];

    /// <summary>Coil sites [m], one a channel site.</summary>
    public IReadOnlyList<Vec3> CoilSites { get; init; } = [];

    /// <summary>Regions.</summary>
    public IReadOnlyList<SceneRegion> Regions { get; init; } = [];
}
