using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

/// <summary>On a sheet folded by a formula the cortex faces where the formula says, and its depth and source angle follow.</summary>
public class CorticalNormalTests
{
    // Worked out apart from this program, in plain loops over the same folds and voxels: median 2.1 and 95 % 4.5 degrees at 1 mm, 3.5 and 7.4 at 2 mm; which voxels are picked moves them by a fourth.
    // Smoothing flattens the folds, steps of the voxels scatter the rest; with crests on a plane of centres they are twice as large.
    private const double FineMedianDeg = 2.6, FineHighDeg = 5.6, CoarseMedianDeg = 4.3, CoarseHighDeg = 9.2;

    private static readonly VoxelHead Head = FoldedHead.Of(0.001);

    private static readonly FilledRegion Cortex = CortexVoxels.Fill(Head, 0.002);

    // Away from the volume's cut sides, where the sheet ends.
    private static readonly (Vec3 At, CorticalPlace Place)[] Inner =
        [.. Cortex.Positions.Zip(Cortex.CorticalPlaces).Where(p => IsInner(p.First)).Select(p => (p.First, p.Second!.Value))];

    [Theory]
    [InlineData(0.001, FineMedianDeg, FineHighDeg)]
    [InlineData(0.002, CoarseMedianDeg, CoarseHighDeg)]
    public void Normal_IsThatOfTheFormula(double edge, double median, double high)
    {
        VoxelHead head = FoldedHead.Of(edge);
        double[] off = [.. head.GreyPlaces(5000, CortexVoxels.DeepestGrey).Where(IsInner).Select(p => TestHeads.AngleDeg(FoldedHead.Normal(p), head.CorticalNormal(p)!.Value)).Order()];
        Assert.True(off.Length > 1000);
        Assert.InRange(off[off.Length / 2], 0, median);
        Assert.InRange(off[(int)(0.95 * off.Length)], 0, high);
    }

    [Fact]
    public void Normal_LooksFromWhiteMatterOutwards() => Assert.All(Inner, p => Assert.True(p.Place.Normal.Z > 0));

    [Fact]
    public void Depth_IsThatBelowTheFlatWall()
    {
        // Half a voxel where the wall's first centres lie, and rounding of single precision.
        Assert.All(Inner, p => Assert.InRange(p.Place.Depth, FoldedHead.Wall - p.At.Z - 0.0006, FoldedHead.Wall - p.At.Z + 0.0006));
    }

    [Fact]
    public void SourceAngle_IsTheSlopeOfTheSheet()
    {
        // The wall is flat: the angle is that of the sheet's normal against z; up to 53 degrees on its flanks.
        double[] off = [.. Inner.Select(p => Math.Abs(p.Place.SourceAngle * 180 / Math.PI - TestHeads.AngleDeg(new(0, 0, 1), FoldedHead.Normal(p.At)))).Order()];
        Assert.InRange(off[(int)(0.95 * off.Length)], 0, FineHighDeg);
        Assert.InRange(Inner.Max(p => p.Place.SourceAngle) * 180 / Math.PI, 45, 60);
        Assert.InRange(Inner.Min(p => p.Place.SourceAngle) * 180 / Math.PI, 0, 5);
    }

    [Fact]
    public void GreyMatterFarFromWhiteAndFluid_HasNoNormal()
    {
        // A ball of grey of 12 mm within the white: at its centre nothing tells a side.
        VoxelHead head = FoldedHead.Of(0.001);
        TissueVolume volume = head.Volume;
        byte[] cells = volume.Cells.ToArray();
        Vec3 centre = new(0, 0, -0.012);
        for (int at = 0; at < cells.Length; at++)
        {
            (int i, int j, int k) = volume.Grid.Voxel(at);
            cells[at] = (volume.Grid.Centre(i, j, k) - centre).Norm < 0.010 && cells[at] == 6 ? (byte)5 : cells[at];
        }

        Assert.Null(new VoxelHead("voxels", new(volume.Grid, cells, volume.Tissues)).CorticalNormal(centre));
    }

    [Fact]
    public void Cortex_ReachesDownTheFolds_WithAPlaceForEachDipole()
    {
        Assert.Equal(Cortex.Positions.Length, Cortex.CorticalPlaces.Length);
        Assert.All(Cortex.Positions, p => Assert.Equal("grey", Head.TissueAt(p)));
        Assert.True(Inner.Max(p => p.Place.Depth) > CortexVoxels.DeepestBrain + 0.004);
        Assert.True(Inner.Max(p => p.Place.Depth) <= CortexVoxels.DeepestGrey);
    }

    private static bool IsInner(Vec3 p) => Math.Abs(p.X) < 0.036 && Math.Abs(p.Y) < 0.036;
}
