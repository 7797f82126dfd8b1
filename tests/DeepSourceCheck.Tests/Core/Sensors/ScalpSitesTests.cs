using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Sensors;

public class ScalpSitesTests
{
    private static readonly Vec3 Centre = new(0.0013, -0.0027, 0.0041);
    private const double Radius = 0.092, Voxel = 0.002;

    private static readonly Lazy<ScalpSurface> Ball = new(() => ScalpSurface.Of(LabelledHeads.Sphere(Voxel, Centre)));

    private static Dictionary<string, Vec3> SphereLandmarks => new()
    {
        ["Nz"] = Centre + Radius * ElectrodeLayout.Direction("Nz"),
        ["Iz"] = Centre + Radius * ElectrodeLayout.Direction("Iz"),
        ["LPA"] = Centre + Radius * ElectrodeLayout.Direction("T9"),
        ["RPA"] = Centre + Radius * ElectrodeLayout.Direction("T10"),
    };

    // The same rules on a labelled sphere and on the sphere itself: what differs is the staircase, half a voxel at worst, and what it does to lengths.
    [Fact]
    public void LabelledSphere_GivesTheSitesOfTheSphere()
    {
        ScalpSites sites = ScalpSites.Of(Ball.Value, LandmarkPlacement.On(Ball.Value, SphereLandmarks));
        List<double> off = [];
        foreach (string name in ElectrodeLayout.Known)
        {
            Assert.True(sites.TryPosition(name, out Vec3 position));
            off.Add((position - Centre - Radius * ElectrodeLayout.Direction(name)).Norm);
            Assert.True(off[^1] < Voxel, $"{name} is {1000 * off[^1]:0.00} mm off");
        }

        Assert.Equal(331, off.Count);
        Assert.InRange(off.Average(), 0, 0.25 * Voxel);

        // The midline measures 23 + 180 + 14 degrees of the sphere.
        RelativeAssert.Equal(217 * Math.PI / 180 * Radius, sites.MidlineLength, 0.01);
        Assert.InRange(sites.CzOffCoronal, 0, 1e-5);
        Assert.False(sites.TryPosition("Cx", out _));
    }

    // One description for both: without the mirror that makes a sphere's sides alike to the last bit, each side's own circles give the same sites.
    [Fact]
    public void Rules_WithEachSidesOwnCurves_AgreeWithTheMirroredSphere()
    {
        Vec3 left = ElectrodeLayout.Direction("T9"), right = ElectrodeLayout.Direction("T10"), cz = ElectrodeLayout.Direction("Cz");
        SphereArc midline = new(ElectrodeLayout.Direction("Nz"), cz, ElectrodeLayout.Direction("Iz"));
        Dictionary<string, Vec3> at = TenFiveRules.Place(left, right, cz, midline, (a, b, c) => new SphereArc(a, b, c));
        Assert.Equal(329, at.Count);
        Assert.All(at, site => Assert.InRange((site.Value - ElectrodeLayout.Direction(site.Key)).Norm, 0, 1e-12));
    }

    // The mastoid rule, solved on the sphere, reproduces the contract's direction: azimuth 95 degrees, elevation -26.
    [Fact]
    public void MastoidRule_GivesTheContractsDirectionOnTheSphere()
    {
        (double a, double b) = ScalpSites.MastoidShares();
        Vec3 t9 = ElectrodeLayout.Direction("T9");
        Vec3 mastoid = t9 + a * (ElectrodeLayout.Direction("T9h") - t9) + b * (ElectrodeLayout.Direction("TP9") - t9);
        Assert.InRange(TestHeads.AngleDeg(mastoid, ElectrodeLayout.Direction("M1")), 0, 1e-9);
        Assert.InRange(a, 0.2, 0.8);
        Assert.InRange(b, 0.1, 0.6);
    }

