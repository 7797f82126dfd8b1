using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Geometry;

public class AlignedEllipsoidTests
{
    private static readonly AlignedEllipsoid Head = new(new(0.01, -0.02, 0.03), new(0.08, 0.10, 0.09));

    private static Vec3 OnSurface(Vec3 d) => Head.Centre + new Vec3(d.X * Head.SemiAxes.X, d.Y * Head.SemiAxes.Y, d.Z * Head.SemiAxes.Z);

    [Fact]
    public void Fit_RecoversAnEllipsoidFromItsUpperPart()
    {
        const double Rounding = 1e-9;      // six coefficients of very unlike size on a cap
        AlignedEllipsoid fit = AlignedEllipsoid.Fit([.. Enumerable.Range(0, 800).Select(k => OnSurface(GoldenSpiral.Point(k, 800, -0.2)))])!.Value;
        Assert.InRange((fit.Centre - Head.Centre).Norm, 0, Rounding);
        Assert.InRange((fit.SemiAxes - Head.SemiAxes).Norm, 0, Rounding);
    }

    [Fact]
    public void Fit_OfAnotherQuadric_IsNone()
    {
        Assert.Null(AlignedEllipsoid.Fit([]));
        Assert.Null(AlignedEllipsoid.Fit([.. Enumerable.Range(0, 400).Select(k => new Vec3(Math.Cos(k) * Math.Cosh(k % 7 / 7.0), Math.Sin(k) * Math.Cosh(k % 7 / 7.0), Math.Sinh(k % 7 / 7.0)))]));
    }

    // Slow twin: the nearest of many surface points, which can only lie farther than the foot, and by no more than their spacing allows.
    [Theory]
    [InlineData(0.3)]
    [InlineData(0.9)]
    [InlineData(1.4)]
    public void Nearest_IsNearerThanEverySample(double scale)
    {
        const int Samples = 20_000;
        Vec3[] surface = [.. Enumerable.Range(0, Samples).Select(k => OnSurface(GoldenSpiral.Point(k, Samples)))];
        for (int k = 0; k < 50; k++)
        {
            Vec3 p = Head.Centre + scale * (OnSurface(GoldenSpiral.Point(k, 50)) - Head.Centre);
            (Vec3 foot, double inside) = Head.Nearest(p);
            Assert.Equal(scale < 1, inside > 0);
            RelativeAssert.Equal(Math.Abs(inside), (foot - p).Norm, 1e-12);
            Vec3 r = foot - Head.Centre;
            RelativeAssert.Equal(1, Math.Pow(r.X / 0.08, 2) + Math.Pow(r.Y / 0.10, 2) + Math.Pow(r.Z / 0.09, 2), 1e-9);
            double nearest = surface.Min(s => (s - p).Norm);
            Assert.InRange(nearest - Math.Abs(inside), -1e-12, 0.001);
        }
    }

    [Fact]
    public void Ray_LeavesOnTheSurfaceAlongItself()
    {
        Vec3 from = Head.Centre + new Vec3(0.02, 0.03, -0.01), direction = new Vec3(0.3, -0.5, 0.8).Unit();
        Vec3 exit = Head.OnRay(from, direction);
        Assert.InRange(TestHeads.AngleDeg(exit - from, direction), 0, 1e-9);
        Assert.InRange(Math.Abs(Head.Nearest(exit).Inside), 0, 1e-9);

        // The foot of a point a little outside along the normal is the point itself.
        Assert.InRange((Head.Nearest(exit + 0.01 * Head.Normal(exit)).Foot - exit).Norm, 0, 1e-9);
    }
}
