using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Sensors;

public class CoilArrayTests
{
    private static readonly CapEdge Default = new(CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack);
    private static readonly Vec3 Centre = new(0.001, -0.018, 0.005);

    private static CoilArrayChoice Choice(string coil, int sites = 200) =>
        new(coil, sites, coil switch { "axial-gradiometer" => 0.060, "planar-gradiometer" => 0.015, _ => 0 }, coil.StartsWith("on-scalp", StringComparison.Ordinal) ? 0.007 : 0.030, Default.Front, Default.Back);

    [Fact]
    public void Sites_AreExactlyAsManyAsAskedAndAboveTheEdge() =>
        Gen.Select(Gen.Int[1, 700], Gen.Double[-1.2, 1.2], Gen.Double[-1.2, 1.2]).Sample((sites, front, back) =>
        {
            CapEdge edge = new(front, back);
            Vec3[] d = CoilArray.SiteDirections(sites, edge);
            return d.Length == sites && d.All(edge.Contains) && d.All(v => Math.Abs(v.Norm - 1) < 1e-14);
        }, seed: "0000000000000002");

    // Evenness: on an even lattice of n sites on a cap of area A the nearest neighbour lies at about 0.9 to 1.05 sqrt(A/n); a random scatter has half of that on
    // average and pairs that nearly touch. The cap's area is 2 pi - integral sin e(az) d az.
    [Theory]
    [InlineData(60)]
    [InlineData(200)]
    [InlineData(1000)]
    public void Sites_LieEvenly(int sites)
    {
        Vec3[] d = CoilArray.SiteDirections(sites, Default);
        double area = Enumerable.Range(0, 3600).Average(k => 2 * Math.PI * (1 - Math.Sin(Default.Elevation(2 * Math.PI * k / 3600))));
        double unit = Math.Sqrt(area / sites);
        double[] nearest = [.. d.Select((p, i) => d.Where((_, j) => j != i).Min(q => (q - p).Norm) / unit)];
        Assert.InRange(nearest.Min(), 0.7, 1.1);
        Assert.InRange(nearest.Max(), 0.7, 1.2);

        // Front and back halves, and quarters, hold sites in proportion to their area; the lattice's rim leaves some sqrt(n) to chance.
        double back = Enumerable.Range(900, 1800).Average(k => Math.PI * (1 - Math.Sin(Default.Elevation(2 * Math.PI * k / 3600))));
        Assert.InRange(d.Count(p => p.Y < 0) - sites * back / area, -Math.Sqrt(sites), Math.Sqrt(sites));
        Assert.InRange(d.Count(p => p.X < 0) - sites / 2.0, -Math.Sqrt(sites), Math.Sqrt(sites));
    }

    [Fact]
    public void Edge_IsAsTheContractStates()
    {
        RelativeAssert.Equal(10 * Math.PI / 180, Default.Elevation(0), 1e-14);
        RelativeAssert.Equal(-35 * Math.PI / 180, Default.Elevation(Math.PI), 1e-14);
        RelativeAssert.Equal(-12.5 * Math.PI / 180, Default.Elevation(Math.PI / 2), 1e-14);
        RelativeAssert.Equal(-12.5 * Math.PI / 180, Default.ElevationAt(new(-1, 0, 0)), 1e-14);
    }

    [Fact]
    public void AxialGradiometer_IsNearMinusFarAlongTheRadius()
    {
        foreach (MegChannel channel in CoilArray.Generate(Choice("axial-gradiometer"), Centre, 0.092))
        {
            Assert.Equal(CoilKind.AxialGradiometer, channel.Kind);
            Assert.Equal([1.0, -1.0], channel.Points.Select(p => p.Share));
            RelativeAssert.Equal(0.122, (channel.Points[0].Position - Centre).Norm, 1e-12);
            RelativeAssert.Equal(0.182, (channel.Points[1].Position - Centre).Norm, 1e-12);
            Assert.InRange(TestHeads.AngleDeg(channel.Points[1].Axis, channel.Site - Centre), 0, 1e-9);
        }
    }

