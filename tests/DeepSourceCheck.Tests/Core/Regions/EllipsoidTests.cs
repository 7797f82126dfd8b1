using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Regions;

public class EllipsoidTests
{
    private static readonly Gen<Ellipsoid> Any =
        from c in Gen.Double[-0.05, 0.05].Array[3]
        from s in Gen.Double[0.001, 0.03].Array[3]
        from r in Gen.Double[-3.1, 3.1].Array[3]
        select new Ellipsoid(new(c[0], c[1], c[2]), new(s[0], s[1], s[2]), Rotation.FromFixedAxes(r[0], r[1], r[2]));

    [Fact]
    public void Axes_ReachTheSurface() => Any.Sample(e =>
        Enumerable.Range(0, 3).All(a => Math.Abs(e.Q(e.Centre + e.SemiAxes[a] * e.Axis(a)) - 1) < 1e-12), seed: "0000000000000005");

    [Fact]
    public void Box_TouchesTheSurfaceOnEachSideAndHoldsIt() => Any.Sample(e =>
    {
        Vec3 half = e.HalfExtent;
        Vec3[] surface = [.. Enumerable.Range(0, 4000).Select(k =>
        {
            Vec3 u = GoldenSpiral.Point(k, 4000);
            return e.Rotation.Apply(new(u.X * e.SemiAxes.X, u.Y * e.SemiAxes.Y, u.Z * e.SemiAxes.Z));
        })];

        // 4,000 points leave at most 0.05 rad to the extreme point, where the surface is flat: 1 - cos(0.05) = 0.13 % of it.
        return Enumerable.Range(0, 3).All(i =>
        {
            double reach = surface.Max(p => p[i]);
            return reach <= half[i] * (1 + 1e-12) && reach >= half[i] * 0.995;
        });
    }, seed: "0000000000000006", iter: 30);

    [Fact]
    public void MirrorImage_HoldsTheMirroredPoints() => Gen.Select(Any, Gen.Double[-0.05, 0.05].Array[3]).Sample((e, p) =>
    {
        Vec3 point = e.Centre + 0.5 * new Vec3(p[0], p[1], p[2]);
        return Math.Abs(e.Q(point) - e.MirrorX().Q(point with { X = -point.X })) <= 1e-9 * (1 + e.Q(point));
    }, seed: "0000000000000007");

    [Fact]
    public void Scaling_KeepsQAndMultipliesTheVolume() => Gen.Select(Any, Gen.Double[0.3, 2]).Sample((e, f) =>
    {
        Vec3 about = new(0, -0.018, 0.005), point = e.Centre + new Vec3(0.001, 0.002, -0.001);
        Ellipsoid scaled = e.Scaled(f, about);
        return Math.Abs(scaled.Q(about + f * (point - about)) - e.Q(point)) < 1e-9 * (1 + e.Q(point))
            && Math.Abs(scaled.Volume / e.Volume - f * f * f) < 1e-12 * f * f * f * 10;
    }, seed: "0000000000000008");

    [Fact]
    public void RotationByQuarterTurns_IsAboutFixedAxesInOrder()
    {
        // x turned about x stays; y -> z by a quarter about x; then z -> x by a quarter about the fixed y.
        Ellipsoid e = new(Vec3.Zero, new(0.001, 0.002, 0.003), Rotation.FromFixedAxes(Math.PI / 2, Math.PI / 2, 0));
        Assert.InRange(TestHeads.AngleDeg(e.Axis(1), new(1, 0, 0)), 0, 1e-9);
    }

    [Theory]
    [InlineData(0.0)]
    [InlineData(-0.001)]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    public void SemiAxis_MustBePositiveAndFinite(double s) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => new Ellipsoid(Vec3.Zero, new(0.001, s, 0.001), Rotation.Identity));
}
