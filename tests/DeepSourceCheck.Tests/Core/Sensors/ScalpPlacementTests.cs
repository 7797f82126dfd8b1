using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Sensors;

public class ScalpPlacementTests
{
    private static readonly Vec3 Centre = new(0.0013, -0.0027, 0.0041);
    private static readonly Vec3 Side = new(0.6, 0, 0.8);
    private const double Radius = 0.092, Voxel = 0.002;

    private static readonly Lazy<TissueVolume> Volume = new(() => LabelledHeads.Sphere(Voxel, Centre));
    private static readonly Lazy<ScalpSurface> Scalp = new(() => ScalpSurface.Of(Volume.Value));

    private static Vec3 At(double radius) => Centre + radius * Side;

    private static Electrode[] Place(List<string> warnings, params (string Name, Vec3 Position)[] electrodes) =>
        ElectrodePlacement.OnScalp([.. electrodes.Select(e => e.Name)], [.. electrodes.Select(e => e.Position)], Scalp.Value, Volume.Value, warnings, "electrodes.tsv");

    [Theory]
    [InlineData(0.015)]
    [InlineData(0.001)]
    [InlineData(-0.004)]
    public void Electrode_NearTheScalp_IsMovedOntoIt(double outside)
    {
        List<string> warnings = [];
        Electrode e = Place(warnings, ("A", At(Radius + outside)))[0];
        Assert.InRange((e.Position - Centre).Norm - Radius, -0.5 * Voxel, 0.5 * Voxel);
        Assert.InRange(e.MovedBy - Math.Abs(outside), -0.5 * Voxel, 0.5 * Voxel);
        Assert.False(e.IsInterior);
        Assert.Empty(warnings);
    }

    [Fact]
    public void Electrode_FarOutside_IsRefusedWithNameAndDistance()
    {
        InputException error = Assert.Throws<InputException>(() => Place([], ("E004", At(Radius)), ("E005", At(Radius + 0.060)), ("E006", new(double.NaN, 0, 0)), ("E004", At(Radius))));
        Assert.Equal(3, error.Problems.Count);
        Assert.Matches(@"^electrode 'E005' is (59|60)\.\d mm outside the scalp", error.Problems[0].Message);
        Assert.Equal("electrodes.tsv", error.Problems[0].File);
        Assert.Contains("'E006' has a coordinate that is not a number", error.Problems[1].Message, StringComparison.Ordinal);
        Assert.Contains("'E004' is listed twice", error.Problems[2].Message, StringComparison.Ordinal);
    }

    [Fact]
    public void ContactsInTheBrain_StayWhereTheyAreAndAreNamed()
    {
        List<string> warnings = [];
        Electrode[] placed = Place(warnings, ("Cz", At(Radius)), ("D1", At(0.020)), ("D2", At(0.0235)), ("grid", At(0.079)));
        Assert.Equal([false, true, true, true], placed.Select(e => e.IsInterior));
        Assert.Equal([true, false, false, false], placed.Select(e => e.InAverage));
        Assert.Equal(At(0.020), placed[1].Position);
        Assert.Equal(0, placed[1].MovedBy);
        string warning = Assert.Single(warnings);
        Assert.Matches(@"D1 \(grey, 7[123] mm below the scalp\), D2 \(grey, 6[789] mm below the scalp\), grid \(csf, 1[234] mm", warning);
    }

    [Theory]
    [InlineData(0.084, "8")]
    [InlineData(0.081, "1[012]")]
    public void ContactInBone_DeeperThanAFewMillimetres_StaysAndIsNamedWithTissueAndDepth(double radius, string depth)
    {
        List<string> warnings = [];
        Electrode[] placed = Place(warnings, ("Cz", At(Radius)), ("G3", At(radius)));
        Assert.True(placed[1].IsInterior);
        Assert.Equal(At(radius), placed[1].Position);
        Assert.False(placed[1].InAverage);
        Assert.Equal(2, warnings.Count);
        Assert.All(warnings, w => Assert.Matches($@"^electrodes\.tsv: .*G3 \(compact skull, {depth} mm below the scalp\)", w));
        Assert.Contains("outside fluid and brain", warnings[1], StringComparison.Ordinal);
    }

    [Fact]
    public void ElectrodeDeepInSoftTissue_IsMovedAndNamedWithTissueAndDepth()
    {
        TissueVolume thick = LabelledHeads.Sphere(Voxel, Centre, skull: 0.074, csf: 0.068, brain: 0.066);
        List<string> warnings = [];
        Electrode[] placed = ElectrodePlacement.OnScalp(["A", "B", "C"], [At(Radius - 0.004), At(Radius - 0.012), At(Radius - 0.003)], ScalpSurface.Of(thick), thick, warnings, "electrodes.tsv");
        Assert.All(placed, e => Assert.False(e.IsInterior));
        Assert.Matches(@"^electrodes\.tsv: electrodes more than 5 mm below the scalp were moved up to it.*: B \(scalp, 1[123] mm below the scalp\);", Assert.Single(warnings));
    }

    [Fact]
    public void ContactInACavity_IsRefused()
    {
        TissueVolume hollow = LabelledHeads.Of(0.004, 0.104, p => p.Norm < 0.03 || p.Norm > Radius ? 0 : 5);
        InputException error = Assert.Throws<InputException>(() => ElectrodePlacement.OnScalp(["D1"], [Vec3.Zero], ScalpSurface.Of(hollow), hollow, []));
        Assert.Contains("'D1' lies in a cavity of air", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void CapInMetresReadAsMillimetres_IsRefusedAsAWrongUnit()
    {
        (string, Vec3)[] cap = [.. Enumerable.Range(0, 20).Select(k => ($"E{k}", GoldenSpiral.Point(k, 20, 0) * Radius / 1000))];
        Assert.Contains("in another unit", Assert.Throws<InputException>(() => Place([], cap)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Coil_InsideTheHead_IsRefusedWithItsDepth()
    {
        MegChannel Axial(string name, double radius) => new(name, CoilKind.AxialGradiometer, [new(At(radius), Side, 1), new(At(radius + 0.05), Side, -1)]);
        CoilPlacement.CheckOutside(Scalp.Value, [Axial("S001", 0.117), Axial("S002", Radius + Voxel)], "coils.tsv");
        InputException error = Assert.Throws<InputException>(() => CoilPlacement.CheckOutside(
            Scalp.Value, [Axial("S006", 0.117), Axial("S007", 0.060), new("S008", CoilKind.Magnetometer, [new(new(0, double.NaN, 0), Side, 1)])], "coils.tsv"));
        Assert.Null(CoilPlacement.TooNear(Scalp.Value, [Axial("S001", 0.117), Axial("S002", Radius + 2 * Voxel)], Voxel, "coils.tsv"));
        Assert.Matches(@"^coils\.tsv: 1 of 2 channels .* one voxel \(2 mm\): S003 [01]\.\d mm;", CoilPlacement.TooNear(Scalp.Value, [Axial("S001", 0.117), Axial("S003", Radius + 0.5 * Voxel)], Voxel, "coils.tsv"));
        Assert.Equal(2, error.Problems.Count);
        Assert.Matches(@"^channel S007 has a coil point inside the head, 3[123]\.\d mm below the scalp", error.Problems[0].Message);
        Assert.Contains("S008 has a coil point whose place is not a number", error.Problems[1].Message, StringComparison.Ordinal);
    }
}
