using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

public class ScalpSurfaceTests
{
    private static readonly Vec3 Centre = new(0.0013, -0.0027, 0.0041);
    private const double Radius = 0.092;

    // What the class states of labelled spheres of 92 mm, rounded up. The level set of a smoothed staircase cannot do better than a part of a voxel.
    [Theory]
    [InlineData(0.002, false)]
    [InlineData(0.002, true)]
    [InlineData(0.004, false)]
    public void Sphere_IsReproducedWithinTheStatedErrors(double voxel, bool oblique)
    {
        double rmsAllowed = 0.10 * voxel, worstAllowed = 0.5 * voxel;
        const double NormalRmsDeg = 4.5, Count = 1000;
        Rotation? turned = oblique ? Rotation.FromFixedAxes(0.3, -0.5, 0.7) : null;
        ScalpSurface scalp = ScalpSurface.Of(LabelledHeads.Sphere(voxel, Centre, turned: turned));
        double squares = 0, worst = 0, angles = 0;
        for (int k = 0; k < Count; k++)
        {
            Vec3 direction = GoldenSpiral.Point(k, (int)Count);
            Vec3 point = scalp.Outermost(Centre, direction)!.Value;
            double error = (point - Centre).Norm - Radius;
            (squares, worst) = (squares + error * error, Math.Max(worst, Math.Abs(error)));
            angles += Math.Pow(TestHeads.AngleDeg(scalp.Normal(point), direction), 2);
        }

        Assert.InRange(Math.Sqrt(squares / Count), 0, rmsAllowed);
        Assert.InRange(worst, 0, worstAllowed);
        Assert.InRange(Math.Sqrt(angles / Count), 0, NormalRmsDeg);

        // A staircase of voxels leaves a smooth sphere by a quarter of a voxel rms and less than the voxel's diagonal.
        Assert.InRange(scalp.FaceDeviation, 0.05 * voxel, 0.35 * voxel);
        Assert.InRange(scalp.LargestFaceDeviation, scalp.FaceDeviation, 0.87 * voxel);
    }

    [Theory]
    [InlineData(0.060)]
    [InlineData(0.005)]
    [InlineData(-0.005)]
    [InlineData(-0.030)]
    public void Nearest_OfASphere_IsTheRadialDistance(double outside)
    {
        const double Voxel = 0.002;
        ScalpSurface scalp = ScalpSurface.Of(LabelledHeads.Sphere(Voxel, Centre));
        for (int k = 0; k < 40; k++)
        {
            Vec3 direction = GoldenSpiral.Point(k, 40), point = Centre + (Radius + outside) * direction;
            (Vec3 foot, double distance) = scalp.Nearest(point);
            Assert.InRange(distance - outside, -0.5 * Voxel, 0.5 * Voxel);
            RelativeAssert.Equal(Math.Abs(distance), (foot - point).Norm, 1e-12);
            Assert.Equal(outside < 0, scalp.Contains(point));

            // Slow twin: no sample of the surface is nearer, but for the thickness of a sample's own error.
            double nearest = double.PositiveInfinity;
            foreach (Vec3 sample in scalp.Samples)
            {
                nearest = Math.Min(nearest, (sample - point).Norm);
            }

            Assert.InRange(nearest - Math.Abs(distance), -1e-6, 0.0007);
        }
    }

    [Fact]
    public void CavitiesBehindNarrowPassages_AreInside()
    {
        // A sinus of 12 mm opens to the front by a nostril of 4 mm; an open hollow as wide as an eye's stays outside.
        Vec3 sinus = new(0, 0.055, -0.02), eye = new(0.035, 0.085, 0);
        TissueVolume volume = LabelledHeads.Of(0.002, 0.104, p =>
            (p - Vec3.Zero).Norm >= Radius || (p - sinus).Norm < 0.012 || (p - eye).Norm < 0.016
            || (p.Y > sinus.Y && Math.Sqrt(p.X * p.X + (p.Z - sinus.Z) * (p.Z - sinus.Z)) < 0.002) ? 0 : 1);
        ScalpSurface scalp = ScalpSurface.Of(volume);
        Assert.Equal(TissueKind.Air, volume.At(sinus).Kind);
        Assert.True(scalp.Contains(sinus));
        Assert.False(scalp.Contains(eye));
        Assert.InRange(scalp.Nearest(sinus).SignedDistance, -0.045, -0.020);
    }

