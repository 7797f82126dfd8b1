using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Tests.References;

/// <summary>Closed forms for one conductivity: the sphere's surface potential and the infinite medium.</summary>
internal static class HomogeneousSphere
{
    /// <summary>Leadfield [V/(A m)] on the surface of a homogeneous sphere, mean zero over it.</summary>
    /// <remarks>
    /// Gradient of Phi = [2/D + ln(2/(1 - x cos + D))]/(4 pi sigma R), D = |e - x|, the sum of (2n+1)/n x^n P_n; e.g. [Brody 1973] in this form
    /// (derived here from the generating functions of 1/D and of P_n/n).
    /// </remarks>
    /// <param name="offset">Dipole from the centre [m].</param>
    /// <param name="direction">Unit vector of the electrode.</param>
    /// <param name="radius">R [m].</param>
    /// <param name="conductivity">sigma [S/m].</param>
    public static Vec3 Leadfield(Vec3 offset, Vec3 direction, double radius, double conductivity)
    {
        Vec3 x = offset / radius, across = direction - x;
        double d = across.Norm;
        Vec3 ofInverse = across / (d * d * d);
        Vec3 ofLog = (direction + across / d) / (1 - Vec3.Dot(x, direction) + d);
        return (2 * ofInverse + ofLog) / (4 * Math.PI * conductivity * radius * radius);
    }

    /// <summary>Leadfield [V/(A m)] at <paramref name="point"/> [m] in an infinite medium, dipole at <paramref name="offset"/> [m].</summary>
    public static Vec3 InfiniteMedium(Vec3 offset, Vec3 point, double conductivity)
    {
        Vec3 d = point - offset;
        return d / (4 * Math.PI * conductivity * d.Norm * d.Norm * d.Norm);
    }
}
