using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>Approximate signed distances [mm] to simple solids, negative inside, and their smooth combinations.</summary>
/// <remarks>
/// Source: the ellipsoid's first-order estimate k0 (k0 - 1) / k1 with k0 = |p / r|, k1 = |p / r^2| (its gradient has length 1 on the surface) and the
/// quadratic blend of two distances are common practice of implicit modelling, no source.
/// </remarks>
internal static class SolidDistance
{
    /// <summary>An ellipsoid with its axes along the frame's.</summary>
    /// <param name="v">Point relative to the centre [mm].</param>
    /// <param name="r">Semi-axes [mm].</param>
    public static double Ellipsoid(Vec3 v, Vec3 r)
    {
        double x = v.X / r.X, y = v.Y / r.Y, z = v.Z / r.Z;
        double k0 = Math.Sqrt(x * x + y * y + z * z);
        x /= r.X;
        y /= r.Y;
        z /= r.Z;
        double k1 = Math.Sqrt(x * x + y * y + z * z);
        return k1 > 0 ? k0 * (k0 - 1) / k1 : -Math.Min(r.X, Math.Min(r.Y, r.Z));
    }

    /// <summary>A capsule from a to b [mm] whose radius [mm] changes evenly from one end to the other.</summary>
    public static double Capsule(Vec3 p, Vec3 a, Vec3 b, double radiusA, double radiusB)
    {
        Vec3 ab = b - a, ap = p - a;
        double t = Math.Clamp(Vec3.Dot(ap, ab) / Vec3.Dot(ab, ab), 0, 1);
        return (ap - t * ab).Norm - (radiusA + t * (radiusB - radiusA));
    }

    /// <summary>Union of two solids with a fillet of about <paramref name="blend"/> [mm].</summary>
    public static double Union(double a, double b, double blend)
    {
        double h = Math.Max(blend - Math.Abs(a - b), 0) / blend;
        return Math.Min(a, b) - h * h * blend / 4;
    }

    /// <summary>Intersection of two solids, its edge rounded over about <paramref name="blend"/> [mm].</summary>
    public static double Intersection(double a, double b, double blend) => -Union(-a, -b, blend);

    /// <summary>What is left of a solid after another is taken away, its edge rounded over about <paramref name="blend"/> [mm].</summary>
    public static double Difference(double a, double b, double blend) => Intersection(a, -b, blend);

    /// <summary>A smooth step from 0 at <paramref name="low"/> to 1 at <paramref name="high"/>.</summary>
    public static double Step(double low, double high, double x)
    {
        double t = Math.Clamp((x - low) / (high - low), 0, 1);
        return t * t * (3 - 2 * t);
    }
}
