namespace DeepSourceCheck.Core.Geometry;

/// <summary>A rotation of three-dimensional space, as a 3 x 3 orthonormal matrix without unit; what it turns keeps its unit.</summary>
/// <param name="Row0">First row.</param>
/// <param name="Row1">Second row.</param>
/// <param name="Row2">Third row.</param>
public readonly record struct Rotation(Vec3 Row0, Vec3 Row1, Vec3 Row2)
{
    /// <summary>No rotation.</summary>
    public static readonly Rotation Identity = new(new(1, 0, 0), new(0, 1, 0), new(0, 0, 1));

    /// <summary>Successive turns about x, then y, then z of the fixed frame: R = Rz Ry Rx.</summary>
    /// <param name="x">Angle about x [rad].</param>
    /// <param name="y">Angle about y [rad].</param>
    /// <param name="z">Angle about z [rad].</param>
    public static Rotation FromFixedAxes(double x, double y, double z)
    {
        (double sx, double cx) = Math.SinCos(x);
        (double sy, double cy) = Math.SinCos(y);
        (double sz, double cz) = Math.SinCos(z);
        return new(
            new(cz * cy, cz * sy * sx - sz * cx, cz * sy * cx + sz * sx),
            new(sz * cy, sz * sy * sx + cz * cx, sz * sy * cx - cz * sx),
            new(-sy, cy * sx, cy * cx));
    }

    /// <summary>R v.</summary>
    public Vec3 Apply(Vec3 v) => new(Vec3.Dot(Row0, v), Vec3.Dot(Row1, v), Vec3.Dot(Row2, v));

    /// <summary>R' v, the inverse rotation.</summary>
    public Vec3 ApplyInverse(Vec3 v) => v.X * Row0 + v.Y * Row1 + v.Z * Row2;
}
