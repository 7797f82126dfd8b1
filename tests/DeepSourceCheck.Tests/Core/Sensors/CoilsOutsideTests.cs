using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Sensors;

/// <summary>Coils inside a head of voxels are refused by name.</summary>
public class CoilsOutsideTests
{
    private static readonly VoxelHead Head = new("voxels", SphereVolumes.Of(0.004));

    [Fact]
    public void CoilsAroundTheHead_AreAccepted() =>
        CoilsOutside.Check(Head, [.. Enumerable.Range(0, 50).Select(k => Channel($"S{k}", 0.1 * GoldenSpiral.Point(k, 50))), Channel("far", new(0, 0, 3))]);

    [Fact]
    public void CoilsInside_AreNamedWithPlaceTissueAndDepth()
    {
        MegChannel gradiometer = new("S007", CoilKind.AxialGradiometer, [new(new(0.06, 0, 0), new(1, 0, 0), 1), new(new(0.11, 0, 0), new(1, 0, 0), -1)]);
        InputException error = Assert.Throws<InputException>(() => CoilsOutside.Check(Head, [gradiometer, Channel("S008", new(0, 0.12, 0)), Channel("S009", new(0, 0, -0.088))], "coils.tsv"));
        Assert.Equal(2, error.Problems.Count);
        Assert.Matches(@"^coils.tsv: channel S007 has a coil point inside the head, at \(60, 0, 0\) mm in brain, 3[0-4]\.\d mm below its surface", error.Problems[0].ToString());
        Assert.Contains("S009", error.Problems[1].Message, StringComparison.Ordinal);
    }

    [Fact]
    public void CoilWithoutPlace_IsRefused()
    {
        InputException error = Assert.Throws<InputException>(() => CoilsOutside.Check(Head, [new("A", CoilKind.Magnetometer, []), Channel("B", new(double.NaN, 0, 0))]));
        Assert.Equal(2, error.Problems.Count);
    }

    private static MegChannel Channel(string name, Vec3 at) => new(name, CoilKind.Magnetometer, [new(at, new(0, 0, 1), 1)]);
}
