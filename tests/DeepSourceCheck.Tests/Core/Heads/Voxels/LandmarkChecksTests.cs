using System.Globalization;
using System.Text.RegularExpressions;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Heads.Voxels.Phantom;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

/// <summary>Landmarks that are all given are held to the shape of the head, through <see cref="LandmarkPlacement"/> as a study gives them.</summary>
public class LandmarkChecksTests
{
    private static readonly Lazy<ScalpSurface> Upright = new(() => ScalpSurface.Of(new FacePhantom(1).Volume(0.002)));

    private static Dictionary<string, Vec3> Given(FacePhantom head) =>
        new() { ["Nz"] = head.Nasion, ["Iz"] = head.Inion, ["LPA"] = head.Preauricular(-1), ["RPA"] = head.Preauricular(1) };

    private static IReadOnlyList<string> Warnings(ScalpSurface scalp, Dictionary<string, Vec3> given) => LandmarkPlacement.On(scalp, given).Warnings;

    // The landmarks follow from the heads' equations, not from the finder.
    [Theory]
    [InlineData(1.0, 0, 0, 0)]
    [InlineData(0.55, 0, 0, 0)]
    [InlineData(1.1, 0, 3, -6)]
    [InlineData(1.0, -5, 0, 0)]
    public void LandmarksOfTheHead_PassWithoutAWord(double scale, double x, double y, double z)
    {
        FacePhantom head = new(scale, Rotation.FromFixedAxes(x * Math.PI / 180, y * Math.PI / 180, z * Math.PI / 180));
        Assert.Empty(Warnings(ScalpSurface.Of(head.Volume(0.002)), Given(head)));
    }

    [Theory]
    [InlineData(PhantomKind.Adult, 0.002)]
    [InlineData(PhantomKind.Neonate, 0.0015)]
    public void LandmarksOfThePhantom_PassWithoutAWord(PhantomKind kind, double voxel)
    {
        PhantomHead head = PhantomHead.Generate(kind, voxel);
        Assert.Empty(Warnings(ScalpSurface.Of(head.ToTissueVolume()), new(head.Landmarks)));
    }

    [RealVolumeFact]
    public void LandmarksOfARealHead_PassWithoutAWord() => Assert.Empty(Warnings(ScalpSurface.Of(LabelledHeads.ReadReal("head_2mm.nii.gz")), LabelledHeads.RealLandmarks()));

    // A head that nods by a known angle, with its own landmarks: what is said is that angle, to the 5 degrees by which people's lines from Nz to Iz differ.
    [Theory]
    [InlineData(-22, "down")]
    [InlineData(22, "up")]
    public void PitchedHead_IsToldWithItsAngle(double degrees, string face)
    {
        FacePhantom head = new(1, Rotation.FromFixedAxes(degrees * Math.PI / 180, 0, 0));
        string warning = Assert.Single(Warnings(ScalpSurface.Of(head.Volume(0.002)), Given(head)), w => w.Contains("pitched by", StringComparison.Ordinal));
        Match match = Regex.Match(warning, @"^head\.voxels\.landmarks_mm: Nz and Iz say that the head is pitched by (\d+) degrees, its face (up|down)");
        Assert.True(match.Success, warning);
        Assert.Equal(face, match.Groups[2].Value);
        Assert.InRange(double.Parse(match.Groups[1].Value, CultureInfo.InvariantCulture), 17, 27);
    }

    // Every landmark in turn slips 45 mm along the skin of an upright head.
    [Theory]
    [InlineData("Nz", 0, 1)]
    [InlineData("Iz", 0, 1)]
    [InlineData("LPA", 1, 0)]
    [InlineData("RPA", 1, 0)]
    public void MisplacedLandmark_IsNamedAlone(string name, double forward, double up)
    {
        Dictionary<string, Vec3> given = Given(new(1));
        given[name] = Upright.Value.Nearest(given[name] + 0.045 * new Vec3(0, forward, up)).Point;
        IReadOnlyList<string> warnings = Warnings(Upright.Value, given);
        Assert.Contains(warnings, w => Regex.IsMatch(w, $@"^head\.voxels\.landmarks_mm: {name} lies [345]\d mm from where the shape of an upright head has it"));
        Assert.All(new[] { "Nz", "Iz", "LPA", "RPA" }.Except([name]), other => Assert.DoesNotContain(warnings, w => w.Contains($": {other} lies", StringComparison.Ordinal) || w.Contains($"({other} lies", StringComparison.Ordinal)));
        if (name is "LPA" or "RPA")
        {
            Assert.Contains(warnings, w => w.Contains("the line from LPA to RPA stands ", StringComparison.Ordinal) && w.Contains($"({name} lies farther", StringComparison.Ordinal));
        }
    }

    [Fact]
    public void FrameThatContradictsTheShape_IsToldWhereAllLandmarksAreGivenToo()
    {
        FacePhantom head = new(1, Rotation.FromFixedAxes(0, 0, 0.35));
        Assert.Contains(Warnings(ScalpSurface.Of(head.Volume(0.004)), Given(head)), w => w.Contains("turned or tilted by", StringComparison.Ordinal));
    }
}
