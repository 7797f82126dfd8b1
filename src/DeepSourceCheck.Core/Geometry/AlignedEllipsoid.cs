namespace DeepSourceCheck.Core.Geometry;

// Fit: A x^2 + B y^2 + C z^2 + D x + E y + F z = 1 is linear in its six coefficients; centre -D/(2A) and so on, semi-axis sqrt(G/A) with
// G = 1 + D^2/(4A) + E^2/(4B) + F^2/(4C). Coordinates about the points' mean, in units of their spread.
//
// Foot of a point y (in the axes, from the centre): x_i = e_i^2 y_i/(t + e_i^2) with the root t > -min e^2 of sum (e_i y_i/(t + e_i^2))^2 = 1. The sum is convex and falls
// with t, and is at least 1 at t = max(e_i |y_i| - e_i^2): Newton from there rises to the root without overshooting.

/// <summary>An ellipsoid whose axes are those of the world.</summary>
/// <param name="Centre">Centre [m].</param>
/// <param name="SemiAxes">Semi-axes along x, y and z [m].</param>
public readonly record struct AlignedEllipsoid(Vec3 Centre, Vec3 SemiAxes)
{
    /// <summary>The ellipsoid of least algebraic distance from points; null where none fits (fewer than six points, or another kind of quadric).</summary>
    /// <param name="points">Points [m].</param>
    public static AlignedEllipsoid? Fit(IReadOnlyList<Vec3> points)
    {
        Vec3 mean = Vec3.Zero;
        foreach (Vec3 p in points)
        {
            mean += p / points.Count;
        }

        double size = points.Count == 0 ? 1 : Math.Sqrt(points.Average(p => Vec3.Dot(p - mean, p - mean)));
        var normal = new double[6, 7];
        Span<double> v = stackalloc double[7];
        foreach (Vec3 p in points)
        {
            Vec3 q = (p - mean) / size;
            (v[0], v[1], v[2], v[3], v[4], v[5], v[6]) = (q.X * q.X, q.Y * q.Y, q.Z * q.Z, q.X, q.Y, q.Z, 1);
            for (int i = 0; i < 6; i++)
            {
                for (int j = 0; j < 7; j++)
                {
                    normal[i, j] += v[i] * v[j];
                }
            }
        }

        if (NormalEquations.Solve(normal) is not { } c || !(c[0] > 0 && c[1] > 0 && c[2] > 0))
        {
            return null;
        }

        double g = 1 + c[3] * c[3] / (4 * c[0]) + c[4] * c[4] / (4 * c[1]) + c[5] * c[5] / (4 * c[2]);
        return new(
            mean + size * new Vec3(-c[3] / (2 * c[0]), -c[4] / (2 * c[1]), -c[5] / (2 * c[2])),
            size * new Vec3(Math.Sqrt(g / c[0]), Math.Sqrt(g / c[1]), Math.Sqrt(g / c[2])));
    }

    /// <summary>The same ellipsoid with each semi-axis longer by <paramref name="by"/> [m].</summary>
    public AlignedEllipsoid Grown(double by) => this with { SemiAxes = SemiAxes + new Vec3(by, by, by) };

    /// <summary>Where a ray from inside leaves the ellipsoid [m].</summary>
    /// <param name="from">Point inside [m].</param>
    /// <param name="direction">Unit vector.</param>
    public Vec3 OnRay(Vec3 from, Vec3 direction)
    {
        Vec3 p = Scaled(from - Centre), d = Scaled(direction);
        double a = Vec3.Dot(d, d), b = Vec3.Dot(p, d), c = Vec3.Dot(p, p) - 1;
        return from + (-b + Math.Sqrt(b * b - a * c)) / a * direction;
    }

    /// <summary>Outward unit normal at a point of the surface.</summary>
    /// <param name="point">Point [m].</param>
    public Vec3 Normal(Vec3 point) => Scaled(Scaled(point - Centre)).Unit();

    /// <summary>The nearest point of the surface.</summary>
    /// <param name="point">Point [m], not the centre.</param>
    /// <returns>The foot [m] and its distance [m], negative where the point lies outside.</returns>
    public (Vec3 Foot, double Inside) Nearest(Vec3 point)
    {
        Vec3 y = point - Centre, e = SemiAxes;
        Vec3 e2 = new(e.X * e.X, e.Y * e.Y, e.Z * e.Z), ey = new(e.X * y.X, e.Y * y.Y, e.Z * y.Z);
        double t = Math.Max(Math.Abs(ey.X) - e2.X, Math.Max(Math.Abs(ey.Y) - e2.Y, Math.Abs(ey.Z) - e2.Z));
        for (int step = 0; step < 100; step++)
        {
            (double x, double yy, double z) = (Squared(ey.X / (t + e2.X)), Squared(ey.Y / (t + e2.Y)), Squared(ey.Z / (t + e2.Z)));
            double excess = x + yy + z - 1, slope = -2 * (x / (t + e2.X) + yy / (t + e2.Y) + z / (t + e2.Z));
            double next = t - excess / slope;
            if (!(next > t))
            {
                break;
            }

            t = next;
        }

        Vec3 foot = new(e2.X * y.X / (t + e2.X), e2.Y * y.Y / (t + e2.Y), e2.Z * y.Z / (t + e2.Z));
        Vec3 scaled = Scaled(y);
        return (Centre + foot, Math.CopySign((foot - y).Norm, 1 - Vec3.Dot(scaled, scaled)));
    }

    private static double Squared(double x) => x * x;

    private Vec3 Scaled(Vec3 v) => new(v.X / SemiAxes.X, v.Y / SemiAxes.Y, v.Z / SemiAxes.Z);
}
