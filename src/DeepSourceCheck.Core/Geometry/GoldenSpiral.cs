namespace DeepSourceCheck.Core.Geometry;

/// <summary>Nearly even points on a sphere or cap: equal steps in height, golden angle in azimuth.</summary>
/// <remarks>Source: the golden-angle lattice, e.g. Gonzalez 2010, Mathematical Geosciences 42:49 (from memory).</remarks>
public static class GoldenSpiral
{
    /// <summary>The golden angle pi (3 - sqrt 5) [rad].</summary>
    public static readonly double Angle = Math.PI * (3.0 - Math.Sqrt(5.0));

    /// <summary>Unit vector <paramref name="k"/> of <paramref name="count"/> on the cap of heights above <paramref name="lowestHeight"/>.</summary>
    /// <param name="k">Index, 0 to count - 1.</param>
    /// <param name="count">Number of points on the cap.</param>
    /// <param name="lowestHeight">Height z of the cap's edge on the unit sphere: -1 is the whole sphere.</param>
    public static Vec3 Point(int k, int count, double lowestHeight = -1.0)
    {
        double z = 1.0 - (1.0 - lowestHeight) * (k + 0.5) / count;
        double s = Math.Sqrt(Math.Max(0.0, 1.0 - z * z));
        (double sin, double cos) = Math.SinCos(Angle * (k + 0.5));
        return new(s * cos, s * sin, z);
    }
}
