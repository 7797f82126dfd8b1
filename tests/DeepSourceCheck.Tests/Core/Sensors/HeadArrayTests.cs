using System.Globalization;
using System.Text.RegularExpressions;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Sensors;

public class HeadArrayTests
{
    private static readonly Vec3 Centre = new(0.0013, -0.0027, 0.0041);
    private const double Radius = 0.092, Voxel = 0.002;

    private static readonly Lazy<(TissueVolume Volume, ScalpSurface Scalp)> Ball = new(() => LabelledHeads.Sphere(Voxel, Centre) is var v ? (v, ScalpSurface.Of(v)) : default);
    private static readonly Lazy<(TissueVolume Volume, ScalpSurface Scalp)> Face = new(() => new FacePhantom(1).Volume(Voxel) is var v ? (v, ScalpSurface.Of(v)) : default);

    private static CoilArrayChoice Choice(string coil, int sites = 60) => new(
        coil, sites, coil switch { "axial-gradiometer" => 0.060, "planar-gradiometer" => 0.015, _ => 0 }, coil.StartsWith("on-scalp", StringComparison.Ordinal) ? 0.007 : 0.030,
        CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack);

    private static HeadArray About((TissueVolume Volume, ScalpSurface Scalp) head, CoilArrayChoice choice) =>
        HeadArray.Generate(choice, head.Scalp, HeadSphere.Of(head.Volume, head.Scalp));

    [Theory]
    [InlineData("magnetometer")]
    [InlineData("axial-gradiometer")]
    [InlineData("planar-gradiometer")]
    public void Helmet_AboutALabelledSphere_IsTheSpheresArray(string coil)
    {
        // The least gap is over the staircase's highest voxels: half a voxel of radius, the fit of the centre as much again.
        const double Within = 1.0 * Voxel, AxisDeg = 1.5;
        MegChannel[] expected = CoilArray.Generate(Choice(coil), Centre, Radius);
        HeadArray array = About(Ball.Value, Choice(coil));
        Assert.Equal(expected.Select(c => c.Name), array.Channels.Select(c => c.Name));
        Assert.All(expected.Zip(array.Channels), pair =>
        {
            Assert.All(pair.First.Points.Zip(pair.Second.Points), p =>
            {
                Assert.InRange((p.First.Position - p.Second.Position).Norm, 0, Within);
                Assert.InRange(TestHeads.AngleDeg(p.First.Axis, p.Second.Axis), 0, AxisDeg);
                Assert.Equal(p.First.Share, p.Second.Share);
            });
        });
    }

    [Fact]
    public void OnScalpSensors_AboutALabelledSphere_AreTheSpheresArray()
    {
        MegChannel[] expected = CoilArray.Generate(Choice("on-scalp-triaxial"), Centre, Radius);
        HeadArray array = About(Ball.Value, Choice("on-scalp-triaxial"));
        Assert.Null(array.Helmet);
        Assert.Equal(expected.Select(c => c.Name), array.Channels.Select(c => c.Name));

        // Normals of patches of 8 mm are stated to 7 degrees at 2 mm.
        Assert.All(expected.Zip(array.Channels).Where(pair => pair.First.Name.EndsWith('r')), pair =>
        {
            Assert.InRange((pair.First.Site - pair.Second.Site).Norm, 0, Voxel);
            Assert.InRange(TestHeads.AngleDeg(pair.First.Points[0].Axis, pair.Second.Points[0].Axis), 0, 7);
        });
    }

    // Slow twin of the helmet's fit: of 20,000 points on the helmet above the edge the nearest to the scalp lies at the stated gap.
    [Fact]
    public void Helmet_ComesAsNearAsTheStatedGapAndNoNearer()
    {
        CoilArrayChoice choice = Choice("magnetometer", 200);
        HeadArray array = About(Face.Value, choice);
        AlignedEllipsoid helmet = array.Helmet!.Value;
        double least = double.PositiveInfinity;
        foreach (Vec3 direction in CoilArray.SiteDirections(3000, new(choice.EdgeFront, choice.EdgeBack)))
        {
            least = Math.Min(least, Face.Value.Scalp.Nearest(helmet.OnRay(array.Centre, direction)).SignedDistance);
        }

        // Samples of the surface may lie a hair off its nearest point, and 3000 places on the helmet 6 mm apart miss the nearest by 0.1 mm.
        Assert.InRange(least, 0.0299, 0.0303);
        Assert.InRange(array.SmallestGap, 0.0299, 0.034);
        Assert.InRange(array.LargestGap, array.MedianGap, 0.060);
        Assert.All(array.Channels, c => Assert.InRange(Math.Abs(helmet.Nearest(c.Site).Inside), 0, 1e-9));
        Assert.Contains("MEG helmet", array.Description, StringComparison.Ordinal);
    }

    [Fact]
    public void OnScalpSensors_KeepTheirGapOverNoseAndForehead()
    {
        HeadArray array = About(Face.Value, Choice("on-scalp", 200) with { EdgeFront = -0.5 });
        Assert.InRange(array.SmallestGap, 0.00699, 0.0072);
        Assert.InRange(array.MedianGap, 0.00699, 0.0072);
        CoilPlacement.CheckOutside(Face.Value.Scalp, array.Channels);
    }

    // What a generated array would be if its placement failed: sites 9 mm below the scalp.
    [Fact]
    public void GeneratedArray_InsideTheHead_IsRefusedWithChannelsAndDepth()
    {
        MegChannel[] sunk = CoilArray.Generate(Choice("on-scalp") with { Gap = 0.001 }, Centre, Radius - 0.010);
        InputException error = Assert.Throws<InputException>(() => CoilPlacement.CheckGenerated(Ball.Value.Scalp, sunk, Voxel, []));
        Assert.Equal("sensors.meg.gap_mm", error.Problems[0].Key);
        Match match = Regex.Match(error.Problems[0].Message, @"^60 of 60 channels of the generated array have a coil point inside the head, below the scalp by: M\d+ (\d+\.\d) mm, .* and 54 more; ");
        Assert.True(match.Success, error.Problems[0].Message);
        Assert.InRange(double.Parse(match.Groups[1].Value, CultureInfo.InvariantCulture), 8, 10);       // half a voxel of the surface each way
    }

    [Theory]
    [InlineData("on-scalp", 0.0015, true)]
    [InlineData("on-scalp-triaxial", 0.0015, true)]
    [InlineData("on-scalp", 0.007, false)]
    [InlineData("magnetometer", 0.0005, true)]
    [InlineData("planar-gradiometer", 0.020, false)]
    public void GeneratedArray_NearerThanAVoxel_IsWarnedOf(string coil, double gap, bool near)
    {
        List<string> warnings = [];
        CoilPlacement.CheckGenerated(Face.Value.Scalp, About(Face.Value, Choice(coil, 300) with { Gap = gap }).Channels, Voxel, warnings);
        Assert.Equal(near, warnings.Count == 1);
        Assert.All(warnings, w => Assert.Matches(@"^the generated MEG array: \d+ of \d+ channels have a coil point nearer to the scalp than one voxel \(2 mm\): M\d+[rab]? [01]\.\d mm", w));
    }

    [Fact]
    public void WrongChoice_IsRefusedAsOnASphere() =>
        Assert.Equal("sensors.meg.gap_mm", Assert.Throws<InputException>(() => About(Ball.Value, Choice("magnetometer") with { Gap = -0.001 })).Problems[0].Key);
}
