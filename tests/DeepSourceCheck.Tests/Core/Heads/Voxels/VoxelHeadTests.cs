using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

/// <summary>A layered sphere of voxels knows its depths and directions, which are those of the sphere.</summary>
public class VoxelHeadTests
{
    private const double Edge = 0.004;

    // The surface lies between the last centre inside and the first outside: half a voxel along an axis, up to half a diagonal elsewhere.
    private const double DepthError = 0.87 * Edge;

    // Steps of 4 mm voxels on a radius of 71 mm after smoothing to 4 mm; near the skull two nearest voxels of bone compete.
    private const double AngleDeg = 8;

    // The fit to thousands of faces of 4 mm voxels finds the centre to a fraction of a voxel.
    private const double CentreError = 0.001;

    private static readonly VoxelHead Head = new("voxels: sphere", SphereVolumes.Of(Edge));

    private static readonly Vec3[] Directions = [.. Enumerable.Range(0, 40).Select(k => GoldenSpiral.Point(k, 40))];

    [Fact]
    public void Depths_AreThoseOfTheSphere() => Assert.All(Directions, u =>
    {
        foreach (double r in new[] { 0.060, 0.045, 0.03 })
        {
            Assert.InRange(Head.Depth(r * u)!.Value, 0.092 - r - DepthError, 0.092 - r + DepthError);
            Assert.InRange(Head.DepthBelowInnerSkull(r * u)!.Value, 0.071 - r - DepthError, 0.071 - r + DepthError);
        }
    });

    [Fact]
    public void DepthBelowInnerSkull_IsKnownWithinTheSkullAlone()
    {
        Assert.Null(Head.DepthBelowInnerSkull(new(0, 0, 0.080)));
        Assert.Null(Head.DepthBelowInnerSkull(new(0, 0.088, 0)));
        Assert.NotNull(Head.DepthBelowInnerSkull(new(0.067, 0, 0)));
    }

    [Fact]
    public void Outward_IsTheRadiusOfTheFittedSphere() => Assert.All(Directions, u =>
    {
        Assert.True(Head.Sphere.IsInnerSkull);
        foreach (double r in new[] { 0.062, 0.035, 0.012 })
        {
            Assert.InRange(TestHeads.AngleDeg(u, Head.Outward(r * u)!.Value), 0, Math.Atan(CentreError / r) * 180 / Math.PI);
        }
    });

    [Fact]
    public void Outward_OfADeepSource_LooksAwayFromTheCentre_NotAtTheNearestBone()
    {
        // A head with a flat base 30 mm below its centre: 15 mm above the centre and 5 mm aside, the nearest bone lies below, the radius points up.
        var grid = new VoxelGrid(104, 104, 104, new(new(0.002, 0, 0), new(0, 0.002, 0), new(0, 0, 0.002), new(-0.103, -0.103, -0.103)));
        var head = new VoxelHead("voxels: flat base", SphereVolumes.Filled(grid, p =>
            (byte)(p.Norm > 0.092 || p.Z < -0.045 ? 0 : p.Norm > 0.086 || p.Z < -0.040 ? 1 : p.Norm > 0.080 || p.Z < -0.030 ? 2 : 4)));
        Vec3 place = new(0.005, 0, 0.015);
        Assert.InRange(TestHeads.AngleDeg(place, head.Outward(place)!.Value), 0, 5);
        Assert.InRange(TestHeads.AngleDeg(new(0, 0, -1), head.InnerSkullNormal(place)!.Value), 0, AngleDeg);
    }

    [Fact]
    public void InnerSkullNormal_IsThatOfTheSphere() => Assert.All(Directions, u =>
    {
        foreach (double r in new[] { 0.062, 0.05, 0.035 })
        {
            Assert.InRange(TestHeads.AngleDeg(u, Head.InnerSkullNormal(r * u)!.Value), 0, AngleDeg);
        }
    });

    [Fact]
    public void InnerSkullNormal_IsThatOfTheWallNotOfTheCentre()
    {
        // A cylinder along x: its wall's normals have no x, while directions from the centre do.
        var grid = new VoxelGrid(60, 40, 40, new(new(0.002, 0, 0), new(0, 0.002, 0), new(0, 0, 0.002), new(-0.059, -0.039, -0.039)));
        var head = new VoxelHead("voxels: cylinder", SphereVolumes.Filled(grid, p =>
        {
            double r = Math.Sqrt(p.Y * p.Y + p.Z * p.Z);
            return (byte)(Math.Abs(p.X) > 0.057 || r > 0.036 ? 0 : r > 0.032 ? 1 : r > 0.026 ? 2 : 4);
        }));
        Vec3 normal = head.InnerSkullNormal(new(0.03, 0.020, 0))!.Value;
        Assert.InRange(TestHeads.AngleDeg(new(0, 1, 0), normal), 0, AngleDeg);
    }

