using DeepSourceCheck.Core.Geometry;

using static DeepSourceCheck.Core.Heads.Voxels.Phantom.SolidDistance;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>The two hemispheres of the phantom: hull, sulci, grey ribbon.</summary>
/// <remarks>
/// Lengths in millimetres of the adult frame. Sulci are sheets of fluid that go down from the hull along lines towards a core segment in each hemisphere. A point is carried
/// along its line to the hull; the zero lines there of a smooth field with wavelengths of about two gyri meander as sulci do, and the distance to the nearest
/// is |f| / |grad f| to first order. Named sulci (Sylvian fissure with insula, central, cingulate, calcarine, parieto-occipital, superior temporal) are sheets of their own,
/// beside which the field is silent. The pial surface is the hull without the sheets; grey is a ribbon below it.
/// </remarks>
/// <param name="sulcusWidth">Width [mm] of a sulcus.</param>
internal sealed class PhantomCortex(double sulcusWidth)
{
    private const double DeepestSulcus = 20;

    private static readonly WaveField Folds = new(21, 40, 18, 26);
    private static readonly WaveField Depths = new(22, 8, 35, 70);
    private static readonly WaveField Ribbon = new(23, 8, 30, 60);
    private static readonly WaveField Gap = new(24, 8, 50, 100);
    private static readonly WaveField Wiggle = new(25, 8, 24, 45);

    private readonly double _halfWidth = sulcusWidth / 2;

    /// <summary>Distance to the hull of the hemispheres: the cavity without its lining of fluid, the fissure between them, what lies below the tentorium, and the cisterns.</summary>
    public static double Hull(Vec3 p, double cavity)
    {
        double lining = 1.3 + 0.5 * Gap.Value(p) + 0.8 * Step(40, 75, p.Z) + 0.8 * Step(75, 105, -p.Y);
        double hull = cavity + Math.Max(lining, 0.8);
        double x = Math.Abs(p.X);
        double fissure = Math.Max(x - 1.1 - 0.4 * Step(10, 60, PhantomMidline.CallosalOutline(p)), -PhantomMidline.CallosalOutline(p));
        hull = Difference(hull, fissure, 4);
        hull = Difference(hull, Math.Max(p.Z - Tentorium(p) - 0.9, p.Y - (-24 - 0.6 * Math.Max(x - 20, 0))), 5);
        return Difference(hull, PhantomMidline.Cistern(p), 3);
    }

    /// <summary>Height of the tentorium, the membrane between the hemispheres and the cerebellum.</summary>
    public static double Tentorium(Vec3 p) => -3.5 - 0.38 * Math.Abs(p.X) - 0.2 * Math.Max(-48 - p.Y, 0);

    /// <summary>Distance to the pial surface, and the thickness of the grey ribbon under it.</summary>
    /// <param name="p">Point.</param>
    /// <param name="hull">Its distance to the hull.</param>
    /// <param name="thickness">Thickness of grey matter there.</param>
    public double Pial(Vec3 p, double hull, out double thickness)
    {
        thickness = 3;
        double depth = -hull;
        if (depth < -0.5 || depth > DeepestSulcus + 6)
        {
            return hull;
        }

        // To the hull, away from the core.
        double side = p.X < 0 ? -1 : 1;
        Vec3 core = new(side * 27, Math.Clamp(p.Y, -62, 28), 10 + 0.1 * Math.Clamp(p.Y + 20, -40, 40));
        Vec3 away = p - core;
        double r = Math.Max(away.Norm, 1e-6);
        Vec3 u = away / r;
        Vec3 q = core + (r + depth) * u;

        double named = Named(p, q, depth, out double silence);
        double f = Folds.Value(q, out Vec3 g);
        Vec3 along = g - Vec3.Dot(g, u) * u;
        double shrink = r / (r + Math.Max(depth, 0));
        double across = f / Math.Sqrt(Vec3.Dot(along, along) + 1e-3) * shrink;
        double reach = Math.Clamp(14.5 + 4.5 * Depths.Value(q), 3, DeepestSulcus) * silence;
        double sheet = reach < 2 ? double.PositiveInfinity : Sheet(across, depth, reach);
        thickness = Math.Clamp(2.9 + 0.3 * Ribbon.Value(q), 2.5, 3.6);
        return Difference(hull, Math.Min(sheet, named), 1.8);
    }

    private double Sheet(double across, double depth, double reach)
    {
        double below = Math.Max(depth - reach, 0);
        return Math.Sqrt(across * across + below * below) - _halfWidth;
    }

    /// <summary>Distance to the named sulci; the silence of the field beside them is 0 near and 1 away.</summary>
    private double Named(Vec3 p, Vec3 q, double depth, out double silence)
    {
        double x = Math.Abs(p.X), qx = Math.Abs(q.X), wiggle = Wiggle.Value(q);
        double nearest = double.PositiveInfinity, d = double.PositiveInfinity;

        // How far outside its stretch of the surface a sulcus is makes its end round.
        void Add(double across, double reach, double outside)
        {
            double away = Math.Sqrt(across * across + Square(Math.Max(outside, 0)));
            nearest = Math.Min(nearest, away);
            d = Math.Min(d, Sheet(away, depth, reach));
        }

        // Sylvian fissure: from the side inwards, then up and down over the insula.
        double rise = p.Z - SylvianHeight(p.Y) - 1.2 * wiggle, sylvian = rise / 1.08;
        if (x > 24 && p.Y is > -50 and < 36)
        {
            double span = Math.Max(Math.Max(36.5 + 0.004 * Square(p.Y) - x, p.Y - 24), -38 - p.Y);
            double fissure = Math.Max(Math.Abs(sylvian) - _halfWidth - 0.8 * Step(-5, 20, p.Y), span);
            double insula = Math.Max(Math.Max(Math.Abs(x - 37.5 - 0.004 * Square(p.Y)) - _halfWidth, Math.Abs(rise) - 12), Math.Max(p.Y - 22, -24 - p.Y));
            d = Math.Min(d, Math.Min(fissure, insula));
            nearest = Math.Min(nearest, Math.Min(Math.Max(Math.Abs(sylvian), span), Math.Max(Math.Abs(x - 37) - 2, Math.Abs(sylvian) - 12)));
        }

        double medial = qx - 14;
        Add((q.Y + 36 - 0.42 * (78 - q.Z) + 2.5 * wiggle) / 1.08, 17, Math.Max(14 - qx, 16 - q.Z));
        Add((q.Z - SylvianHeight(q.Y) + 17 + 1.5 * wiggle) / 1.08, 14, Math.Max(42 - qx, Math.Max(-58 - q.Y, q.Y - 14)));
        Add(PhantomMidline.CallosalOutline(q) - 13 + 1.5 * wiggle, 10, Math.Max(medial, Math.Max(-4 - q.Z, -34 - q.Y)));
        Add(q.Z - 4 - 0.06 * (q.Y + 80) + 1.5 * wiggle, 16, Math.Max(medial, q.Y + 58));
        Add((q.Y + 66 + 0.55 * (q.Z - 6) + 1.5 * wiggle) / 1.14, 13, Math.Max(medial, 6 - q.Z));
        silence = Step(3.5, 7.5, nearest);
        return d;
    }

    private static double SylvianHeight(double y) => -6 - 0.42 * (y - 12) + 0.5 * Math.Max(-22 - y, 0);

    private static double Square(double x) => x * x;
}
