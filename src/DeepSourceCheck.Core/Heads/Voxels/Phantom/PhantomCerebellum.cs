using DeepSourceCheck.Core.Geometry;

using static DeepSourceCheck.Core.Heads.Voxels.Phantom.SolidDistance;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>The cerebellum of the phantom: hull, leaves, grey ribbon; lengths in millimetres of the adult frame.</summary>
/// <remarks>Fissures fan out in the sagittal plane from a core line near the fourth ventricle; every third goes deep. They run from side to side, as the leaves do.</remarks>
internal static class PhantomCerebellum
{
    private const double Grey = 2.2;
    private const double FissuresPerRadian = 5.2;

    private static readonly WaveField Bend = new(31, 8, 25, 60);
    private static readonly Rotation Lean = Rotation.FromFixedAxes(-15 * Math.PI / 180, 25 * Math.PI / 180, -45 * Math.PI / 180);

    /// <summary>Distance to the hull.</summary>
    public static double Hull(Vec3 p, double cavity)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        double d = Ellipsoid(Lean.ApplyInverse(a - new Vec3(25, -67, -36)), new(33, 36, 30));
        d = Union(d, Ellipsoid(p - new Vec3(0, -68, -33), new(16, 26, 29)), 6);
        d = Intersection(d, cavity + 1.8, 3);
        d = Intersection(d, p.Z - PhantomCortex.Tentorium(p) + 0.9, 3);

        // The notch between the halves behind and below.
        return Difference(d, Ellipsoid(p - new Vec3(0, -96, -50), new(4, 14, 22)), 5);
    }

    /// <summary>Whether a point inside the hull is fluid, grey or white.</summary>
    public static TissueKind At(Vec3 p, double hull)
    {
        double depth = -hull;
        double y = -(p.Y + 49), z = p.Z + 35, rho = Math.Sqrt(y * y + z * z);
        if (rho < 6)
        {
            return TissueKind.White;
        }

        double phase = FissuresPerRadian * Math.Atan2(z, y) + 0.5 * Bend.Value(p) + 0.012 * Math.Abs(p.X);
        double turn = phase / 2, whole = Math.Round(turn);
        double across = Math.Abs(turn - whole) * 2 * rho / FissuresPerRadian;
        bool deep = (long)whole % 3 == 0;
        double reach = Math.Min(deep ? 17 : 8, rho - 5);
        double below = Math.Max(depth - reach, 0);
        double pial = Math.Max(hull, (deep ? 0.4 : 0.2) - Math.Sqrt(across * across + below * below));
        return pial > 0 ? TissueKind.Csf : pial > -Grey ? TissueKind.Grey : TissueKind.White;
    }
}