    [Fact]
    public void Windpipe_ThatTheNecksCutOpens_IsInside()
    {
        // The volume ends 40 mm below the centre; a windpipe of 16 mm ends there too.
        double end = -0.040;
        VoxelGrid grid = new(104, 104, 72, new Affine(new(0.002, 0, 0), new(0, 0.002, 0), new(0, 0, 0.002), new(-0.103, -0.103, end + 0.001)));
        byte[] cells = [.. Enumerable.Range(0, grid.Count).Select(at =>
        {
            (int i, int j, int k) = grid.Voxel(at);
            Vec3 p = grid.Centre(i, j, k);
            bool pipe = p.Z < 0 && Math.Sqrt(p.X * p.X + (p.Y - 0.02) * (p.Y - 0.02)) < 0.008;
            return (byte)(p.Norm < Radius && !pipe ? 1 : 0);
        })];
        ScalpSurface scalp = ScalpSurface.Of(new(grid, cells, LabelledHeads.Tissues));
        Assert.Equal([4], scalp.CutFaces);
        Assert.True(scalp.Contains(new(0, 0.02, -0.02)));
        Assert.True(scalp.Contains(new(0, 0.02, -0.034)));
        Assert.False(scalp.Contains(new(0, 0, end - 0.003)));
        Assert.True(scalp.IsOnCut(scalp.Nearest(new(0.03, 0, end - 0.01)).Point));
        Assert.False(scalp.IsOnCut(scalp.Nearest(new(0, 0, 0.1)).Point));
        Assert.False(scalp.Contains(new(0.098, 0, 0)));
    }

    // A flap of 5 mm that stands off the side like an auricle, with a wedge of air behind it.
    [Theory]
    [InlineData(0.001)]
    [InlineData(0.002)]
    public void Auricle_IsLeftOut(double voxel)
    {
        Vec3 root = new(0.090, 0, 0), along = new Vec3(0.6, -0.8, 0), across = new Vec3(0.8, 0.6, 0);
        bool Flap(Vec3 p) => Math.Abs(Vec3.Dot(p - root, across)) < 0.0025 && Vec3.Dot(p - root, along) is > -0.01 and < 0.025 && Math.Abs(p.Z) < 0.03;
        TissueVolume volume = LabelledHeads.Of(voxel, 0.110, p => p.Norm < Radius || Flap(p) ? 1 : 0);
        Vec3 tip = root + 0.022 * along;
        Assert.Equal(TissueKind.Scalp, volume.At(tip).Kind);
        ScalpSurface scalp = ScalpSurface.Of(volume);
        Assert.False(scalp.Contains(tip));
        for (int step = -6; step <= 6; step++)
        {
            Vec3 direction = new Vec3(Math.Cos(0.05 * step), Math.Sin(0.05 * step), 0);
            Assert.InRange(scalp.Outermost(Vec3.Zero, direction)!.Value.Norm - Radius, -0.001, 0.004);
        }
    }

    [Fact]
    public void VolumeCutTightlyAroundTheHead_KeepsItsOutsideInTheCorners()
    {
        ScalpSurface scalp = ScalpSurface.Of(LabelledHeads.Of(0.004, 0.088, p => p.Norm < Radius ? 1 : 0));
        Assert.Equal([0, 1, 2, 3, 4, 5], scalp.CutFaces);
        Assert.True(scalp.Contains(Vec3.Zero));
        Assert.False(scalp.Contains(new(0.080, 0.080, 0.080)));
        Assert.InRange((scalp.Outermost(Vec3.Zero, new Vec3(1, 1, 1).Unit())!.Value).Norm - Radius, -0.002, 0.002);
    }

    [Fact]
    public void Surface_IsTheSameEveryTime()
    {
        TissueVolume volume = LabelledHeads.Sphere(0.004, Centre);
        Assert.Equal(ScalpSurface.Of(volume).Samples.ToArray(), ScalpSurface.Of(volume).Samples.ToArray());
    }

    [Fact]
    public void Rays_ThatMissTheHead_MeetNothing()
    {
        ScalpSurface scalp = ScalpSurface.Of(LabelledHeads.Sphere(0.004, Vec3.Zero));
        Assert.Null(scalp.Outermost(new(0.2, 0, 0), new(1, 0, 0)));
        Assert.Null(scalp.Outermost(new(0.2, 0.2, 0), new(-1, 0, 0)));
        Assert.NotNull(scalp.Outermost(new(-0.2, 0.03, 0), new(1, 0, 0)));
    }

    [Fact]
    public void EmptyVolume_IsRefused() => Assert.Throws<ArgumentException>(() => ScalpSurface.Of(LabelledHeads.Of(0.02, 0.1, _ => 0)));
}