    [Fact]
    public void PlanarGradiometers_AreTwoOrthogonalDifferencesAtEachSite()
    {
        MegChannel[] channels = CoilArray.Generate(Choice("planar-gradiometer", 50), Centre, 0.092);
        Assert.Equal(100, channels.Length);
        for (int k = 0; k < 100; k += 2)
        {
            Vec3 a = channels[k].Points[0].Position - channels[k].Points[1].Position;
            Vec3 b = channels[k + 1].Points[0].Position - channels[k + 1].Points[1].Position;
            Vec3 middle = (channels[k].Points[0].Position + channels[k].Points[1].Position) / 2;
            RelativeAssert.Equal(0.015, a.Norm, 1e-12);
            RelativeAssert.Equal(0.015, b.Norm, 1e-12);
            Assert.InRange(Math.Abs(Vec3.Dot(a.Unit(), b.Unit())), 0, 1e-12);
            Assert.InRange(Math.Abs(Vec3.Dot(a.Unit(), (middle - Centre).Unit())), 0, 1e-12);
            RelativeAssert.Equal(0.122, (middle - Centre).Norm, 1e-12);
            Assert.Equal([1 / 0.015, -1 / 0.015], channels[k].Points.Select(p => p.Share));

            // A field that grows evenly along the baseline reads as its gradient.
            double reading = channels[k].Points.Sum(p => p.Share * 3.0 * Vec3.Dot(p.Position - Centre, a.Unit()));
            RelativeAssert.Equal(3.0, reading, 1e-9);
        }
    }

    [Fact]
    public void TriaxialSensors_HaveThreeOrthonormalAxesAtOnePoint()
    {
        MegChannel[] channels = CoilArray.Generate(Choice("on-scalp-triaxial", 40), Centre, 0.092);
        Assert.Equal(120, channels.Length);
        for (int k = 0; k < 120; k += 3)
        {
            Vec3[] axes = [.. channels[k..(k + 3)].Select(c => c.Points[0].Axis)];
            Assert.Single(channels[k..(k + 3)].Select(c => c.Site).Distinct());
            RelativeAssert.Equal(0.099, (channels[k].Site - Centre).Norm, 1e-12);
            for (int i = 0; i < 3; i++)
            {
                for (int j = 0; j < 3; j++)
                {
                    Assert.InRange(Vec3.Dot(axes[i], axes[j]) - (i == j ? 1 : 0), -1e-14, 1e-14);
                }
            }
        }
    }

    [Fact]
    public void ChannelNames_AreUniqueAndNumberedFromTheTop()
    {
        MegChannel[] channels = CoilArray.Generate(Choice("magnetometer", 1200), Centre, 0.092);
        Assert.Equal("M0001", channels[0].Name);
        Assert.Equal("M1200", channels[^1].Name);
        Assert.Equal(1200, channels.Select(c => c.Name).Distinct().Count());
        Assert.True(channels[0].Site.Z > channels[^1].Site.Z);
        Assert.Equal(["M001a", "M001b"], CoilArray.Generate(Choice("planar-gradiometer", 1), Centre, 0.092).Select(c => c.Name));
    }

    [Fact]
    public void Array_IsTheSameEveryTime() =>
        Assert.Equal(
            CoilArray.Generate(Choice("magnetometer"), Centre, 0.092).Select(c => c.Points[0]),
            CoilArray.Generate(Choice("magnetometer"), Centre, 0.092).Select(c => c.Points[0]));

    [Fact]
    public void WrongNumbers_AreRefusedByKey()
    {
        InputException error = Assert.Throws<InputException>(
            () => CoilArray.Generate(new("axial-gradiometr", 0, 0.06, -0.001, 1.5, -0.5), Centre, 0.092));
        Assert.Equal(
            ["sensors.meg.coil", "sensors.meg.sites", "sensors.meg.gap_mm", "sensors.meg_edge_deg.front"],
            error.Problems.Select(p => p.Key));
        Assert.Contains("nearest: axial-gradiometer", error.Message, StringComparison.Ordinal);
        Assert.Equal("sensors.meg.baseline_mm", Assert.Throws<InputException>(
            () => CoilArray.Generate(new("planar-gradiometer", 10, 0, 0.03, 0.1, -0.5), Centre, 0.092)).Problems[0].Key);
    }
}
