using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Geometry;

public sealed class VoxelGridTests
{
    /// <summary>Products of three numbers given in decimal metres.</summary>
    private const double Rounding = 1e-12;

    private static readonly Affine Oblique = new(new(0.0019, 0.0006, 0.0001), new(-0.0005, 0.0028, 0.0004), new(0.0002, -0.0003, 0.004), new(-0.05, 0.02, 0.01));

    [Fact]
    public void CentreOfEveryVoxel_LiesInThatVoxel()
    {
        VoxelGrid grid = new(5, 4, 3, Oblique);
        for (int index = 0; index < grid.Count; index++)
        {
            (int i, int j, int k) = grid.Voxel(index);
            Assert.Equal(index, grid.Index(i, j, k));
            Assert.Equal(index, grid.IndexAt(grid.Centre(i, j, k)));
        }
    }

    // The rule of the study file: voxel = floor(i + 0.5 + 1e-9). A node on a border belongs to the upper voxel, on any machine.
    [Fact]
    public void PointOnBorder_BelongsToUpperVoxel()
    {
        VoxelGrid grid = new(4, 4, 4, Affine.Identity.ThenScale(0.002));
        Assert.Equal(grid.Index(1, 0, 0), grid.IndexAt(new(0.001, 0, 0)));
        Assert.Equal(grid.Index(2, 3, 1), grid.IndexAt(new(0.003, 0.005, 0.001)));
        Assert.Equal(grid.Index(0, 0, 0), grid.IndexAt(new(0.001 - 1e-10, 0, 0)));
        Assert.Equal(grid.Index(0, 0, 0), grid.IndexAt(new(-0.001, -0.001, -0.001)));
        Assert.Equal(-1, grid.IndexAt(new(0.007, 0, 0)));
        Assert.Equal(-1, grid.IndexAt(new(0, -0.0011, 0)));
        Assert.Equal(-1, grid.IndexAt(new(0, double.NaN, 0)));
        Assert.Equal(-1, grid.IndexAt(new(0, double.PositiveInfinity, 0)));
    }

    [Fact]
    public void PointsOutsideWorldBounds_LieInNoVoxel()
    {
        VoxelGrid grid = new(5, 4, 3, Oblique);
        (Vec3 low, Vec3 high) = grid.WorldBounds();
        Gen<Vec3> near = Gen.Select(Gen.Double[-0.1, 0.1], Gen.Double[-0.1, 0.1], Gen.Double[-0.1, 0.1], (x, y, z) => new Vec3(x, y, z));
        near.Sample(p => grid.IndexAt(p) < 0
            || (p.X >= low.X - Rounding && p.X <= high.X + Rounding && p.Y >= low.Y - Rounding && p.Y <= high.Y + Rounding && p.Z >= low.Z - Rounding && p.Z <= high.Z + Rounding));
    }

    [Fact]
    public void VolumeAndSizes_FollowFromTheMap()
    {
        VoxelGrid grid = new(2, 2, 2, new(new(0, 0.003, 0), new(-0.002, 0, 0), new(0, 0, 0.004), Vec3.Zero));
        RelativeAssert.Equal(24e-9, grid.VoxelVolume, Rounding);
        (Vec3 low, Vec3 high) = grid.WorldBounds();
        RelativeAssert.Close([-0.0015, -0.003, -0.002], [low.X, low.Y, low.Z], Rounding);
        RelativeAssert.Close([0.0045, 0.001, 0.006], [high.X, high.Y, high.Z], Rounding);
    }

    [Fact]
    public void ImpossibleGrids_AreRefused()
    {
        Assert.Throws<ArgumentOutOfRangeException>(() => new VoxelGrid(0, 1, 1, Affine.Identity));
        Assert.Throws<ArgumentOutOfRangeException>(() => new VoxelGrid(1 << 14, 1 << 14, 1 << 12, Affine.Identity));
        Assert.Throws<ArgumentException>(() => new VoxelGrid(1, 1, 1, default));
    }
}
