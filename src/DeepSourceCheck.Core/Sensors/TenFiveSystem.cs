using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

// Where the sites lie on a sphere: the rules of TenFiveRules with circles for curves, from landmarks at fixed elevations. Both sides are alike, so the middle of the
// midline is the middle of the coronal curve too. With Nz and Iz at unlike elevations (-23 and -14 degrees) Cz lies 4.5 degrees in front of the vertical, not on it.

/// <summary>Directions of all 329 sites of the 10-5 system, and of the mastoids, seen from the centre of a sphere.</summary>
/// <remarks>x right, y front, z up. Immutable.</remarks>
internal static class TenFiveSystem
{
    /// <summary>Elevation of the nasion seen from the centre [rad].</summary>
    public static readonly double NasionElevation = Si.FromDegrees(-23);

    /// <summary>Elevation of the inion [rad].</summary>
    public static readonly double InionElevation = Si.FromDegrees(-14);

    /// <summary>Elevation of both preauricular points [rad].</summary>
    public static readonly double PreauricularElevation = Si.FromDegrees(-32);

    /// <summary>Azimuth of the mastoids from the front, to either side [rad].</summary>
    public static readonly double MastoidAzimuth = Si.FromDegrees(95);

    /// <summary>Elevation of the mastoids [rad].</summary>
    public static readonly double MastoidElevation = Si.FromDegrees(-26);

    private static readonly Dictionary<string, Vec3> Directions = Build();

    /// <summary>All 329 names: midline from front to back, then each curve and row from front to back, left before right.</summary>
    public static IReadOnlyList<string> Names { get; } = [.. Directions.Keys.Where(name => name is not ("M1" or "M2"))];

    /// <summary>Unit vector of a site or mastoid; false for unknown names.</summary>
    public static bool TryDirection(string name, out Vec3 direction) => Directions.TryGetValue(name, out direction);

    /// <summary>Unit vector at an azimuth from the front (positive to the right) and an elevation [rad].</summary>
    public static Vec3 Direction(double azimuth, double elevation)
    {
        (double sinA, double cosA) = Math.SinCos(azimuth);
        (double sinE, double cosE) = Math.SinCos(elevation);
        return new(sinA * cosE, cosA * cosE, sinE);
    }

    private static Dictionary<string, Vec3> Build()
    {
        Vec3 nasion = Direction(0, NasionElevation), inion = Direction(Math.PI, InionElevation), preauricular = Direction(-Math.PI / 2, PreauricularElevation);
        SphereArc midline = new(nasion, new(0, 0, 1), inion);
        Dictionary<string, Vec3> at = TenFiveRules.Place(
            preauricular, MirrorX(preauricular), null, midline, (a, b, c) => new SphereArc(a, b, c), new(MirrorX, OnMidline));
        Vec3 mastoid = Direction(-MastoidAzimuth, MastoidElevation);
        at.Add("M1", mastoid);
        at.Add("M2", MirrorX(mastoid));
        return at;
    }

    private static Vec3 MirrorX(Vec3 v) => v with { X = -v.X };

    private static Vec3 OnMidline(Vec3 v) => new Vec3(0, v.Y, v.Z).Unit();
}
