using System.Diagnostics;
using System.Text.Json;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Nifti;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Nifti;

/// <summary>The edge-case files against expected.json, whose numbers come from an independent reader (see README.md beside the files).</summary>
public sealed class NiftiEdgeCaseTests
{
    /// <summary>The tolerance that the files' README states [mm].</summary>
    private const double CentroidTolerance = 0.01;

    /// <summary>The limits of the README, doubled in time for a busy machine.</summary>
    private const double Seconds = 4;
    private const long Bytes = 200L << 20;

    private static readonly string Folder = Path.Combine(ReferenceCase.Folder, "nifti-edge");

    public static TheoryData<string> Files => [.. Expected().EnumerateObject().Select(p => p.Name)];

    [Theory]
    [MemberData(nameof(Files))]
    public void File_IsReadRefusedOrWarnedOf_AsExpected(string name)
    {
        JsonElement expected = Expected().GetProperty(name);
        string expect = expected.GetProperty("expect").GetString()!;
        Stopwatch clock = Stopwatch.StartNew();
        long before = GC.GetAllocatedBytesForCurrentThread();
        try
        {
            (IReadOnlyList<LabelEntry> labels, IReadOnlyList<string> warnings) = MaskFile.List(Path.Combine(Folder, name), name);
            Assert.NotEqual("refuse", expect);
            Assert.True(expect != "refuse or warn" || warnings.Count > 0, "no warning");
            if (expected.TryGetProperty("labels", out JsonElement wanted))
            {
                Assert.Equal(wanted.EnumerateObject().Count(), labels.Count);
                Assert.All(labels, entry => CheckEntry(wanted.GetProperty($"{entry.Label}"), entry));
                CheckPlace(expected, NiftiReader.ReadHeader(Path.Combine(Folder, name), name));
            }
        }
        catch (InputException error)
        {
            Assert.True(expect.Contains("refuse", StringComparison.Ordinal), error.Message);
            InputProblem problem = Assert.Single(error.Problems);
            Assert.Equal(name, problem.File);
            Assert.DoesNotContain('\n', error.Message);
            Assert.True(problem.Message.Length > 15);
        }

        Assert.InRange(clock.Elapsed.TotalSeconds, 0, Seconds);
        Assert.InRange(GC.GetAllocatedBytesForCurrentThread() - before, 0, Bytes);
    }

    [Theory]
    [InlineData("truncated.nii.gz", "cut short")]
    [InlineData("truncated_tail.nii.gz", "cut short")]
    [InlineData("dim0_nine.nii.gz", "dim[0]")]
    [InlineData("huge_dims.nii.gz", "1,099,511,627,776")]
    [InlineData("complex64.nii.gz", "complex64")]
    [InlineData("zero_bytes.nii.gz", "empty")]
    [InlineData("header_only.nii.gz", "cut short")]
    [InlineData("bad_magic.nii.gz", "magic")]
    public void Refusal_NamesTheMatter(string name, string word) =>
        Assert.Contains(word, Assert.Throws<InputException>(() => NiftiReader.Read(Path.Combine(Folder, name), name)).Message, StringComparison.Ordinal);

    [Theory]
    [InlineData("nan_float.nii.gz", "2 NaN and 1 infinite")]
    [InlineData("nan_float.nii.gz", "(4, 4, 4)")]
    [InlineData("no_codes.nii.gz", "no orientation")]
    [InlineData("qform_sform_disagree.nii.gz", "disagree")]
    [InlineData("empty_mask.nii.gz", "no label")]
    [InlineData("fractional_mask.nii.gz", "0.5")]
    public void Warning_NamesTheMatter(string name, string word) =>
        Assert.Contains(MaskFile.List(Path.Combine(Folder, name), name).Warnings, w => w.Contains(word, StringComparison.Ordinal) && w.Contains(name, StringComparison.Ordinal));

    [Fact]
    public void GoodFile_RaisesNoWarning() => Assert.Empty(MaskFile.List(Path.Combine(Folder, "ref.nii.gz"), "ref.nii.gz").Warnings);

    [Fact]
    public void BothFilesOfAPair_OpenTheSameVolume() => Assert.Equal(
        MaskFile.List(Path.Combine(Folder, "pair.hdr"), "pair.hdr").Labels, MaskFile.List(Path.Combine(Folder, "pair.img"), "pair.img").Labels);

    [Fact]
    public void FileWithoutOrientation_ListsLabels_ButIsNoRegion()
    {
        string name = "no_codes.nii.gz";
        Assert.Equal(NiftiOrientation.VoxelSizesOnly, NiftiReader.ReadHeader(Path.Combine(Folder, name), name).Orientation);
        Assert.Contains("no orientation", Assert.Throws<InputException>(() => MaskFile.Read(Path.Combine(Folder, name), name, 1, null)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void MaskOfLabel_HasTheListedVoxelsAndCentroid()
    {
        JsonElement wanted = Expected().GetProperty("flipped_x.nii.gz").GetProperty("labels").GetProperty("2");
        (VoxelMask mask, IReadOnlyList<string> warnings) = MaskFile.Read(Path.Combine(Folder, "flipped_x.nii.gz"), "flipped_x.nii.gz", 2, null);
        Assert.Equal(wanted.GetProperty("voxels").GetInt32(), mask.Voxels);
        AssertNear(wanted.GetProperty("centroid_mm").Numbers(), mask.Centroid);
        Assert.Empty(warnings);
    }

    private static JsonElement Expected()
    {
        using JsonDocument document = JsonDocument.Parse(File.ReadAllText(Path.Combine(Folder, "expected.json")));
        return document.RootElement.Clone();
    }

    private static void CheckEntry(JsonElement wanted, LabelEntry entry)
    {
        Assert.Equal(wanted.GetProperty("voxels").GetInt32(), entry.Voxels);
        AssertNear(wanted.GetProperty("centroid_mm").Numbers(), entry.Centroid);
        RelativeAssert.Equal(entry.Voxels * 8e-9, entry.Volume, 1e-6);
    }

    private static void CheckPlace(JsonElement expected, NiftiHeader header)
    {
        Assert.Equal(expected.GetProperty("dims").Numbers(), new double[] { header.Grid.Nx, header.Grid.Ny, header.Grid.Nz });
        double[] affine = expected.GetProperty("affine").Flat();
        foreach (Vec3 v in new Vec3[] { new(0, 0, 0), new(1, 0, 0), new(0, 1, 0), new(0, 0, 1) })
        {
            double[] wanted = [.. Enumerable.Range(0, 3).Select(r => affine[4 * r] * v.X + affine[4 * r + 1] * v.Y + affine[4 * r + 2] * v.Z + affine[4 * r + 3])];
            AssertNear(wanted, header.Grid.ToWorld.Apply(v));
        }
    }

    private static void AssertNear(double[] mm, Vec3 metres) =>
        Assert.All(Enumerable.Range(0, 3), axis => Assert.InRange(Si.ToMm(metres[axis]), mm[axis] - CentroidTolerance, mm[axis] + CentroidTolerance));
}
