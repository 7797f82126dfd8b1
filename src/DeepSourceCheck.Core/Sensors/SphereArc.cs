using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Sensors;

// The curve that a head's surface and the plane through three of its points have in common is, on a sphere, a circle.
//   n = unit((b - a) x (c - a))      the plane's normal
//   o = (n . a) n                    the circle's centre, rho = |a - o| its radius
//   p(phi) = o + rho (cos(phi) e1 + sin(phi) e2),  e1 = (a - o)/rho, e2 = n x e1
// Arc length is proportional to phi, so a share of an arc is a share of the angle.

/// <summary>The circular arc on the unit sphere that starts at a point, passes through a second and ends at a third.</summary>
internal readonly struct SphereArc : ISiteCurve
{
    private readonly Vec3 _centre, _e1, _e2;
    private readonly double _radius, _middle, _end;

    /// <param name="start">Unit vector.</param>
    /// <param name="through">Unit vector between the two ends.</param>
    /// <param name="end">Unit vector.</param>
    public SphereArc(Vec3 start, Vec3 through, Vec3 end)
    {
        Vec3 normal = Vec3.Cross(through - start, end - start).Unit();
        _centre = Vec3.Dot(normal, start) * normal;
        _radius = (start - _centre).Norm;
        _e1 = (start - _centre) / _radius;
        _e2 = Vec3.Cross(normal, _e1);
        _middle = Angle(through);
        _end = Angle(end);
    }

    /// <summary>The unit vector at a share of the arc's length, 0 at the start and 1 at the end.</summary>
    public Vec3 At(double share) => Point(share * _end);

    /// <summary>The unit vector at a share of the part between the start and the middle point.</summary>
    public Vec3 Before(double share) => Point(share * _middle);

    /// <summary>The unit vector at a share of the part between the middle point and the end.</summary>
    public Vec3 After(double share) => Point(_middle + share * (_end - _middle));

    private Vec3 Point(double phi)
    {
        (double sin, double cos) = Math.SinCos(phi);
        return (_centre + _radius * (cos * _e1 + sin * _e2)).Unit();
    }

    // The normal's sense makes the middle point come before the end, so that angles run from 0 upwards.
    private double Angle(Vec3 p)
    {
        Vec3 d = p - _centre;
        double phi = Math.Atan2(Vec3.Dot(d, _e2), Vec3.Dot(d, _e1));
        return phi < 0 ? phi + 2 * Math.PI : phi;
    }
}
