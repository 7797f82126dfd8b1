using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Regions;

/// <summary>Regions in a head of voxels: the cortex, and what others lose to other tissues.</summary>
public class CortexVoxelsTests
{
    // Csf of 2 mm, so that grey matter lies within 6 mm of the skull.
    private static readonly VoxelHead Head = new("voxels: head.nii.gz", SphereVolumes.Of(0.004, [0.092, 0.083, 0.071, 0.069]));

    [Fact]
    public void Cortex_OfABrainWithoutWhiteMatter_IsItsOutermostSixMillimetres()
    {
        FilledRegion cortex = CortexVoxels.Fill(Head);
        Assert.All(cortex.Positions, p =>
        {
            Assert.Equal("brain", Head.TissueAt(p));
            Assert.InRange(Head.DepthBelowInnerSkull(p)!.Value, 0, 0.006 + 1e-6);
        });

        // Each stands for its spacing cubed; a shell from 65 to 69 mm holds 226 mL, which voxels of 4 mm meet within a tenth.
        RelativeAssert.Equal(4.0 / 3.0 * Math.PI * (Math.Pow(0.069, 3) - Math.Pow(0.065, 3)), cortex.Volume!.Value, 0.25);
        RelativeAssert.Equal(cortex.ShapeVolume!.Value, cortex.Volume.Value, 0.01);
        Assert.Matches("^cortex: all grey matter within 6 mm .* that of the cerebellum .* give a mask", Assert.Single(cortex.Warnings));
        Assert.Empty(cortex.CorticalPlaces);
        Assert.Equal(CortexVoxels.Count(Head, 0.006), cortex.Positions.Length);
    }

    [Fact]
    public void Cortex_WithoutGreyMatterNearTheSkull_IsRefused()
    {
        VoxelHead deep = new("voxels", SphereVolumes.Of(0.004, [0.092, 0.083, 0.071, 0.05]));
        InputException error = Assert.Throws<InputException>(() => CortexVoxels.Fill(deep));
        Assert.Contains("0 grey voxels lie within 6 mm of the inner skull", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Region_SaysWhatShareFellIntoWhichTissue()
    {
        // Half a ball of 4 mm about a point on the brain's surface: the outer half lies in csf and skull.
        var shape = new Ellipsoid(new(0, 0, 0.069), new(0.005, 0.005, 0.005), Rotation.FromFixedAxes(0, 0, 0)).Shape;
        FilledRegion region = RegionFill.Fill("edge", shape, 0.001, Head, "ellipsoid");
        string warning = Assert.Single(region.Warnings);
        Assert.Matches(@"^edge: \d+ % of it \(\d+ of \d+ dipoles\) fell into (csf|skull) \(\d+ %\), (csf|skull) \(\d+ %\), where no source stands, and was dropped", warning);
        Assert.All(region.Dropped, d => Assert.Matches("^in (csf|skull), where no source stands$", d.Reason));
    }

    [Fact]
    public void RegionInAir_IsRefusedByNameAndTissue()
    {
        var shape = new Ellipsoid(new(0.15, 0, 0), new(0.005, 0.005, 0.005), Rotation.FromFixedAxes(0, 0, 0)).Shape;
        InputException error = Assert.Throws<InputException>(() => RegionFill.Fill("far-nucleus", shape, 0.001, Head, "mask"));
        Assert.Matches(@"far-nucleus.*in air, 5[78]\.\d mm from the nearest tissue", error.Message);
    }
}
