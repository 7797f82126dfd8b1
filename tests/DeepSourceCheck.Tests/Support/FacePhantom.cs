using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Tests.Support;

/// <summary>An ellipsoid with a nose, a neck and two ear pits, of any size and orientation. Its landmarks follow from its equations.</summary>
internal sealed class FacePhantom
{
    private static readonly Vec3 Axes = new(0.076, 0.098, 0.100), NoseCentre = new(0, 0.088, -0.058), NoseAxes = new(0.014, 0.026, 0.020);
    private const double EarY = -0.004, EarZ = -0.055, EarRadius = 0.008;

    private readonly Rotation _turn;
    private readonly bool _face;

    /// <param name="scale">Size; 1 is 196 mm long.</param>
    /// <param name="turn">How the head is turned in the world.</param>
    /// <param name="face">False: without nose and ears.</param>
    public FacePhantom(double scale, Rotation? turn = null, bool face = true) => (Scale, _turn, _face) = (scale, turn ?? Rotation.Identity, face);

    public double Scale { get; }

    /// <summary>Length of the head [m].</summary>
    public double Length => 2 * Axes.Y * Scale;

    /// <summary>Where the profile of the nose leaves that of the head [m].</summary>
    public Vec3 Nasion
    {
        get
        {
            double z = 0;
            while (Profile(NoseCentre.Y, NoseAxes.Y, (z - NoseCentre.Z) / NoseAxes.Z) is var nose && !(nose > Profile(0, Axes.Y, z / Axes.Z)))
            {
                z -= 1e-5;
            }

            return World(new(0, Profile(0, Axes.Y, z / Axes.Z), z));
        }
    }

    /// <summary>The back of the head at the elevation of the spherical heads' inion, -14 degrees [m].</summary>
    public Vec3 Inion => World(OnHead(new(0, -Math.Cos(14 * Math.PI / 180), -Math.Sin(14 * Math.PI / 180))));

    /// <summary>A fortieth of the head's length in front of the pit's front edge, level with its top [m].</summary>
    public Vec3 Preauricular(int side)
    {
        double y = EarY + EarRadius + 0.025 * 2 * Axes.Y, z = EarZ + EarRadius;
        return World(new(side * Axes.X * Math.Sqrt(1 - y * y / (Axes.Y * Axes.Y) - z * z / (Axes.Z * Axes.Z)), y, z));
    }

    /// <summary>The volume.</summary>
    /// <param name="voxel">Edge of its voxels [m].</param>
    /// <param name="map">World place to the place of the phantom's world, for frames that contradict.</param>
    public TissueVolume Volume(double voxel, Func<Vec3, Vec3>? map = null) =>
        LabelledHeads.Of(voxel, 0.125 * Scale, p => Holds(_turn.ApplyInverse(map is null ? p : map(p)) / Scale) ? 1 : 0);

    private bool Holds(Vec3 q)
    {
        bool neck = q.Z < -0.05 && q.X * q.X + (q.Y + 0.02) * (q.Y + 0.02) < 0.055 * 0.055;
        bool nose = _face && Quadric(q - NoseCentre, NoseAxes) < 1;
        double x = Axes.X * Math.Sqrt(1 - EarY * EarY / (Axes.Y * Axes.Y) - EarZ * EarZ / (Axes.Z * Axes.Z));
        bool pit = _face && (q - new Vec3(Math.CopySign(x, q.X), EarY, EarZ)).Norm < EarRadius;
        return (Quadric(q, Axes) < 1 || neck || nose) && !pit;
    }

    private Vec3 World(Vec3 q) => _turn.Apply(Scale * q);

    private static Vec3 OnHead(Vec3 direction) => direction / Math.Sqrt(Quadric(direction, Axes));

    private static double Quadric(Vec3 q, Vec3 axes) => Math.Pow(q.X / axes.X, 2) + Math.Pow(q.Y / axes.Y, 2) + Math.Pow(q.Z / axes.Z, 2);

    private static double Profile(double middle, double reach, double z) => middle + reach * Math.Sqrt(1 - z * z);
}
