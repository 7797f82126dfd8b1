using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

// Radial field of a tangential dipole Q at radius r in any spherical conductor, at radius R and angle t from the dipole's own radial axis, at the azimuth
// of its maximum (volume currents give no radial field):
//   B(t) = mu0/(4 pi) Q r sin t / (R^2 + r^2 - 2 R r cos t)^(3/2)                                      [Sarvas 1987]
// dB/dt = 0 with A = R^2 + r^2, B = 2 R r:  B/2 cos^2 t + A cos t - 3B/2 = 0, so
//   cos t* = 3B / (A + sqrt(A^2 + 3 B^2))
// B(t) rises up to t* and falls beyond. A coil at angle t reads B(t) for the tangential direction that suits it best; of a cap, which is in one piece,
// only the smallest and the largest angle t matter.

/// <summary>How much of a deep source's field a generated array captures: the extremes of a low source's field leave the head below the array's edge.</summary>
public static class ArrayCoverage
{
    /// <summary>Share below which a region's field maximum counts as outside the array.</summary>
    public const double FullShare = 0.999;

    // Steps around the edge before the golden-section search: the angle to a smooth edge has at most a few extremes.
    private const int EdgeSteps = 72;

    /// <summary>Angle [rad] between the dipole's radial axis and the place of its largest radial field.</summary>
    /// <param name="dipoleRadius">Distance of the dipole from the centre [m], at least 0.</param>
    /// <param name="coilRadius">Distance of the coils from the centre [m], larger.</param>
    public static double PeakAngle(double dipoleRadius, double coilRadius)
    {
        double a = coilRadius * coilRadius + dipoleRadius * dipoleRadius, b = 2 * coilRadius * dipoleRadius;
        return Math.Acos(3 * b / (a + Math.Sqrt(a * a + 3 * b * b)));
    }

    /// <summary>Largest radial field of a tangential dipole at an angle from its radial axis [T/(A m)].</summary>
    /// <param name="dipoleRadius">Distance of the dipole from the centre [m].</param>
    /// <param name="coilRadius">Distance of the coil from the centre [m].</param>
    /// <param name="angle">Angle at the centre between dipole and coil [rad].</param>
    public static double RadialField(double dipoleRadius, double coilRadius, double angle)
    {
        double squared = coilRadius * coilRadius + dipoleRadius * dipoleRadius - 2 * coilRadius * dipoleRadius * Math.Cos(angle);
        return Si.Mu0Over4Pi * dipoleRadius * Math.Sin(angle) / (squared * Math.Sqrt(squared));
    }

    /// <summary>Share of the largest radial field around the head that the array's cap captures, for the tangential direction that suits it best.</summary>
    /// <param name="position">Dipole [m].</param>
    /// <param name="head">Head.</param>
    /// <param name="choice">Array: its gap and edge count; every coil is taken as a radial magnetometer at the gap.</param>
    /// <returns>1 where the cap reaches a field maximum (and at the centre, where the field vanishes everywhere), else below 1.</returns>
    public static double CapturedShare(Vec3 position, LayeredSphere head, CoilArrayChoice choice)
    {
        Vec3 offset = position - head.Centre;
        double r = offset.Norm, coilRadius = head.OuterRadius + choice.Gap;
        if (r <= LayeredSphere.CentreTolerance)
        {
            return 1.0;
        }

        (double nearest, double farthest) = AnglesOnCap(offset / r, new(choice.EdgeFront, choice.EdgeBack));
        double peak = PeakAngle(r, coilRadius);
        double best = Math.Clamp(peak, nearest, farthest);
        return best == peak ? 1.0 : RadialField(r, coilRadius, best) / RadialField(r, coilRadius, peak);
    }

    /// <summary>The median share of a region, and what to tell the user where the array misses its field maxima.</summary>
    /// <param name="region">Name of the region.</param>
    /// <param name="positions">Its dipoles [m]; at least one. Of more than 2,000, evenly picked ones count.</param>
    /// <param name="head">Head.</param>
    /// <param name="choice">Array.</param>
    public static (double Share, string? Warning) OfRegion(string region, IReadOnlyList<Vec3> positions, LayeredSphere head, CoilArrayChoice choice)
    {
        int step = Math.Max(1, (positions.Count + 1999) / 2000);
        int count = (positions.Count + step - 1) / step;
        double[] shares = [.. Enumerable.Range(0, count).Select(k => CapturedShare(positions[k * step], head, choice)).Order()];
        double median = (shares[(shares.Length - 1) / 2] + shares[shares.Length / 2]) / 2;
        return (median, median >= FullShare ? null : string.Create(
            CultureInfo.InvariantCulture,
            $"{region}: the largest MEG field leaves the head below the array's edge; at best {100 * median:0} % of it is captured (median over dipoles)"));
    }

    /// <summary>Smallest and largest angle [rad] between an axis and the directions of a cap.</summary>
    internal static (double Nearest, double Farthest) AnglesOnCap(Vec3 axis, CapEdge edge)
    {
        double nearest = edge.Contains(axis) ? 0 : ExtremeAngle(axis, edge, 1);
        double farthest = edge.Contains(-axis) ? Math.PI : -ExtremeAngle(axis, edge, -1);
        return (nearest, farthest);
    }

    /// <summary>Minimum over the edge of sign times the angle to the axis.</summary>
    private static double ExtremeAngle(Vec3 axis, CapEdge edge, int sign)
    {
        double Value(double azimuth)
        {
            Vec3 p = edge.Point(azimuth);
            return sign * Math.Atan2(Vec3.Cross(axis, p).Norm, Vec3.Dot(axis, p));
        }

        double width = 2 * Math.PI / EdgeSteps;
        int best = 0;
        double bestValue = double.PositiveInfinity;
        for (int k = 0; k < EdgeSteps; k++)
        {
            double value = Value(k * width);
            (best, bestValue) = value < bestValue ? (k, value) : (best, bestValue);
        }

        double low = (best - 1) * width, high = (best + 1) * width;
        double golden = (Math.Sqrt(5) - 1) / 2;
        while (high - low > 1e-9)
        {
            double left = high - golden * (high - low), right = low + golden * (high - low);
            (low, high) = Value(left) < Value(right) ? (low, right) : (left, high);
        }

        return Math.Min(bestValue, Value((low + high) / 2));
    }
}
