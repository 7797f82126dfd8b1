using DeepSourceCheck.Core.Geometry;

using static DeepSourceCheck.Core.Heads.Voxels.Phantom.SolidDistance;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>Ventricles, cisterns, corpus callosum and brainstem of the phantom: distances [mm] in the adult frame.</summary>
internal static class PhantomMidline
{
    private static readonly (Vec3 Place, double Radius)[] Body =
    [
        (new(7, 33, 3), 2), (new(7.5, 26, 9), 4), (new(8.5, 8, 19), 5), (new(11, -12, 22), 4.8), (new(17, -30, 19), 5.5), (new(25, -43, 11), 7.5),
    ];

    private static readonly (Vec3 Place, double Radius)[] OccipitalHorn = [(new(25, -43, 11), 7.5), (new(24, -60, 8), 4.5), (new(21, -76, 6), 1.5)];
    private static readonly (Vec3 Place, double Radius)[] TemporalHorn = [(new(25, -43, 11), 7.5), (new(34, -35, -3), 4), (new(36, -20, -13), 2.6), (new(32, -7, -18), 1.8)];

    /// <summary>The lateral ventricles: frontal horn, body, atrium, occipital and temporal horn of each side.</summary>
    public static double LateralVentricle(Vec3 p)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        if (a.X > 44 || p.Y is < -80 or > 38 || p.Z is < -24 or > 32)
        {
            return double.PositiveInfinity;
        }

        return Math.Min(Tube(a, Body), Math.Min(Tube(a, OccipitalHorn), Tube(a, TemporalHorn)));
    }

    /// <summary>Third ventricle with the foramina that join it to the lateral ones, aqueduct and fourth ventricle.</summary>
    public static double MidlineVentricles(Vec3 p)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        if (a.X > 16)
        {
            return double.PositiveInfinity;
        }

        double third = Ellipsoid(p - new Vec3(0, -12, 2), new(2.4, 17, 12));
        double foramen = Capsule(a, new(0, 2, 9), new(8.5, 6, 16), 1.6, 1.6);
        double aqueduct = Math.Min(Capsule(p, new(0, -27, -1), new(0, -31.5, -11), 1.3, 1.2), Capsule(p, new(0, -31.5, -11), new(0, -40, -27), 1.2, 1.6));
        double fourth = Ellipsoid(new(p.X, p.Y + 45 - 0.25 * (p.Z + 38), p.Z + 38), new(8, 4.5, 13));

        // The outlet to the cistern behind the medulla.
        double outlet = Capsule(p, new(0, -46, -48), new(0, -54, -60), 2.2, 3);
        return Math.Min(Math.Min(third, foramen), Math.Min(aqueduct, Math.Min(fourth, outlet)));
    }

    /// <summary>Distance, in the sagittal plane, to the outline over which the corpus callosum arches.</summary>
    public static double CallosalOutline(Vec3 p) => Ellipsoid(new(0, p.Y + 4, p.Z - 5), new(1e4, 37, 23));

    /// <summary>The corpus callosum: a band of white matter under the outline, from front (genu) to back (splenium).</summary>
    public static double Callosum(Vec3 p)
    {
        double e = CallosalOutline(p);
        double thickness = 5.5 + 3 * Step(20, 32, p.Y) + 3 * Step(-30, -38, p.Y);
        double band = Math.Max(e, -(e + thickness));
        return Math.Max(Intersection(band, Math.Abs(p.X) - 18, 6), 1 - p.Z);
    }

    /// <summary>Fluid around the brainstem and in the notch behind it.</summary>
    public static double Cistern(Vec3 p)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        double ambient = Union(Ellipsoid(p - new Vec3(0, -25, -24), new(19, 19, 19)), Ellipsoid(p - new Vec3(0, -43, -6), new(13, 9, 9)), 6);
        double pontine = Union(ambient, Ellipsoid(a - new Vec3(0, -31, -46), new(19.5, 17.5, 29)), 6);
        return Union(pontine, Ellipsoid(p - new Vec3(0, 3, -20), new(11, 9, 6)), 6);
    }

    /// <summary>Brainstem with its peduncles, continued as spinal cord.</summary>
    public static double Brainstem(Vec3 p)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        double d = Union(Midbrain(p), Pons(p), 4);
        d = Union(d, Medulla(p), 4);
        d = Union(d, Capsule(a, new(8, -19, -10), new(17, -13, 3), 7, 8), 4);
        d = Union(d, Capsule(a, new(10, -29, -34), new(25, -51, -37), 9.5, 8), 4);
        d = Union(d, Capsule(a, new(8, -39, -52), new(17, -48, -39), 6.5, 6), 3);
        d = Union(d, Capsule(a, new(10, -32, -34), new(8, -31, -17), 4.6, 4.6), 3);
        d = Union(d, Capsule(a, new(5, -36, -18), new(13, -52, -30), 3.5, 4), 3);
        return Union(d, Capsule(p, new(0, -44, -64), new(0, -51, -150), 6.5, 5.5), 4);
    }

    /// <summary>Whether a point of the brainstem is grey: around aqueduct and fourth ventricle, in the olives and nuclei of the pons, in the middle of the cord.</summary>
    /// <param name="p">Point.</param>
    /// <param name="ventricles">Its distance to the midline ventricles.</param>
    /// <param name="stem">Its distance to the brainstem's surface, negative.</param>
    public static bool IsGrey(Vec3 p, double ventricles, double stem)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        return (ventricles < 2.5 && stem < -1.5)
            || Ellipsoid(a - new Vec3(5, -32, -55), new(2.6, 3, 6.5)) < 0
            || Ellipsoid(a - new Vec3(6, -18, -33), new(4.5, 3, 9)) < 0
            || (p.Z < -62 && stem < -3.6);
    }

    /// <summary>The midbrain.</summary>
    public static double Midbrain(Vec3 p) => Tilted(p, new(0, -24, -11.5), new(15, 12, 10.5), -18);

    /// <summary>The pons.</summary>
    public static double Pons(Vec3 p) => Tilted(p, new(0, -25.5, -32.5), new(16.4, 13.9, 16.4), -15);

    /// <summary>The medulla.</summary>
    public static double Medulla(Vec3 p) => Tilted(p, new(0, -39, -55), new(9.4, 9.4, 14.4), -18);

    private static double Tilted(Vec3 p, Vec3 centre, Vec3 semiAxes, double degreesAboutX)
    {
        (double sin, double cos) = Math.SinCos(degreesAboutX * Math.PI / 180);
        Vec3 v = p - centre;
        return Ellipsoid(new(v.X, cos * v.Y + sin * v.Z, cos * v.Z - sin * v.Y), semiAxes);
    }

    private static double Tube(Vec3 a, (Vec3 Place, double Radius)[] knots)
    {
        double d = double.PositiveInfinity;
        for (int k = 1; k < knots.Length; k++)
        {
            d = Math.Min(d, Capsule(a, knots[k - 1].Place, knots[k].Place, knots[k - 1].Radius, knots[k].Radius));
        }

        return d;
    }
}
