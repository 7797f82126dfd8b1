using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Sensors;

public class ElectrodePlacementTests
{
    private static readonly Vec3 Centre = TestHeads.Adult.Centre;

    [Fact]
    public void Electrode_KeepsItsDirectionAndReportsTheDistance()
    {
        Electrode e = ElectrodePlacement.OnSphere(["A"], [Centre + new Vec3(0.06, 0, 0.08)], TestHeads.Adult)[0];
        RelativeAssert.Equal(0.008, e.MovedBy, 1e-12);
        RelativeAssert.Equal(0.092 * 0.6, e.Position.X, 1e-12);
        RelativeAssert.Equal(0.005 + 0.092 * 0.8, e.Position.Z, 1e-12);
        Assert.True(e.InAverage);
    }

    [Fact]
    public void Electrode_MoreThan20MmAway_IsRefusedByNameAndDistance()
    {
        InputException error = Assert.Throws<InputException>(() => ElectrodePlacement.OnSphere(
            ["near", "far"], [Centre + new Vec3(0, 0, 0.1119), Centre + new Vec3(0, 0, 0.1123)], TestHeads.Adult, "electrodes.tsv"));
        InputProblem problem = Assert.Single(error.Problems);
        Assert.Equal("electrodes.tsv", problem.File);
        Assert.Contains("'far' is 20.3 mm outside", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void EveryFault_IsNamedAtOnce()
    {
        InputException error = Assert.Throws<InputException>(() => ElectrodePlacement.OnSphere(
            ["A", "A", "B", "C"],
            [Centre + new Vec3(0, 0, 0.092), Centre + new Vec3(0, 0.092, 0), Centre, new(double.NaN, 0, 0)],
            TestHeads.Adult));
        Assert.Equal(3, error.Problems.Count);
        Assert.Contains("listed twice", error.Problems[0].Message, StringComparison.Ordinal);
        Assert.Contains("centre", error.Problems[1].Message, StringComparison.Ordinal);
        Assert.Contains("not a number", error.Problems[2].Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Placement_IsOnTheSurfaceAlongTheRadius() =>
        Gen.Select(Gen.Double[-1, 1], Gen.Double[-Math.PI, Math.PI], Gen.Double[0.0721, 0.1119]).Sample((z, azimuth, r) =>
        {
            double across = Math.Sqrt(1 - z * z);
            Vec3 direction = new(across * Math.Sin(azimuth), across * Math.Cos(azimuth), z);
            Electrode e = ElectrodePlacement.OnSphere(["A"], [Centre + r * direction], TestHeads.Adult)[0];
            Vec3 offset = e.Position - Centre;
            return Math.Abs(offset.Norm - 0.092) < 1e-15 * 100 && TestHeads.AngleDeg(offset, direction) < 1e-9 && Math.Abs(e.MovedBy - Math.Abs(r - 0.092)) < 1e-14;
        }, seed: "0000000000000001");
}
