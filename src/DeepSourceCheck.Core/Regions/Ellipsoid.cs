using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Regions;

/// <summary>A solid ellipsoid.</summary>
/// <remarks>
/// A point p belongs when q = sum_a ((R'(p - c))_a / s_a)^2 is at most 1 + 1e-9: the columns of R are the axes, and points that lie on the surface
/// in decimal millimetres belong in spite of binary rounding.
/// </remarks>
public sealed class Ellipsoid
{
    /// <summary>How far q, which is without unit, may exceed 1 on the surface.</summary>
    public const double SurfaceTolerance = 1e-9;

    /// <param name="centre">Centre [m].</param>
    /// <param name="semiAxes">Semi-axes [m], positive and finite.</param>
    /// <param name="rotation">Successive turns about the fixed x, y and z axes.</param>
    /// <exception cref="ArgumentOutOfRangeException">A number is not finite or a semi-axis not positive.</exception>
    public Ellipsoid(Vec3 centre, Vec3 semiAxes, Rotation rotation)
    {
        if (!centre.IsFinite)
        {
            throw new ArgumentOutOfRangeException(nameof(centre), centre, "The centre must be finite.");
        }

        if (!(semiAxes.IsFinite && semiAxes.X > 0 && semiAxes.Y > 0 && semiAxes.Z > 0))
        {
            throw new ArgumentOutOfRangeException(nameof(semiAxes), semiAxes, "Semi-axes must be positive and finite.");
        }

        Centre = centre;
        SemiAxes = semiAxes;
        Rotation = rotation;
    }

    /// <summary>The ellipsoid of a study.</summary>
    public Ellipsoid(EllipsoidChoice choice)
        : this(choice.Centre, choice.SemiAxes, choice.Rotation)
    {
    }

    /// <summary>Centre [m].</summary>
    public Vec3 Centre { get; }

    /// <summary>Semi-axes [m].</summary>
    public Vec3 SemiAxes { get; }

    /// <summary>Rotation from the ellipsoid's axes to the frame.</summary>
    public Rotation Rotation { get; }

    /// <summary>4/3 pi a b c [m^3].</summary>
    public double Volume => 4.0 / 3.0 * Math.PI * SemiAxes.X * SemiAxes.Y * SemiAxes.Z;

    /// <summary>The quadratic form q at a point [m]: 0 at the centre, 1 on the surface.</summary>
    public double Q(Vec3 point)
    {
        Vec3 own = Rotation.ApplyInverse(point - Centre);
        double x = own.X / SemiAxes.X, y = own.Y / SemiAxes.Y, z = own.Z / SemiAxes.Z;
        return x * x + y * y + z * z;
    }

    /// <summary>True when a point [m] belongs.</summary>
    public bool Contains(Vec3 point) => Q(point) <= 1 + SurfaceTolerance;

    /// <summary>Half the extent of the tightest upright box [m]: sqrt(sum_a (R_ia s_a)^2) along axis i.</summary>
    public Vec3 HalfExtent => new(Extent(Rotation.Row0), Extent(Rotation.Row1), Extent(Rotation.Row2));

    /// <summary>The shape for filling; its box is widened by the surface's tolerance.</summary>
    public RegionShape Shape
    {
        get
        {
            Vec3 half = (1 + SurfaceTolerance) * HalfExtent;
            return new(Contains, Centre - half, Centre + half, Volume, Centre);
        }
    }

    /// <summary>Unit vector of axis 0, 1 or 2 in the frame.</summary>
    public Vec3 Axis(int axis) => Rotation.Apply(new(axis == 0 ? 1 : 0, axis == 1 ? 1 : 0, axis == 2 ? 1 : 0));

    /// <summary>The mirror image across the plane x = 0.</summary>
    public Ellipsoid MirrorX() => new(
        Centre with { X = -Centre.X },
        SemiAxes,
        new(
            new(Rotation.Row0.X, -Rotation.Row0.Y, -Rotation.Row0.Z),
            Rotation.Row1 with { X = -Rotation.Row1.X },
            Rotation.Row2 with { X = -Rotation.Row2.X }));

    /// <summary>Scaled by a positive factor about a fixed point [m].</summary>
    public Ellipsoid Scaled(double factor, Vec3 about) => new(about + factor * (Centre - about), factor * SemiAxes, Rotation);

    private double Extent(Vec3 row) => new Vec3(row.X * SemiAxes.X, row.Y * SemiAxes.Y, row.Z * SemiAxes.Z).Norm;
}
