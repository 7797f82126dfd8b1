using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads;

/// <summary>What the stages after the leadfield may ask of a head. They never learn which kind it is.</summary>
public interface IHead
{
    /// <summary>How the head is named in results, for instance `spheres: adult-4`.</summary>
    string Name { get; }

    /// <summary>Null when a dipole may stand at <paramref name="point"/> [m], else the reason with the distance.</summary>
    string? WhyRefused(Vec3 point);

    /// <summary>Name of the tissue at <paramref name="point"/> [m]; `outside` beyond the head, null where the head knows no tissues.</summary>
    string? TissueAt(Vec3 point);

    /// <summary>Outward unit vector at <paramref name="point"/> [m]; null where the head does not define one, as at its symmetry centre.</summary>
    Vec3? Outward(Vec3 point);

    /// <summary>True where the directions of the split vanish by symmetry: within 1e-6 m of a sphere's centre.</summary>
    bool IsSymmetryCentre(Vec3 point);

    /// <summary>Distance below the scalp [m], or null where the head has no surface.</summary>
    double? Depth(Vec3 point);

    /// <summary>Radius of the head [m]: a place that is known no better is not known; null where the head has none.</summary>
    double? Radius => null;

    /// <summary>Distance below the inner surface of the skull [m]; null where the head has none, or the point does not lie within it.</summary>
    double? DepthBelowInnerSkull(Vec3 point);

    /// <summary>Places [m] that stand for the cortex as the source of the brain's background activity, spread evenly; empty where the head does not know its brain.</summary>
    /// <param name="count">How many are wanted; a head with fewer places gives those.</param>
    IReadOnlyList<Vec3> BackgroundPlaces(int count);
}
