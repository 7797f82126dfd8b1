using DeepSourceCheck.Core.Geometry;

using static DeepSourceCheck.Core.Heads.Voxels.Phantom.SolidDistance;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>The phantom's cranial cavity, bone, air and outer surface, in millimetres of the adult frame (x right, y front, z up, MNI-like).</summary>
/// <remarks>
/// Invented from ellipsoids and capsules; no head was traced. Thickness follows what is commonly known of adult skulls (from memory: mean about 6 mm, thinnest at the temporal
/// squama with 2 to 3 mm, thickest at the occiput with 8 to 9 mm).
/// </remarks>
/// <param name="kind">Adult or neonate.</param>
/// <param name="thinnest">Smallest thickness of bone [mm] that the voxels can hold closed.</param>
/// <param name="table">Thickness [mm] below which a layer of compact bone would be lost between voxels.</param>
internal sealed class PhantomSkull(PhantomKind kind, double thinnest, double table)
{
    private static readonly WaveField Bumps = new(11, 8, 45, 90);
    private static readonly WaveField Skin = new(12, 8, 50, 110);
    // Half-axes of the rhombus [mm in life], and its place along the midline [mm of the adult frame].
    private const double FontanelleAcross = 9, FontanelleAlong = 12, FontanelleY = 20;

    private static readonly Vec3 Centre = new(0, -18, 5);

    private readonly double _outerTable = Math.Max(1.9, table), _innerTable = Math.Max(1.5, table);

    /// <summary>Distance to the inner surface of the skull; the spinal canal belongs to the inside.</summary>
    /// <param name="p">Point.</param>
    /// <param name="smoothed">Distance to the same space with its waists filled, as the outer table fills them.</param>
    public static double Cavity(Vec3 p, out double smoothed)
    {
        double x = Math.Abs(p.X);
        Vec3 a = p with { X = x };
        double t = Math.Clamp((p.Y + 17) / 89, -1.2, 1.2);
        double width = 1.02 - 0.07 * t - 0.07 * t * t;
        double d = Ellipsoid(new(x / width, p.Y + 17, p.Z - 8), new(68, 87, p.Z > 8 ? 71 : 40));
        d = Union(d, Ellipsoid(a - new Vec3(0, 36, -4), new(44, 35, 23)), 12);
        double temporal = Ellipsoid(a - new Vec3(38, -12, -22), new(28, 37, 26));
        double posterior = Ellipsoid(a - new Vec3(0, -60, -36), new(51, 37.5, 30.5));
        smoothed = Union(Union(d, temporal, 10), posterior, 28);
        d = Union(Union(d, temporal, 9), posterior, 7);
        d = Union(d, Ellipsoid(a - new Vec3(0, -27, -34), new(20, 17.5, 33)), 7);
        d = Union(d, Capsule(p, new(0, -37, -54), new(0, -44, -76), 15, 13), 8);
        d = Union(d, Capsule(p, new(0, -44, -74), new(0, -52, -150), 11.5, 10.5), 5);
        d = Difference(d, Petrous(a), 7);
        smoothed = Math.Min(smoothed, d);
        return d;
    }

    /// <summary>Whether a point above the ears lies far outside the vault; a cheap test that spares the shapes.</summary>
    public static bool IsFarAbove(Vec3 p) => p.Z > 0 && Square(p.X / 88) + Square((p.Y + 14) / 112) + Square(p.Z / 100) > 1.1;

    /// <summary>Distance to the petrous ridge, the dense bone between the middle and the posterior fossa.</summary>
    public static double Petrous(Vec3 p) => Capsule(p with { X = Math.Abs(p.X) }, new(24, -16, -49), new(60, -42, -43), 5, 8);

    /// <summary>Thickness of the cranial bone [mm of the adult frame] by direction.</summary>
    public double Thickness(Vec3 p)
    {
        Vec3 u = (p - Centre).Unit();
        double bumps = Bumps.Value(80 * u);
        if (kind == PhantomKind.Neonate)
        {
            return Math.Max(thinnest, (1.5 + 0.2 * bumps) / kind.Scale());
        }

        double side = Math.Abs(u.X);
        double occiput = Step(0.45, 0.95, -u.Y) * Step(-0.75, -0.1, u.Z);
        double squama = Math.Exp(-7 * (Square(side - 0.96) + Square(u.Y - 0.1) + Square(u.Z + 0.15)));
        double forehead = Step(0.6, 0.95, u.Y);
        double brow = Math.Exp(-14 * (0.6 * u.X * u.X + Square(u.Z + 0.22))) * Step(0, 0.5, u.Y);
        double bottom = Step(0.45, 0.8, -u.Z);
        double t = 5.7 + 2.2 * occiput - 3.8 * squama + 0.8 * forehead - 0.4 * bottom + 0.5 * bumps;
        return Math.Max(thinnest, Math.Clamp(t, 2.5, 9.2) + 4.5 * brow);
    }

