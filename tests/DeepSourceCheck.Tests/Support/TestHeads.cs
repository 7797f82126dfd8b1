using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;

namespace DeepSourceCheck.Tests.Support;

/// <summary>Heads that tests share: the contract's adult preset.</summary>
internal static class TestHeads
{
    /// <summary>Centre (0, -18, 5) mm; 78/80/86/92 mm; 0.33/1.79/0.0132/0.43 S/m.</summary>
    public static LayeredSphere Adult { get; } = new("spheres: adult-4", new(0, -0.018, 0.005),
    [
        new("brain", 0.078, 0.33, 0.33), new("csf", 0.080, 1.79, 1.79), new("skull", 0.086, 0.0132, 0.0132), new("scalp", 0.092, 0.43, 0.43),
    ]);

    /// <summary>A head that admits every point.</summary>
    public static IHead Everywhere { get; } = new ImportedHead();

    /// <summary>Angle between two directions [degrees], exact for small angles.</summary>
    public static double AngleDeg(Vec3 a, Vec3 b) => Math.Atan2(Vec3.Cross(a, b).Norm, Vec3.Dot(a, b)) * 180 / Math.PI;
}
