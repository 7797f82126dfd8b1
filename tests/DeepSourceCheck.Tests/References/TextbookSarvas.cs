using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Tests.References;

/// <summary>
/// The slow plain twin of the MEG kernel: the field vector of one dipole at one point as [Sarvas 1987] eq. 25 prints it, then the component. Never to be made fast.
/// </summary>
internal static class TextbookSarvas
{
    /// <summary>B [T] at <paramref name="r"/> [m] of moment <paramref name="q"/> [A m] at <paramref name="r0"/> [m]; positions from the centre.</summary>
    public static Vec3 Field(Vec3 r, Vec3 r0, Vec3 q)
    {
        Vec3 difference = r - r0;
        double a = difference.Norm, rr = r.Norm;
        double f = a * (rr * a + rr * rr - Vec3.Dot(r0, r));
        Vec3 gradient = (a * a / rr + Vec3.Dot(difference, r) / a + 2 * a + 2 * rr) * r - (a + 2 * rr + Vec3.Dot(difference, r) / a) * r0;
        Vec3 cross = Vec3.Cross(q, r0);
        return 1e-7 / (f * f) * (f * cross - Vec3.Dot(cross, r) * gradient);
    }

    /// <summary>Biot-Savart field [T] of the current element alone, without the conductor's return currents.</summary>
    public static Vec3 PrimaryField(Vec3 r, Vec3 r0, Vec3 q)
    {
        Vec3 difference = r - r0;
        double a = difference.Norm;
        return 1e-7 / (a * a * a) * Vec3.Cross(q, difference);
    }

    /// <summary>Reading of a channel [T or T/m] for a dipole at <paramref name="position"/> [m].</summary>
    public static double Channel(MegChannel channel, Vec3 centre, Vec3 position, Vec3 q) =>
        channel.Points.Sum(p => p.Share * Vec3.Dot(p.Axis, Field(p.Position - centre, position - centre, q)));
}