    /// <summary>Distance to the surface of all bone, facial bone and the first vertebrae included; the cavity is not cut out.</summary>
    /// <param name="p">Point.</param>
    /// <param name="smoothed">Its distance to the smoothed cavity.</param>
    /// <param name="thickness">Thickness of the cranial bone there.</param>
    public static double Bone(Vec3 p, double smoothed, double thickness)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        double cranial = Cranial(p, smoothed, thickness);
        double d = Union(cranial, Petrous(a) - 4.5, 4);
        d = Union(d, Ellipsoid(a - new Vec3(59, -44, -52), new(12, 15, 17)), 5);
        d = Union(d, Ellipsoid(a - new Vec3(0, 9, -42), new(25, 22, 15)), 6);

        // Face: upper jaw and cheek bones, without the orbits.
        double face = Union(Ellipsoid(a - new Vec3(0, 46, -62), new(36, 31, 36)), Capsule(a, new(38, 56, -58), new(66, 22, -50), 7, 5), 8);
        face = Difference(face, Ellipsoid(a - new Vec3(31, 56, -34), new(18, 27, 16)), 3);
        d = Union(d, face, 3);

        // Vertebrae below a gap: there the canal's fluid meets the soft tissue of the neck.
        double vertebra = Intersection(
            Math.Sqrt(a.X * a.X * 0.45 + Square(p.Y + 40 - 0.1 * (p.Z + 80))) - 20, p.Z + 82, 3);
        return Math.Min(d, vertebra);
    }

    /// <summary>Distance to air inside the head: frontal, sphenoid and maxillary sinuses, nasal cavity.</summary>
    public double Air(Vec3 p, double cavity, double bone)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        double wall = Math.Max(2.6, thinnest / 1.6);
        double inBone = Math.Max(wall - cavity, bone + wall);
        double sinuses = Math.Min(
            Ellipsoid(a - new Vec3(12, 76, -14), new(13, 9, 12)),
            Ellipsoid(a - new Vec3(6, 13, -41), new(9, 12, 9)));
        sinuses = Math.Min(sinuses, Ellipsoid(a - new Vec3(24, 47, -66), new(11, 15, 15)));
        double nasal = Math.Max(Ellipsoid(a - new Vec3(8, 54, -66), new(6.5, 25, 17)), wall - cavity);
        return kind == PhantomKind.Neonate ? nasal : Math.Min(Math.Max(sinuses, inBone), nasal);
    }

    /// <summary>Distance to the head's outer surface: skin over bone, face, nose, ears and neck.</summary>
    public static double Outer(Vec3 p, double smoothed, double thickness)
    {
        Vec3 u = (p - Centre).Unit();
        double skin = 5.2 + 0.7 * Skin.Value(80 * u) + 4.5 * Math.Exp(-7 * (Square(Math.Abs(u.X) - 0.86) + Square(u.Y - 0.28) + Square(u.Z + 0.35)));
        double d = Cranial(p, smoothed, thickness) - skin;
        d = Union(d, Face(p), 10);
        return Union(d, Neck(p), 22);
    }

    /// <summary>Whether a point lies so far from head, face and neck that it can only be air.</summary>
    public static bool IsFar(Vec3 p, double smoothed) => smoothed > 30 && Face(p) > 9 && Neck(p) > 9;

    /// <summary>Whether a point of the skull lies in the anterior fontanelle.</summary>
    /// <remarks>
    /// A rhombus about the place where a newborn's frontal and parietal bones meet, 24 mm along the midline and 18 mm across in life: a mean of 21 mm, as is commonly found at birth (from
    /// memory). Invented; its membrane is as thick as the bone around it.
    /// </remarks>
    public bool IsFontanelle(Vec3 p) =>
        kind == PhantomKind.Neonate && p.Z > 50 && kind.Scale() * (Math.Abs(p.X) / FontanelleAcross + Math.Abs(p.Y - FontanelleY) / FontanelleAlong) < 1;

    /// <summary>Whether a point inside bone is spongy: between the tables, and not in the dense petrous ridge.</summary>
    public bool IsSpongy(Vec3 p, double cavity, double bone) =>
        kind.HasSpongyBone() && cavity > _innerTable && -bone > _outerTable && Petrous(p) > 0;

    private static double Cranial(Vec3 p, double smoothed, double thickness) => Intersection(smoothed - thickness, -72.5 - 0.12 * (p.Y + 44) - p.Z, 4);

    private static double Face(Vec3 p)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        double d = Union(Ellipsoid(a - new Vec3(0, 33, -66), new(67, 53, 70)), Capsule(p, new(0, 82, -45), new(0, 97, -68), 4, 9), 7);
        Vec3 ear = a - new Vec3(83, -33, -38);
        return Math.Min(d, Ellipsoid(new(ear.X + 0.42 * ear.Y, ear.Y, ear.Z + 0.25 * ear.Y), new(4.5, 15, 27)));
    }

    private static double Neck(Vec3 p)
    {
        double y = p.Y + 37 - 0.16 * (p.Z + 70);
        return Intersection(Ellipsoid(new(p.X, y, 0), new(64, 64, 1e4)), p.Z + 30, 20);
    }

    private static double Square(double x) => x * x;
}
