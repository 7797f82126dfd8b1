using DeepSourceCheck.Core.Geometry;

using static DeepSourceCheck.Core.Heads.Voxels.Phantom.SolidDistance;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>Grey nuclei of the phantom and the region that each belongs to.</summary>
/// <remarks>
/// Ellipsoids in the adult frame; places and sizes are handbook knowledge rounded to half a millimetre, and stand near those of the region library. Earlier ones win: small
/// nuclei stand before the structures that hold them.
/// </remarks>
internal static class PhantomNuclei
{
    private static readonly Nucleus[] All =
    [
        new("inferior-colliculus", new(6, -33, -11), new(3.3, 3.3, 3.3), Vec3.Zero),
        new("superior-colliculus", new(6, -30, -4), new(3.6, 3.1, 4.1), Vec3.Zero),
        new("red-nucleus", new(5, -20, -8), new(3.8, 4.2, 4.5), Vec3.Zero),
        new("subthalamic-nucleus", new(11, -14, -7), new(2.4, 3.1, 4.6), new(25, 30, 0)),
        new("substantia-nigra", new(10.5, -16.5, -10), new(3.2, 6.5, 6.5), new(0, 0, 35)),
        new("medial-geniculate", new(15, -25, -6), new(2.7, 3.1, 3.1), Vec3.Zero),
        new("lateral-geniculate", new(23, -25, -6), new(2.9, 2.9, 2.9), Vec3.Zero),
        new("cochlear-nucleus", new(10, -39, -45), new(1.6, 4, 2), Vec3.Zero),
        new("accumbens", new(10, 10.5, -8), new(4.7, 6.2, 5.2), Vec3.Zero),
        new("pallidum", new(19.5, -1.5, 0), new(5.5, 10, 7), new(0, 5, 35)),
        new("thalamus", new(12, -18, 7.5), new(10.2, 15.2, 11.2), new(10, 0, 25)),
        new("caudate", new(13, 11, 9.5), new(5.2, 18.2, 10.2), new(-45, 20, -10)),
        new("putamen", new(25.5, 3.5, 2), new(6, 17, 11.5), new(-15, 0, 20)),
        new("amygdala", new(24.5, -2.5, -18), new(7.2, 7.7, 7.2), Vec3.Zero),
        new("hippocampus", new(28, -21.5, -12), new(7.2, 20.2, 6.2), new(-40, 10, -10)),
    ];

    /// <summary>Number of nuclei of one side.</summary>
    public static int Count => All.Length;

    /// <summary>Structures in the order of their labels.</summary>
    public static IEnumerable<string> Structures => All.Select(n => n.Structure);

    /// <summary>Index of the nucleus that holds a point, or -1. The sides are told apart by the caller.</summary>
    public static int At(Vec3 p)
    {
        Vec3 a = p with { X = Math.Abs(p.X) };
        if (a.X > 45 || a.Y is < -60 or > 40 || a.Z is < -52 or > 42)
        {
            return -1;
        }

        for (int n = 0; n < All.Length; n++)
        {
            if (All[n].Holds(a))
            {
                return n;
            }
        }

        return -1;
    }

    private sealed class Nucleus(string structure, Vec3 centre, Vec3 semiAxes, Vec3 degrees)
    {
        private readonly Rotation _rotation = Rotation.FromFixedAxes(degrees.X * Math.PI / 180, degrees.Y * Math.PI / 180, degrees.Z * Math.PI / 180);
        private readonly double _reach = Math.Max(semiAxes.X, Math.Max(semiAxes.Y, semiAxes.Z));

        public string Structure => structure;

        public bool Holds(Vec3 a)
        {
            Vec3 v = a - centre;
            return Math.Abs(v.X) < _reach && Math.Abs(v.Y) < _reach && Math.Abs(v.Z) < _reach && Ellipsoid(_rotation.ApplyInverse(v), semiAxes) <= 0;
        }
    }
}