    [Fact]
    public void Layout_OnAScalp_ListsSitesThenThoseThatJoin()
    {
        ScalpSites sites = ScalpSites.Of(Ball.Value, LandmarkPlacement.On(Ball.Value, SphereLandmarks));
        Electrode[] electrodes = ElectrodeLayout.OnScalp("ten-ten-64", sites, ["M1", "Cz", "AFF5h"]);
        Assert.Equal(66, electrodes.Length);
        Assert.Equal(["M1", "AFF5h"], electrodes[64..].Select(e => e.Name));
        Assert.Equal([false, true], electrodes[64..].Select(e => e.InAverage));
        Assert.All(electrodes, e => Assert.InRange((e.Position - Centre).Norm - Radius, -0.5 * Voxel, 0.5 * Voxel));
        Assert.Contains("Cz", Assert.Throws<InputException>(() => ElectrodeLayout.OnScalp("ten-ten-64", sites, ["Cx"])).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void GivenLandmark_FarFromTheScalp_IsRefusedByName()
    {
        Dictionary<string, Vec3> given = SphereLandmarks;
        given["Iz"] = Centre + (Radius + 0.030) * ElectrodeLayout.Direction("Iz");
        InputException error = Assert.Throws<InputException>(() => LandmarkPlacement.On(Ball.Value, given));
        Assert.Equal("head.voxels.landmarks_mm.Iz", error.Problems.Single().Key);
        Assert.Matches(@"\b(29|30)\.\d mm outside", error.Message);

        given["Iz"] = Centre + (Radius + 0.015) * ElectrodeLayout.Direction("Iz");
        Assert.InRange(LandmarkPlacement.On(Ball.Value, given).Inion.MovedBy, 0.014, 0.016);
        given["Inion"] = given["Iz"];
        Assert.Contains("there is no landmark 'Inion'", Assert.Throws<InputException>(() => LandmarkPlacement.On(Ball.Value, given)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void LandmarksThatAreNotGiven_AreFoundAndStated()
    {
        HeadLandmarks some = LandmarkPlacement.On(Ball.Value, new Dictionary<string, Vec3> { ["Nz"] = SphereLandmarks["Nz"] });
        Assert.True(some.Nasion.Given);
        Assert.False(some.Inion.Given);
        Assert.Contains(some.Warnings, w => w.Contains("Iz (", StringComparison.Ordinal) && w.Contains("LPA (", StringComparison.Ordinal) && !w.Contains("Nz (", StringComparison.Ordinal));
        Assert.Empty(LandmarkPlacement.On(Ball.Value, SphereLandmarks).Warnings);
    }

    [Theory]
    [InlineData("LPA", "RPA", "LPA lies to the right of RPA")]
    [InlineData("Nz", "Iz", "Nz lies behind Iz")]
    public void SwappedLandmarks_AreRefused(string one, string other, string message)
    {
        Dictionary<string, Vec3> given = SphereLandmarks;
        (given[one], given[other]) = (given[other], given[one]);
        HeadLandmarks landmarks = LandmarkPlacement.On(Ball.Value, given);
        Assert.Contains(message, Assert.Throws<InputException>(() => ScalpSites.Of(Ball.Value, landmarks)).Message, StringComparison.Ordinal);
    }

    // Sites and arc lengths found by others on the same head with the same landmarks. Measured: 0.39 mm on average, 0.74 at most; arcs 386.8 and 398.2 mm.
    [RealVolumeFact]
    public void RealHead_WithGivenLandmarks_HasTheSitesFoundByOthers()
    {
        ScalpSurface scalp = ScalpSurface.Of(LabelledHeads.ReadReal("head_2mm.nii.gz"));
        ScalpSites sites = ScalpSites.Of(scalp, LandmarkPlacement.On(scalp, LabelledHeads.RealLandmarks()));
        double[] off = [.. Off(sites)];
        Assert.Equal(21, off.Length);
        Assert.InRange(off.Average(), 0, 0.003);
        Assert.InRange(off.Max(), 0, 0.005);
        RelativeAssert.Equal(0.3861, sites.MidlineLength, 0.01);
        RelativeAssert.Equal(0.3985, sites.CoronalLength, 0.01);
    }

    // Measured: 2.8 mm on average, 5.2 at most.
    [RealVolumeFact]
    public void RealHead_WithFoundLandmarks_HasItsSitesNearby()
    {
        ScalpSurface scalp = ScalpSurface.Of(LabelledHeads.ReadReal("head_2mm.nii.gz"));
        double[] off = [.. Off(ScalpSites.Of(scalp, LandmarkPlacement.On(scalp)))];
        Assert.InRange(off.Average(), 0, 0.005);
        Assert.InRange(off.Max(), 0, 0.010);
    }

    private static IEnumerable<double> Off(ScalpSites sites) => LabelledHeads.RealSites()
        .Select(site => sites.TryPosition(site.Key, out Vec3 at) ? (at - site.Value).Norm : double.PositiveInfinity);
}
