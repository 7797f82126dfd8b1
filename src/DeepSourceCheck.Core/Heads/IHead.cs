using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads;

/// <summary>What the stages after the leadfield may ask of a head. They never learn which kind it is.</summary>
public interface IHead
{
    /// <summary>How the head is named in results, for instance `spheres: adult-4`.</summary>
    string Name { get; }

    /// <summary>Null when a dipole may stand at <paramref name="point"/> [m], else the reason with the distance.</summary>
    string? WhyRefused(Vec3 point);

    /// <summary>Outward unit vector at <paramref name="point"/> [m]; null where the head does not define one, as at its symmetry centre.</summary>
    Vec3? Outward(Vec3 point);

    /// <summary>True where the directions of the split vanish by symmetry: within 1e-6 m of a sphere's centre.</summary>
    bool IsSymmetryCentre(Vec3 point);

    /// <summary>Distance below the scalp [m], or null where the head has no surface.</summary>
    double? Depth(Vec3 point);
}
