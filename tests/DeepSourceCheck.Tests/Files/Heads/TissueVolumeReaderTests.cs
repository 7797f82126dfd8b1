using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Heads;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Heads;

/// <summary>Label volumes and overlays: what becomes of the labels, and every fault with its own message.</summary>
public sealed class TissueVolumeReaderTests : IDisposable
{
    private static readonly Tissue[] Listed = SphereVolumes.Tissues[1..];

    // 4 x 3 x 2 voxels of 2 x 3 x 4 mm, offset (-3, -5, 7) mm.
    private static readonly double[] Labels = [0, 1, 1, 0, 1, 2, 2, 1, 0, 1, 1, 0, 0, 1, 1, 0, 1, 4, 3, 1, 0, 1, 1, 0];

    private readonly ScratchFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Theory]
    [InlineData(2, 8, 1, 0)]
    [InlineData(4, 16, 1, 0)]
    [InlineData(16, 32, 1, 0)]
    [InlineData(2, 8, 0.5, 0)]
    public void Labels_BecomeTissues(int type, int bits, double slope, double intercept)
    {
        TissueVolume volume = Read(new NiftiBytes { DataType = type, Bitpix = bits, Slope = slope, Intercept = intercept, Values = [.. Labels.Select(v => v / slope)] }).Volume;
        Assert.Equal(Labels.Select(v => (byte)v), volume.Cells.ToArray());
        Assert.Equal("brain", volume.At(new(-0.001, -0.002, 0.011)).Name);
        Assert.Equal("air", volume.At(new(1, 1, 1)).Name);
    }

    [Fact]
    public void Labels_AreThoseOfTheStudy_AndListedAirIsAir()
    {
        Tissue[] tissues = [new(1, "skin", TissueKind.Scalp, 0.4), new(4, "white", TissueKind.White, 0.14), new(2, "air", TissueKind.Air, 0), new(3, "grey", TissueKind.Grey, 0.33)];
        TissueVolume volume = Read(new NiftiBytes { Values = Labels }, tissues).Volume;
        Assert.Equal(["air", "skin", "white", "grey"], volume.Tissues.Select(t => t.Name));
        Assert.Equal(Labels.Select(v => (byte)(v switch { 1 => 1, 4 => 2, 3 => 3, _ => 0 })), volume.Cells.ToArray());
    }

    [Fact]
    public void UnlistedLabels_AreAllNamedWithCountAndPlace()
    {
        double[] values = [.. Labels];
        (values[5], values[6], values[17]) = (7, 7, 9);
        InputException error = Assert.Throws<InputException>(() => Read(new NiftiBytes { Values = values }));
        Assert.Equal(2, error.Problems.Count);
        Assert.Contains("head.nii: head.voxels.tissues: label 7 (2 voxels, the first at (-1, -2, 7) mm) has no tissue; list it", error.Problems[0].ToString(), StringComparison.Ordinal);
        Assert.Contains("label 9 (1 voxel, the first at (-1, -2, 11) mm)", error.Problems[1].Message, StringComparison.Ordinal);
    }

    [Fact]
    public void ImageInsteadOfLabels_IsTold()
    {
        InputException error = Assert.Throws<InputException>(() => Read(new NiftiBytes { Values = [.. Enumerable.Range(100, 24).Select(v => (double)v)] }));
        Assert.Equal(21, error.Problems.Count);
        Assert.Contains("and 4 more labels without a tissue, up to 123: is the file an image", error.Problems[^1].Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(1.5, "voxel (1, 1, 0) at (-1, -2, 7) mm holds 1.5, which is no whole number")]
    [InlineData(-2, "holds -2, which is negative")]
    [InlineData(double.NaN, "1 voxels are NaN and 0 infinite, the first at voxel (1, 1, 0), (-1, -2, 7) mm")]
    [InlineData(double.PositiveInfinity, "0 voxels are NaN and 1 infinite")]
    public void ValuesThatAreNoLabels_AreRefusedWithTheirPlace(double value, string said)
    {
        double[] values = [.. Labels];
        values[5] = value;
        InputException error = Assert.Throws<InputException>(() => Read(new NiftiBytes { DataType = 64, Bitpix = 64, Values = values }));
        Assert.Contains(said, error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void EmptyVolume_IsRefused()
    {
        Assert.Contains("head.nii: the volume is empty: every voxel is 0", Assert.Throws<InputException>(() => Read(new NiftiBytes { Values = new double[24] })).Message, StringComparison.Ordinal);
        Assert.Contains("every label in it (0, 5) is listed as air", Assert.Throws<InputException>(() => Read(
            new NiftiBytes { Values = [.. Labels.Select(v => v > 0 ? 5.0 : 0)] }, [new(5, "air", TissueKind.Air, 0)])).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void VolumeWithoutOrientation_IsRefused() =>
        Assert.Contains("sform_code", Assert.Throws<InputException>(() => Read(new NiftiBytes { Values = Labels, Sform = 0 })).Message, StringComparison.Ordinal);

    [Fact]
    public void ListedLabelWithoutVoxels_IsSaid() => Assert.Equal("head.nii: no voxel has label 8 (grey)",
        Assert.Single(Read(new NiftiBytes { Values = Labels }, [.. Listed, new(8, "grey", TissueKind.Grey, 0.3)]).Warnings));

    [Fact]
    public void Overlay_ReplacesTheTissueOnTheSameGrid_AndLaterOnesWin()
    {
        TissueVolume volume = Read(new NiftiBytes { Values = Labels }).Volume;
        volume = Overlay(volume, new NiftiBytes { Values = [.. Labels.Select(v => v >= 2 ? 1.0 : 0)] }, volume.Tissues[3]).Volume;
        Assert.Equal(Labels.Select(v => (byte)(v >= 2 ? 3 : v)), volume.Cells.ToArray());
        volume = Overlay(volume, new NiftiBytes { Values = [.. Labels.Select(v => v == 4 ? 1.0 : 0)] }, volume.Tissues[0]).Volume;
        Assert.Equal(Labels.Select(v => (byte)(v == 4 ? 0 : v >= 2 ? 3 : v)), volume.Cells.ToArray());
    }

    [Fact]
    public void Overlay_OnAnotherGrid_TakesTheNearestValueAtEachCentre()
    {
        TissueVolume sphere = SphereVolumes.Of(0.004);

        // A turned mask of 3 mm voxels: a ball of 20 mm about (20, 10, 5) mm.
        Rotation turn = Rotation.FromFixedAxes(0.4, 0.2, -0.7);
        var grid = new VoxelGrid(30, 31, 29, new(0.003 * turn.Row0, 0.003 * turn.Row1, 0.003 * turn.Row2, Vec3.Zero));
        Vec3 middle = new(0.02, 0.01, 0.005);
        grid = new(30, 31, 29, grid.ToWorld with { Offset = middle - grid.ToWorld.ApplyLinear(new(15, 15, 14)) });
        double[] mask = [.. Enumerable.Range(0, grid.Count).Select(at => (grid.Centre(grid.Voxel(at).I, grid.Voxel(at).J, grid.Voxel(at).K) - middle).Norm <= 0.02 ? 1.0 : 0)];
        TissueVolume cavity = Overlay(sphere, SphereVolumes.Bytes(grid, mask), sphere.Tissues[3]).Volume;
        for (int at = 0; at < sphere.Grid.Count; at++)
        {
            (int i, int j, int k) = sphere.Grid.Voxel(at);
            int value = grid.IndexAt(sphere.Grid.Centre(i, j, k));
            Assert.Equal(value >= 0 && mask[value] == 1 ? 3 : sphere.Cells[at], cavity.Cells[at]);
        }
    }

    [Fact]
    public void Overlay_ThatDoesNothing_IsRefused()
    {
        TissueVolume volume = Read(new NiftiBytes { Values = Labels }).Volume;
        double[] mask = [.. Labels.Select(v => v == 3 ? 1.0 : 0)];
        Assert.Contains("1 voxels in the mask are csf already", Assert.Throws<InputException>(() => Overlay(volume, new NiftiBytes { Values = mask }, volume.Tissues[3])).Message, StringComparison.Ordinal);
        InputException far = Assert.Throws<InputException>(() => Overlay(volume, new NiftiBytes { Values = mask, Rows = [2, 0, 0, 500, 0, 3, 0, -5, 0, 0, 4, 7] }, volume.Tissues[3]));
        Assert.Contains("mask.nii: head.voxels.overlays[0]: the mask (1 voxels about (504, -2, 11) mm) covers the centre of no voxel", far.Message, StringComparison.Ordinal);
    }

    private (TissueVolume Volume, IReadOnlyList<string> Warnings) Read(NiftiBytes bytes, Tissue[]? tissues = null) =>
        TissueVolumeReader.Read(_folder.Write("head.nii", bytes.File()), "head.nii", tissues ?? Listed);

    private (TissueVolume Volume, IReadOnlyList<string> Warnings) Overlay(TissueVolume volume, NiftiBytes mask, Tissue tissue) =>
        TissueOverlay.Apply(volume, _folder.Write("mask.nii", mask.File()), "mask.nii", tissue, "head.voxels.overlays[0]");
}
