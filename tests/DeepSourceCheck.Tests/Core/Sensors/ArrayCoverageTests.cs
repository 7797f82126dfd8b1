using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Sensors;

public class ArrayCoverageTests
{
    // Table I.1 of the project's facts: derived there with the closed form to four digits.
    private const double TableDigits = 3e-4;

    private static readonly CoilArrayChoice Helmet = new("magnetometer", 200, 0, 0.030, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack);

    [Theory]
    [InlineData(30, 98.5, 4.121)]
    [InlineData(30, 112, 2.637)]
    [InlineData(30, 122, 1.974)]
    [InlineData(30, 137, 1.344)]
    [InlineData(50, 98.5, 11.32)]
    [InlineData(50, 112, 6.415)]
    [InlineData(50, 122, 4.514)]
    [InlineData(50, 137, 2.874)]
    public void PeakField_OfOneNanoampereMetre_IsAsTabulated(double r, double coil, double femtotesla)
    {
        double peak = ArrayCoverage.RadialField(r / 1000, coil / 1000, ArrayCoverage.PeakAngle(r / 1000, coil / 1000));
        RelativeAssert.Equal(femtotesla, peak * 1e-9 * 1e15, TableDigits);
    }

    [Theory]
    [InlineData(30, 49.8)]
    [InlineData(50, 31.9)]
    public void PeakAngle_IsAsTabulated(double r, double degrees) =>
        Assert.InRange(ArrayCoverage.PeakAngle(r / 1000, 0.112) * 180 / Math.PI - degrees, -0.05, 0.05);

    [Fact]
    public void PeakAngle_IsWhereTheFieldIsLargest() =>
        Gen.Select(Gen.Double[0.0001, 0.078], Gen.Double[0.0925, 0.15], Gen.Double[0, Math.PI]).Sample((r, coil, other) =>
            ArrayCoverage.RadialField(r, coil, ArrayCoverage.PeakAngle(r, coil)) >= ArrayCoverage.RadialField(r, coil, other), seed: "0000000000000003");

    // Twin: every direction of a fine lattice on the sphere, every one of 180 tangential directions, the field from the primary current alone
    // B.n = 1e-7 (Q x (R n - r)).n / |R n - r|^3 (Sarvas 1987: volume currents add nothing radial).
    [Theory]
    [InlineData(0.0, -0.039, -0.055)]
    [InlineData(-0.025, -0.0615, -0.034)]
    [InlineData(-0.006, -0.033, -0.011)]
    [InlineData(0.02, 0.03, -0.035)]
    [InlineData(0.001, -0.018, -0.06)]
    [InlineData(-0.03, -0.02, 0.05)]
    public void CapturedShare_MatchesBruteForce(double x, double y, double z)
    {
        // A lattice of 40,000 directions has 0.018 rad between neighbours; the field is flat at its maximum, at an edge it is not.
        const double LatticeError = 0.02;
        Vec3 position = new(x, y, z), offset = position - TestHeads.Adult.Centre;
        CapEdge edge = new(Helmet.EdgeFront, Helmet.EdgeBack);
        double coil = 0.092 + 0.030, onCap = 0, anywhere = 0;
        Vec3 u = offset.Unit(), a = Vec3.Cross(u, new(0.3, 0.4, 0.8)).Unit(), b = Vec3.Cross(u, a);
        for (int k = 0; k < 40_000; k++)
        {
            Vec3 n = GoldenSpiral.Point(k, 40_000), d = coil * n - offset;
            double best = 0;
            for (int step = 0; step < 180; step++)
            {
                (double sin, double cos) = Math.SinCos(Math.PI * step / 180);
                best = Math.Max(best, Math.Abs(1e-7 * Vec3.Dot(Vec3.Cross(cos * a + sin * b, d), n)) / (d.Norm * d.Norm * d.Norm));
            }

            anywhere = Math.Max(anywhere, best);
            onCap = edge.Contains(n) ? Math.Max(onCap, best) : onCap;
        }

        double share = ArrayCoverage.CapturedShare(position, TestHeads.Adult, Helmet);
        Assert.InRange(share - onCap / anywhere, -LatticeError, LatticeError);
    }

    [Fact]
    public void CapturedShare_IsOneForSourcesWellInsideTheCap_AndAtTheCentre()
    {
        Assert.Equal(1.0, ArrayCoverage.CapturedShare(new(0, -0.018, 0.06), TestHeads.Adult, Helmet));
        Assert.Equal(1.0, ArrayCoverage.CapturedShare(TestHeads.Adult.Centre, TestHeads.Adult, Helmet));
    }

    [Fact]
    public void CapturedShare_NeverRisesWhenTheEdgeRises() =>
        Gen.Select(Gen.Double[-0.07, 0.07], Gen.Double[-0.07, 0.07], Gen.Double[-1.2, 1.0], Gen.Double[0, 0.3]).Where(t => t.Item1 * t.Item1 + t.Item2 * t.Item2 < 0.005)
            .Sample((y, z, front, rise) =>
            {
                Vec3 position = TestHeads.Adult.Centre + new Vec3(0.01, y, z);
                double low = ArrayCoverage.CapturedShare(position, TestHeads.Adult, Helmet with { EdgeFront = front });
                double high = ArrayCoverage.CapturedShare(position, TestHeads.Adult, Helmet with { EdgeFront = front + rise });
                return low is > 0 and <= 1 && high <= low + 1e-9;
            }, seed: "0000000000000004");

    [Fact]
    public void Region_BelowTheEdge_SaysWhichShareIsCaptured()
    {
        (double share, string? warning) = ArrayCoverage.OfRegion("deep-below", [new(0, -0.018, -0.065)], TestHeads.Adult, Helmet);
        Assert.InRange(share, 0.01, 0.95);
        Assert.StartsWith("deep-below:", warning, StringComparison.Ordinal);
        Assert.Contains($"{100 * share:0} %", warning, StringComparison.Ordinal);
        Assert.Null(ArrayCoverage.OfRegion("high", [new(0, -0.018, 0.04)], TestHeads.Adult, Helmet).Warning);
    }
}