    [Fact]
    public void CorticalNormal_WithoutWhiteMatter_IsNotKnown()
    {
        Assert.False(Head.KnowsCortex);
        Assert.Null(Head.CorticalNormal(new(0, 0, 0.06)));
    }

    [Theory]
    [InlineData(0, 0, 0.05, null)]
    [InlineData(0, 0, 0.0675, "in csf, where no source stands")]
    [InlineData(0.077, 0, 0, "in skull, where no source stands")]
    [InlineData(0, -0.088, 0, "in scalp, where no source stands")]
    public void Refusal_NamesTheTissue(double x, double y, double z, string? reason) => Assert.Equal(reason, Head.WhyRefused(new(x, y, z)));

    [Fact]
    public void Refusal_InAir_SaysHowFarTheHeadIs()
    {
        string near = Head.WhyRefused(new(0.098, 0, 0))!, far = Head.WhyRefused(new(0, 0, 0.292))!;
        Assert.Matches("^in air, [5-7]\\.[0-9] mm from the nearest tissue of the head$", near);
        Assert.Matches("^in air, (19[89]|20[0-2])\\.[0-9] mm from the nearest tissue of the head$", far);
    }

    [Fact]
    public void ClosedAir_IsNoSurface()
    {
        // A hole of one voxel near the centre: the depth beside it is still that below the scalp.
        VoxelHead head = new("voxels", SphereVolumes.Of(Edge).With((new(0.002, 0.002, 0.002), 0)));
        Assert.Equal("air", head.TissueAt(new(0.002, 0.002, 0.002)));
        Assert.InRange(head.Depth(new(0.006, 0.002, 0.002))!.Value, 0.08, 0.09);
        Assert.Null(head.Depth(new(1, 0, 0)));
    }

    [Fact]
    public void BackgroundPlaces_AreGreyAndEvenOverTheHead()
    {
        IReadOnlyList<Vec3> places = Head.BackgroundPlaces(500);
        Assert.Equal(500, places.Distinct().Count());
        Assert.All(places, p => Assert.Equal("brain", Head.TissueAt(p)));

        // Evenly: each eighth of the ball holds an eighth of them, within a fifth.
        Assert.All(Enumerable.Range(0, 8), octant => Assert.InRange(places.Count(p => (p.X > 0 ? 1 : 0) + (p.Y > 0 ? 2 : 0) + (p.Z > 0 ? 4 : 0) == octant), 50, 75));
    }

    [Fact]
    public void GreyPlaces_KeepToTheirDepth_AndGiveAllWhereFewerThanWanted()
    {
        IReadOnlyList<Vec3> shallow = Head.GreyPlaces(long.MaxValue, 0.010);
        Assert.Equal(Head.GreyVoxels(0.010), shallow.Count);
        Assert.All(shallow, p => Assert.InRange(Head.DepthBelowInnerSkull(p)!.Value, 0, 0.010 + 1e-6));
        Assert.True(shallow.Count < Head.GreyVoxels(double.PositiveInfinity));
    }

    [Fact]
    public void HeadAtTheVolumesFace_IsRefused()
    {
        var grid = new VoxelGrid(4, 4, 4, new(new(0.004, 0, 0), new(0, 0.004, 0), new(0, 0, 0.004), Vec3.Zero));
        Assert.Throws<ArgumentException>(() => new VoxelHead("voxels", SphereVolumes.Filled(grid, _ => 4)));
    }

    [Fact]
    public void WithoutBone_OutwardIsSeenFromTheScalpsSphere_AndThereIsNoNormalOfTheSkull()
    {
        VoxelHead head = new("voxels", SphereVolumes.Of(Edge, [0.05, 0, 0, 0]));
        Assert.False(head.HasSkull);
        Assert.False(head.Sphere.IsInnerSkull);
        Assert.InRange(TestHeads.AngleDeg(new(1, 0, 0), head.Outward(new(0.02, 0, 0))!.Value), 0, Math.Atan(CentreError / 0.02) * 180 / Math.PI);
        Assert.Null(head.InnerSkullNormal(new(0.02, 0, 0)));
        Assert.Null(head.DepthBelowInnerSkull(new(0.02, 0, 0)));
    }
}
