using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>The lower edge of a generated MEG array, seen from the head's centre: e(az) = (front + back)/2 + (front - back)/2 cos(az).</summary>
/// <param name="Front">Elevation in front [rad].</param>
/// <param name="Back">Elevation at the back [rad].</param>
public readonly record struct CapEdge(double Front, double Back)
{
    /// <summary>Elevation of the edge [rad] at an azimuth from the front [rad], either side alike.</summary>
    public double Elevation(double azimuth) => (Front + Back) / 2 + (Front - Back) / 2 * Math.Cos(azimuth);

    /// <summary>Elevation of the edge [rad] below or above a unit vector (x right, y front, z up); straight up and down count as azimuth 90 degrees.</summary>
    public double ElevationAt(Vec3 direction)
    {
        double across = Math.Sqrt(direction.X * direction.X + direction.Y * direction.Y);
        return (Front + Back) / 2 + (across > 0 ? (Front - Back) / 2 * direction.Y / across : 0);
    }

    /// <summary>True when a unit vector points at or above the edge.</summary>
    public bool Contains(Vec3 direction) => Math.Asin(Math.Clamp(direction.Z, -1, 1)) >= ElevationAt(direction);

    /// <summary>Unit vector to the edge at an azimuth from the front, positive to the right [rad].</summary>
    public Vec3 Point(double azimuth) => TenFiveSystem.Direction(azimuth, Elevation(azimuth));
}
