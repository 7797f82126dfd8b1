using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

/// <summary>Each fault of a head, put into a faultless one.</summary>
public class HeadChecksTests
{
    private const double Edge = 0.004;
    private static readonly TissueVolume Good = SphereVolumes.Of(Edge);

    [Fact]
    public void FaultlessHead_IsFoundSo()
    {
        HeadFindings findings = SphereVolumes.Findings(Good);
        Assert.Empty(findings.Problems);
        Assert.Empty(findings.Warnings);
    }

    [Fact]
    public void Leak_NamesBothTissuesTheCountAndThePlace()
    {
        // A channel of csf through the skull along z, one voxel wide: voxels with centres at 2 mm and 74 to 82 mm.
        TissueVolume leaky = Good.With((new(0.002, 0.002, 0.074), 3), (new(0.002, 0.002, 0.078), 3), (new(0.002, 0.002, 0.082), 3));
        string leak = Assert.Single(SphereVolumes.Findings(leaky).Warnings, w => w.StartsWith("leak", StringComparison.Ordinal));
        Assert.StartsWith("leak: scalp touches csf at 1 voxel, at (2, 2, 82) mm; current passes there", leak, StringComparison.Ordinal);
    }

    [Fact]
    public void LeakAlongAnEdge_IsFoundToo()
    {
        // Walls of a corner: csf and scalp share an edge between two voxels of bone.
        var grid = new VoxelGrid(8, 8, 8, new(new(Edge, 0, 0), new(0, Edge, 0), new(0, 0, Edge), Vec3.Zero));
        TissueVolume volume = SphereVolumes.Filled(grid, p =>
        {
            int x = (int)Math.Round(p.X / Edge), y = (int)Math.Round(p.Y / Edge), z = (int)Math.Round(p.Z / Edge);
            return (byte)(x is 0 or 7 || y is 0 or 7 || z is 0 or 7 ? 0 : x <= 3 && y <= 3 ? 3 : x >= 4 && y >= 4 ? 1 : 2);
        });
        SkullLeak leak = Assert.Single(SkullLeaks.Find(volume, []), l => l.Outer.Kind == TissueKind.Scalp);
        Assert.Equal((6, 6), (leak.Voxels, leak.AlongEdges));
    }

    [Fact]
    public void AirBeyondTheVolumesEnd_IsNoLeak()
    {
        // The sphere cut at z = -40 mm: brain, csf and skull lie open at the volume's lower face.
        TissueVolume cut = Cut(Good, 14);
        HeadFindings findings = SphereVolumes.Findings(cut);
        Assert.Empty(findings.Warnings);

        // Turned over, the cut lies above: said, and still no leak.
        TissueVolume over = Turned(cut);
        string warning = Assert.Single(SphereVolumes.Findings(over).Warnings);
        Assert.Contains("touches the end of the volume above", warning, StringComparison.Ordinal);
    }

    [Fact]
    public void CutHead_EndsAsInItsFile_AndHasNoScalpThere()
    {
        TissueVolume cut = Cut(Good, 14);
        CroppedHead cropped = HeadCrop.Of(cut)!;
        TouchedFace below = Assert.Single(cropped.Touched);
        Assert.Equal((2, false, "below"), (below.Axis, below.AtEnd, below.Side));
        Assert.Equal(Enumerable.Range(0, cut.Grid.Nx * cut.Grid.Ny).Count(at => cut.Cells[at] != 0), below.Voxels);
        TissueVolume flush = HeadCrop.AsInFile(cropped.Volume, cropped.Touched);
        Assert.Equal(cropped.Volume.Grid.Nz - 1, flush.Grid.Nz);
        RelativeAssert.Equal(cut.Grid.Centre(0, 0, 0).Z, flush.Grid.Centre(0, 0, 0).Z, 1e-12);
        Assert.All(Enumerable.Range(0, 200), k =>
        {
            Vec3 p = 0.1 * Math.Cbrt((k + 0.5) / 200) * GoldenSpiral.Point(k, 200);
            Assert.Equal(cut.At(p), flush.At(p));
        });

        // Just above the cut, on the axis: as far from the scalp as the sphere's side, not as the cut.
        Vec3 above = new(0.002, 0.002, cut.Grid.Centre(0, 0, 1).Z);
        Assert.True(new VoxelHead("cut", cropped.Volume, cropped.Touched).Depth(above) > 0.06);
        Assert.True(new VoxelHead("cut", cropped.Volume).Depth(above) < 0.01);
    }

    [Fact]
    public void ThinSkull_IsMeasuredAgainstTwoVoxels()
    {
        double[] thin = [0.092, 0.083, 0.0785, 0.070], two = [0.092, 0.083, 0.075, 0.068], more = [0.092, 0.083, 0.073, 0.066];
        SkullThickness one = Thickness(SphereVolumes.Of(Edge, thin)), both = Thickness(SphereVolumes.Of(Edge, two));
        Assert.True(one.Share > 0.9, $"one voxel: {one.Share}");

        // Exactly two voxels stand at the limit: as voxels fall, some of it is thinner and some thicker. A wall as thick as the reach is never thin.
        Assert.InRange(both.Share, 0.1, 0.9);
        Assert.Equal(0, Thickness(SphereVolumes.Of(Edge, more)).Thin);
        Assert.Equal(0, Thickness(Good).Thin);
        Assert.Contains(SphereVolumes.Findings(SphereVolumes.Of(Edge, thin)).Warnings, w => w.Contains("thinner than two voxels behind", StringComparison.Ordinal));
    }

