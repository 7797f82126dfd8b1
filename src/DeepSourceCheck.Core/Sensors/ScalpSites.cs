using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

// Cz is the middle of the midline Nz-Cz-Iz and of the coronal curve LPA-Cz-RPA. From the middle of Nz-top-Iz on, the middle of one curve through the last Cz is the next
// one, in turn, until it moves by less than 0.01 mm (Jurcak, Tsuzuki & Dan 2007, NeuroImage 34:1600, from memory).
//
// Mastoids. The contract of the spherical head places M1 and M2 at azimuth 95 and elevation -26 degrees. The same place in terms of sites: with LPA = T9 (start of the
// coronal curve), T9h (5 % of it) and TP9 (a fifth of the way from T9 back to Iz),
//   M1 = scalp nearest to T9 + a (T9h - T9) + b (TP9 - T9),
// a and b such that on the sphere M1 lies in exactly that direction (a = 0.47, b = 0.28): behind and slightly above the preauricular point, whatever the head's shape.

/// <summary>Sites of the 10-20, 10-10 and 10-5 systems and the mastoids on the scalp of a real head.</summary>
/// <remarks>Source of the rules: Jurcak, Tsuzuki &amp; Dan 2007, NeuroImage 34:1600. Immutable.</remarks>
public sealed class ScalpSites
{
    private const double Settled = 1e-5;
    private const int MostRounds = 60;

    private readonly Dictionary<string, Vec3> _at;

    private ScalpSites(ScalpSurface scalp, HeadLandmarks landmarks, Dictionary<string, Vec3> at, ScalpCurve midline, ScalpCurve coronal) =>
        (Scalp, Landmarks, _at, MidlineLength, CoronalLength, CzOffCoronal) = (scalp, landmarks, at, midline.Length, coronal.Length, Math.Abs(coronal.MiddleShare - 0.5) * coronal.Length);

    /// <summary>The scalp.</summary>
    public ScalpSurface Scalp { get; }

    /// <summary>The landmarks that the sites were measured from.</summary>
    public HeadLandmarks Landmarks { get; }

    /// <summary>Length of the midline Nz-Cz-Iz along the scalp [m].</summary>
    public double MidlineLength { get; }

    /// <summary>Length of the curve LPA-Cz-RPA along the scalp [m].</summary>
    public double CoronalLength { get; }

    /// <summary>How far Cz is from the middle of LPA-Cz-RPA [m]: what the iteration left.</summary>
    public double CzOffCoronal { get; }

    /// <summary>Place of a site or mastoid [m]; false for unknown names.</summary>
    public bool TryPosition(string name, out Vec3 position) => _at.TryGetValue(name, out position);

    /// <summary>Finds all sites.</summary>
    /// <param name="scalp">Scalp.</param>
    /// <param name="landmarks">Landmarks on it.</param>
    /// <exception cref="InputException">The landmarks admit no curves: they are swapped, or far from where heads have them.</exception>
    public static ScalpSites Of(ScalpSurface scalp, HeadLandmarks landmarks)
    {
        (Vec3 nasion, Vec3 inion, Vec3 left, Vec3 right) = (landmarks.Nasion.Position, landmarks.Inion.Position, landmarks.Left.Position, landmarks.Right.Position);
        CheckArrangement(nasion, inion, left, right);
        Vec3 inside = Inside(scalp, nasion, inion, left, right, out Vec3 up);
        ScalpCurve Curve(Vec3 start, Vec3 through, Vec3 end) => ScalpCurve.Through(scalp, inside, start, through, end)
            ?? throw Refused("no curve over the scalp joins the landmarks as the 10-20 rules ask");

        Vec3 cz = scalp.Outermost(inside, up) ?? throw Refused("no scalp lies above the landmarks");
        for (int round = 0; round < MostRounds; round++)
        {
            Vec3 previous = cz;
            cz = Curve(nasion, cz, inion).At(0.5);
            cz = Curve(left, cz, right).At(0.5);
            if ((cz - previous).Norm < Settled)
            {
                break;
            }
        }

        ScalpCurve midline = Curve(nasion, cz, inion), coronal = Curve(left, cz, right);
        Dictionary<string, Vec3> at = TenFiveRules.Place(left, right, cz, midline, Curve);
        (double a, double b) = MastoidShares();
        at.Add("M1", scalp.Nearest(left + a * (at["T9h"] - left) + b * (at["TP9"] - left)).Point);
        at.Add("M2", scalp.Nearest(right + a * (at["T10h"] - right) + b * (at["TP10"] - right)).Point);
        return new(scalp, landmarks, at, midline, coronal);
    }

    /// <summary>The point about which outlines are followed: a third of the way from the middle of the landmarks to the top of the head (a sphere's centre, nearly).</summary>
    private static Vec3 Inside(ScalpSurface scalp, Vec3 nasion, Vec3 inion, Vec3 left, Vec3 right, out Vec3 up)
    {
        up = Vec3.Cross(right - left, nasion - inion).Unit();
        Vec3 middle = (nasion + inion + left + right) / 4;
        Vec3 top = scalp.Outermost(middle, up) ?? throw Refused("no scalp lies above the landmarks");
        return middle + (top - middle) / 3;
    }

    /// <summary>a and b of the mastoid rule: s M - T9 = a (T9h - T9) + b (TP9 - T9) on the unit sphere, by Cramer's rule.</summary>
    internal static (double A, double B) MastoidShares()
    {
        Vec3 Site(string name) => TenFiveSystem.TryDirection(name, out Vec3 d) ? d : throw new InvalidOperationException($"no site {name}");
        Vec3 t9 = Site("T9"), u = Site("T9h") - t9, v = Site("TP9") - t9, m = Site("M1");
        double det = Vec3.Dot(u, Vec3.Cross(v, -m));
        return (Vec3.Dot(-t9, Vec3.Cross(v, -m)) / det, Vec3.Dot(u, Vec3.Cross(-t9, -m)) / det);
    }

    private static void CheckArrangement(Vec3 nasion, Vec3 inion, Vec3 left, Vec3 right)
    {
        string? problem = (nasion - inion).Norm < 0.05 ? string.Create(CultureInfo.InvariantCulture, $"Nz and Iz are {Si.ToMm((nasion - inion).Norm):0} mm apart")
            : (right - left).Norm < 0.05 ? string.Create(CultureInfo.InvariantCulture, $"LPA and RPA are {Si.ToMm((right - left).Norm):0} mm apart")
            : left.X >= right.X ? "LPA lies to the right of RPA (x points to the right)"
            : nasion.Y <= inion.Y ? "Nz lies behind Iz (y points to the front)"
            : null;
        if (problem is not null)
        {
            throw Refused(problem);
        }
    }

    private static InputException Refused(string problem) => new(null, LandmarkPlacement.Key, $"{problem}; check the landmarks and the frame of the volume");
}
