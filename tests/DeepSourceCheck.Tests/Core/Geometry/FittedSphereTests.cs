using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Geometry;

public class FittedSphereTests
{
    private static readonly Vec3 Centre = new(0.31, -0.42, 0.17);

    [Fact]
    public void Sphere_IsRecoveredFromItsUpperPart()
    {
        // Rounding alone is left; a cap is worse conditioned than a whole sphere by about the square of its height.
        const double Rounding = 1e-10;
        FittedSphere fit = FittedSphere.Of([.. Enumerable.Range(0, 500).Select(k => Centre + 0.09 * GoldenSpiral.Point(k, 500, 0.2))]);
        Assert.InRange((fit.Centre - Centre).Norm, 0, Rounding);
        RelativeAssert.Equal(0.09, fit.Radius, Rounding);
        Assert.InRange(fit.Rms, 0, Rounding);
    }

    // The geometric fit minimises the sum of squared distances: no neighbouring sphere has a smaller one. Held against a plain evaluation of that sum.
    [Fact]
    public void Fit_IsTheLeastOfDistances()
    {
        Vec3[] points = [.. Enumerable.Range(0, 300).Select(k => GoldenSpiral.Point(k, 300, -0.3) is var d ? Centre + (0.09 + 0.004 * Math.Sin(7 * d.X + 3 * d.Z)) * d : d)];
        FittedSphere fit = FittedSphere.Of(points);
        double Sum(Vec3 centre, double radius) => points.Sum(p => Math.Pow((p - centre).Norm - radius, 2));
        double least = Sum(fit.Centre, fit.Radius);
        RelativeAssert.Equal(Math.Sqrt(least / points.Length), fit.Rms, 1e-12);
        const double Step = 1e-5;
        foreach (Vec3 axis in new Vec3[] { new(1, 0, 0), new(0, 1, 0), new(0, 0, 1) })
        {
            Assert.True(Sum(fit.Centre + Step * axis, fit.Radius) > least && Sum(fit.Centre - Step * axis, fit.Radius) > least);
        }

        Assert.True(Sum(fit.Centre, fit.Radius + Step) > least && Sum(fit.Centre, fit.Radius - Step) > least);
    }

    [Fact]
    public void PointsInOnePlane_AreRefused()
    {
        Assert.Throws<ArgumentException>(() => FittedSphere.Of([.. Enumerable.Range(0, 20).Select(k => new Vec3(Math.Cos(k), Math.Sin(k), 0.5))]));
        Assert.Throws<ArgumentException>(() => FittedSphere.Of([Centre, Vec3.Zero]));
    }
}
