using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Regions;

/// <summary>A region of the built-in library: one side of a structure, or a midline structure, with what is known about it.</summary>
public sealed record LibraryRegion
{
    /// <summary>Name by which studies use it, for instance `thalamus-left`.</summary>
    public required string Name { get; init; }

    /// <summary>Structure, for instance `thalamus`.</summary>
    public required string Structure { get; init; }

    /// <summary>`left`, `right` or `midline`.</summary>
    public required string Side { get; init; }

    /// <summary>Frame of the coordinates in words.</summary>
    public required string Frame { get; init; }

    /// <summary>Ellipsoid [m]; null for `cortex`, which is computed from the head.</summary>
    public Ellipsoid? Shape { get; init; }

    /// <summary>Published adult volume of this one region [m^3]: lowest and highest; null for `cortex`.</summary>
    public (double Low, double High)? VolumeRange { get; init; }

    /// <summary>Where the volume comes from.</summary>
    public required string VolumeSource { get; init; }

    /// <summary>Grade of the volume.</summary>
    public required Grade VolumeGrade { get; init; }

    /// <summary>Where centre and rotation come from.</summary>
    public required string PlaceSource { get; init; }

    /// <summary>Grade of centre and rotation.</summary>
    public required Grade PlaceGrade { get; init; }

    /// <summary>What a spherical head gets wrong at this place; null where it does well.</summary>
    public string? SphereLimits { get; init; }

    /// <summary>What a realistic head changes here, as measured once; null where nothing was measured.</summary>
    public RealisticHeadEffect? RealisticHead { get; init; }

    /// <summary>What the user should know.</summary>
    public required string Note { get; init; }

    /// <summary>The region on a head of another size: centre and semi-axes scale about a fixed point; volumes and sources stay those of adults.</summary>
    /// <param name="factor">Factor, positive; 1 leaves the region as it is.</param>
    /// <param name="about">Centre of the head [m].</param>
    public LibraryRegion Scaled(double factor, Vec3 about) => factor == 1 ? this : this with { Shape = Shape?.Scaled(factor, about) };
}
