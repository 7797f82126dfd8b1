using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Results;

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