    [Fact]
    public void SmallPieces_AreLeftOut_AndALargeOneIsRefused()
    {
        TissueVolume speck = Good.With((new(0.09, 0.09, 0.09), 1), (new(0.09, 0.09, 0.086), 1));
        CroppedHead head = HeadCrop.Of(speck)!;
        HeadPieces pieces = HeadPieces.Largest(head.Volume);
        Assert.Equal(2, Assert.Single(pieces.LeftOut).Count);
        Assert.Equal(TissueKind.Air, pieces.Volume.At(new(0.09, 0.09, 0.09)).Kind);
        Assert.Contains("1 disconnected piece (2 voxels; the largest of them, 2 voxels, at (90, 90, 88) mm)", Assert.Single(SphereVolumes.Findings(speck).Warnings), StringComparison.Ordinal);

        TissueVolume halves = SphereVolumes.Filled(Good.Grid, p => (byte)(Math.Abs(p.X) < 0.009 ? 0 : Good.Cells[Good.Grid.IndexAt(p)]));
        Assert.Contains("falls into 2 disconnected pieces", Assert.Single(SphereVolumes.Findings(halves).Problems), StringComparison.Ordinal);
    }

    [Fact]
    public void Holes_AreCounted() =>
        Assert.Contains("1 hole of at most 8 voxels of air (1 voxel together; the largest, 1 voxel, at (2, 2, 90) mm)",
            Assert.Single(SphereVolumes.Findings(SphereVolumes.Of(Edge, [0.1, 0.083, 0.071, 0.064]).With((new(0.002, 0.002, 0.090), 0))).Warnings), StringComparison.Ordinal);

    [Fact]
    public void BrainIslands_AreCounted() =>
        Assert.Contains("grey and white matter hold 1 island apart from the brain (1 voxel; the largest, 1 voxel, at (2, 2, 90) mm)",
            SphereVolumes.Findings(Good.With((new(0.002, 0.002, 0.09), 4))).Warnings.Single(w => w.StartsWith("grey", StringComparison.Ordinal)), StringComparison.Ordinal);

    [Fact]
    public void HeadWithoutBrain_IsRefused_AndWithoutOtherTissuesWarned()
    {
        Assert.Contains("no source has a place; the head holds scalp, skull, csf", Assert.Single(SphereVolumes.Findings(SphereVolumes.Of(Edge, [0.092, 0.083, 0.071, 0])).Problems), StringComparison.Ordinal);
        HeadFindings brain = SphereVolumes.Findings(SphereVolumes.Filled(Good.Grid, p => (byte)(p.Norm < 0.08 ? 4 : 0)));
        Assert.Empty(brain.Problems);
        Assert.Contains(brain.Warnings, w => w.StartsWith("no voxel is skull", StringComparison.Ordinal));
        Assert.Contains(brain.Warnings, w => w.StartsWith("no voxel is scalp", StringComparison.Ordinal));
        HeadFindings three = SphereVolumes.Findings(SphereVolumes.Filled(Good.Grid, p => (byte)(p.Norm > 0.092 ? 0 : p.Norm > 0.083 ? 1 : p.Norm > 0.071 ? 2 : 4)));
        Assert.StartsWith("no voxel is csf", Assert.Single(three.Warnings), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(8, 8, 8, "voxels of 8 x 8 x 8 mm lie outside the 0.5 to 6 mm")]
    [InlineData(2, 2, 5, "voxels of 2 x 2 x 5 mm are far from cubes")]
    public void VoxelSize_IsJudged(double x, double y, double z, string said) => Assert.Contains(
        SphereVolumes.Findings(SphereVolumes.Of(new Vec3(x / 1000, y / 1000, z / 1000))).Warnings, w => w.Contains(said, StringComparison.Ordinal));

    [Fact]
    public void Crop_KeepsPlacesAndAddsAMargin()
    {
        TissueVolume cropped = HeadCrop.Of(Good)!.Volume;
        Assert.True(HeadCrop.HasMargin(cropped));
        Assert.Equal(Good.Grid.Count - Good.Cells.Count((byte)0), cropped.Grid.Count - cropped.Cells.Count((byte)0));
        Assert.All(Enumerable.Range(0, 200), k =>
        {
            Vec3 p = 0.1 * Math.Cbrt((k + 0.5) / 200) * GoldenSpiral.Point(k, 200);
            Assert.Equal(Good.At(p), cropped.At(p));
        });
        Assert.Null(HeadCrop.Of(SphereVolumes.Of(Edge, [0, 0, 0, 0])));
    }

    [Fact]
    public void Radius_IsThatOfTheSphere() => RelativeAssert.Equal(0.092, HeadChecks.Radius(Good), 0.01);

    private static SkullThickness Thickness(TissueVolume volume) => SkullThickness.Of(HeadCrop.Of(volume)!.Volume, []);

    private static TissueVolume Cut(TissueVolume volume, int layers)
    {
        VoxelGrid g = volume.Grid;
        var grid = new VoxelGrid(g.Nx, g.Ny, g.Nz - layers, g.ToWorld with { Offset = g.Centre(0, 0, layers) });
        return new(grid, volume.Cells[(layers * g.Nx * g.Ny)..].ToArray(), volume.Tissues);
    }

    private static TissueVolume Turned(TissueVolume volume)
    {
        Affine a = volume.Grid.ToWorld;
        return new(new(volume.Grid.Nx, volume.Grid.Ny, volume.Grid.Nz, a with { Row2 = -a.Row2, Row1 = -a.Row1 }), volume.Cells.ToArray(), volume.Tissues);
    }
}
