using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Studies;

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
