namespace DeepSourceCheck.Core.Geometry;

/// <summary>An affine map of three-dimensional space: x -> M x + t. Units by context (voxel indices to metres for volumes).</summary>
/// <param name="Row0">First row of M.</param>
/// <param name="Row1">Second row of M.</param>
/// <param name="Row2">Third row of M.</param>
/// <param name="Offset">t, the image of the origin.</param>
public readonly record struct Affine(Vec3 Row0, Vec3 Row1, Vec3 Row2, Vec3 Offset)
{
    /// <summary>|det M| over the product of the column lengths below which the map counts as singular: columns within 0.06 degrees of one plane.</summary>
    public const double SmallestSkewness = 1e-3;

    /// <summary>The map that changes nothing.</summary>
    public static readonly Affine Identity = new(new(1, 0, 0), new(0, 1, 0), new(0, 0, 1), Vec3.Zero);

    /// <summary>M v + t.</summary>
    public Vec3 Apply(Vec3 v) => ApplyLinear(v) + Offset;

    /// <summary>M v, for differences of points.</summary>
    public Vec3 ApplyLinear(Vec3 v) => new(Vec3.Dot(Row0, v), Vec3.Dot(Row1, v), Vec3.Dot(Row2, v));

    /// <summary>Column 0, 1 or 2 of M: the image of a unit step along that axis.</summary>
    public Vec3 Column(int axis) => new(Row0[axis], Row1[axis], Row2[axis]);

    /// <summary>det M; its size is the volume of the image of the unit cube, its sign is negative for a mirrored frame.</summary>
    public double Determinant => Vec3.Dot(Row0, Vec3.Cross(Row1, Row2));

    /// <summary>True when every coefficient is finite.</summary>
    public bool IsFinite => Row0.IsFinite && Row1.IsFinite && Row2.IsFinite && Offset.IsFinite;

    /// <summary>False when a column vanishes or the columns lie (nearly) in one plane.</summary>
    public bool IsInvertible
    {
        get
        {
            double product = Column(0).Norm * Column(1).Norm * Column(2).Norm;
            return IsFinite && product > 0 && Math.Abs(Determinant) > SmallestSkewness * product;
        }
    }

    /// <summary>The map followed by a multiplication with <paramref name="factor"/>, for a change of unit.</summary>
    public Affine ThenScale(double factor) => new(factor * Row0, factor * Row1, factor * Row2, factor * Offset);

    /// <summary>The map that undoes this one.</summary>
    /// <exception cref="InvalidOperationException">M is singular.</exception>
    public Affine Inverse()
    {
        if (!IsInvertible)
        {
            throw new InvalidOperationException("A singular affine map has no inverse.");
        }

        // Rows of the inverse are the cross products of the columns over the determinant (Cramer's rule).
        Vec3 a = Column(0), b = Column(1), c = Column(2);
        double det = Determinant;
        Affine linear = new(Vec3.Cross(b, c) / det, Vec3.Cross(c, a) / det, Vec3.Cross(a, b) / det, Vec3.Zero);
        return linear with { Offset = -linear.ApplyLinear(Offset) };
    }

    /// <summary>Rotation by the unit quaternion (a, b, c, d) after scaling by the voxel sizes, the third times <paramref name="handedness"/>.</summary>
    /// <remarks>
    /// Source: the NIfTI-1 standard, "method 2" of its section on orientation: R is the rotation of the quaternion with a = sqrt(1 - b^2 - c^2 - d^2),
    /// x = R diag(dx, dy, qfac dz) (i, j, k)' + offset. Rounding can push b^2 + c^2 + d^2 to within 1e-7 of 1 or above it: then a = 0 and (b, c, d) are brought to length 1.
    /// </remarks>
    /// <param name="b">Quaternion component b.</param>
    /// <param name="c">Quaternion component c.</param>
    /// <param name="d">Quaternion component d.</param>
    /// <param name="offset">Image of voxel (0, 0, 0), in the unit of the voxel sizes.</param>
    /// <param name="spacing">Voxel sizes, positive.</param>
    /// <param name="handedness">qfac: -1 mirrors the third axis, every other value does not.</param>
    public static Affine FromQuaternion(double b, double c, double d, Vec3 offset, Vec3 spacing, double handedness)
    {
        double squares = b * b + c * c + d * d;
        double a;
        if (1.0 - squares < 1e-7)
        {
            double length = Math.Sqrt(squares);
            (a, b, c, d) = (0.0, b / length, c / length, d / length);
        }
        else
        {
            a = Math.Sqrt(1.0 - squares);
        }

        double dx = spacing.X, dy = spacing.Y, dz = handedness < 0 ? -spacing.Z : spacing.Z;
        return new(
            new((a * a + b * b - c * c - d * d) * dx, 2 * (b * c - a * d) * dy, 2 * (b * d + a * c) * dz),
            new(2 * (b * c + a * d) * dx, (a * a + c * c - b * b - d * d) * dy, 2 * (c * d - a * b) * dz),
            new(2 * (b * d - a * c) * dx, 2 * (c * d + a * b) * dy, (a * a + d * d - b * b - c * c) * dz),
            offset);
    }
}
