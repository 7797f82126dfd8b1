using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Detection;

/// <summary>The fixed sets of directions over which tangential and isotropic percentiles run.</summary>
public static class DirectionSets
{
    /// <summary>Equally spaced angles of the tangential set, from v1.</summary>
    public const int TangentialAngles = 64;

    /// <summary>Points of the isotropic set.</summary>
    public const int IsotropicPoints = 256;

    /// <summary>
    /// Cosine and sine of the first half of the tangential angles. SNR does not change when a direction turns by 180 degrees, so each of these counts twice.
    /// </summary>
    public static IReadOnlyList<(double Cos, double Sin)> HalfCircle { get; } =
        [.. Enumerable.Range(0, TangentialAngles / 2).Select(k => Math.SinCos(2 * Math.PI * k / TangentialAngles)).Select(p => (p.Cos, p.Sin))];

    /// <summary>The isotropic set of unit vectors: the golden-angle spiral over the whole sphere.</summary>
    public static IReadOnlyList<Vec3> Isotropic { get; } = [.. Enumerable.Range(0, IsotropicPoints).Select(k => GoldenSpiral.Point(k, IsotropicPoints))];
}
