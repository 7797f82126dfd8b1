using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>Nasion, inion and preauricular points of the phantom, by bisection of its outer surface.</summary>
internal static class PhantomLandmarks
{
    private const double Step = 0.5;

    /// <summary>Nz, Iz, LPA, RPA [m]. Nasion: the deepest point of the midline profile between forehead and nose; inion: the midline at the occipital bone's lower end of convexity.</summary>
    public static IReadOnlyDictionary<string, Vec3> Of(PhantomKind kind)
    {
        var skull = new PhantomSkull(kind, 0, 0);
        double Outer(Vec3 p)
        {
            PhantomSkull.Cavity(p, out double smoothed);
            return PhantomSkull.Outer(p, smoothed, skull.Thickness(p));
        }

        Vec3 Skin(Vec3 from, Vec3 direction)
        {
            double far = 0;
            while (Outer(from + far * direction) > 0)
            {
                far += Step;
            }

            double near = far - Step;
            for (int n = 0; n < 40; n++)
            {
                double middle = (near + far) / 2;
                (near, far) = Outer(from + middle * direction) > 0 ? (middle, far) : (near, middle);
            }

            return from + far * direction;
        }

        Vec3 nasion = new(0, double.PositiveInfinity, 0);
        for (double z = -55; z <= -20; z += Step)
        {
            Vec3 skin = Skin(new(0, 130, z), new(0, -1, 0));
            nasion = skin.Y < nasion.Y ? skin : nasion;
        }

        double scale = kind.Scale();
        Vec3 InMetres(Vec3 p) => PhantomHead.ScalingCentre + scale * (p / 1000 - PhantomHead.ScalingCentre);
        return new Dictionary<string, Vec3>
        {
            ["Nz"] = InMetres(nasion),
            ["Iz"] = InMetres(Skin(new(0, -150, -22), new(0, 1, 0))),
            ["LPA"] = InMetres(Skin(new(-120, -13, -46), new(1, 0, 0))),
            ["RPA"] = InMetres(Skin(new(120, -13, -46), new(-1, 0, 0))),
        };
    }
}
