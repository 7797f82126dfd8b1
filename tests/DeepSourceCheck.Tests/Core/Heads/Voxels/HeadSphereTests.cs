using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

public class HeadSphereTests
{
    private static readonly Vec3 Centre = new(0.0013, -0.0027, 0.0041);

    // Voxel faces scatter about the sphere by a quarter of a voxel; thousands of them average that out.
    private const double CentreWithin = 0.0006, RadiusWithin = 0.0003;

    [Fact]
    public void LayeredSphere_GivesItsInnerSkull()
    {
        TissueVolume volume = LabelledHeads.Sphere(0.002, Centre);
        HeadSphere sphere = HeadSphere.Of(volume, ScalpSurface.Of(volume));
        Assert.True(sphere.IsInnerSkull);
        Assert.InRange((sphere.Sphere.Centre - Centre).Norm, 0, CentreWithin);
        Assert.InRange(sphere.Sphere.Radius - 0.080, -RadiusWithin, RadiusWithin);
    }

    [Fact]
    public void HeadWithoutSkull_GivesItsScalp()
    {
        TissueVolume volume = LabelledHeads.Of(0.002, 0.102, p => (p - Centre).Norm < 0.092 ? 1 : 0);
        HeadSphere sphere = HeadSphere.Of(volume, ScalpSurface.Of(volume));
        Assert.False(sphere.IsInnerSkull);
        Assert.InRange((sphere.Sphere.Centre - Centre).Norm, 0, CentreWithin);
        Assert.InRange(sphere.Sphere.Radius - 0.092, -RadiusWithin, RadiusWithin);
    }

    // The contract's adult sphere (centre (0, -18, 5), inner skull 80 mm) was fitted to a head in the same space by others. Measured: (0.5, -18.2, 5.3), 81.2 mm.
    [RealVolumeFact]
    public void RealHead_FitsTheAdultPreset()
    {
        TissueVolume volume = LabelledHeads.ReadReal("head_2mm.nii.gz");
        HeadSphere sphere = HeadSphere.Of(volume, ScalpSurface.Of(volume));
        Assert.True(sphere.IsInnerSkull);
        Assert.InRange((sphere.Sphere.Centre - new Vec3(0, -0.018, 0.005)).Norm, 0, 0.003);
        Assert.InRange(sphere.Sphere.Radius, 0.078, 0.083);
    }
}
