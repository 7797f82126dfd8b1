using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>The outline that a plane cuts from a scalp, seen from a point of the plane inside the head: the outermost scalp at every angle.</summary>
internal sealed class ScalpSection
{
    private readonly ScalpSurface _scalp;

    /// <param name="scalp">Scalp.</param>
    /// <param name="centre">Point of the plane inside the head [m].</param>
    /// <param name="e1">Unit vector in the plane at angle 0.</param>
    /// <param name="e2">Unit vector in the plane at angle pi/2.</param>
    public ScalpSection(ScalpSurface scalp, Vec3 centre, Vec3 e1, Vec3 e2) => (_scalp, Centre, E1, E2) = (scalp, centre, e1, e2);

    public Vec3 Centre { get; }

    public Vec3 E1 { get; }

    public Vec3 E2 { get; }

    /// <summary>The scalp at an angle [rad]; null where the ray meets no head.</summary>
    public Vec3? At(double angle)
    {
        (double sin, double cos) = Math.SinCos(angle);
        return _scalp.Outermost(Centre, cos * E1 + sin * E2);
    }

    /// <summary>Coordinates in the plane of a point of it [m].</summary>
    public (double U, double V) InPlane(Vec3 point) => (Vec3.Dot(point - Centre, E1), Vec3.Dot(point - Centre, E2));
}
