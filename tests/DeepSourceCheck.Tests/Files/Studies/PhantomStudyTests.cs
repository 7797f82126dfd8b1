using System.Text.RegularExpressions;

using DeepSourceCheck.Core.Heads.Voxels.Phantom;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Nifti;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Studies;

public partial class PhantomStudyTests
{
    private static readonly Dictionary<PhantomKind, PhantomHead> Heads =
        Enum.GetValues<PhantomKind>().ToDictionary(kind => kind, kind => PhantomHead.Generate(kind, 0.003));

    public static TheoryData<PhantomKind> Kinds => new(Enum.GetValues<PhantomKind>());

    [Theory]
    [MemberData(nameof(Kinds))]
    public void Study_IsValidBesideItsHead(PhantomKind kind)
    {
        // The voxel head gives way to a sphere here: what is left must read without a warning.
        string text = VoxelHead().Replace(PhantomStudy.Text(Heads[kind]), "  spheres: {preset: adult-4}\n", 1);
        using ScratchFolder folder = new();
        PhantomStudy.WriteFiles(Heads[kind], folder.Path);
        StudyReading reading = StudyReader.ReadText(text, "study.yaml", folder.Path, Purpose.Assess, StudyText.Library);
        Assert.Empty(reading.Warnings);
        Assert.Single(reading.Study.Responses);
        Assert.DoesNotContain('@', PhantomStudy.Text(Heads[kind]));
    }

    [Theory]
    [MemberData(nameof(Kinds))]
    public void VoxelHead_HoldsNothingButKeysOfTheRegistry(PhantomKind kind)
    {
        string block = VoxelHead().Match(PhantomStudy.Text(Heads[kind])).Value;
        string[] keys = [.. Key().Matches(block).Select(m => m.Groups[1].Value).Distinct()];
        Assert.Contains("labels", keys);
        Assert.Contains("conductivity_S_per_m", keys);
        HashSet<string> known = [.. StudyKeys.All.Where(k => k.Path.StartsWith("head.voxels", StringComparison.Ordinal)).Select(k => k.Name)];
        Assert.All(keys, key => Assert.Contains(key, known));
    }

    [Theory]
    [MemberData(nameof(Kinds))]
    public void Study_NamesEveryLabelOfTheVolumeAndNoOther(PhantomKind kind)
    {
        HashSet<int> inVolume = [];
        foreach (byte label in Heads[kind].Labels)
        {
            inVolume.Add(label);
        }

        inVolume.Remove(PhantomHead.Air);
        int[] named = [.. TissueLabel().Matches(PhantomStudy.Text(Heads[kind])).Select(m => int.Parse(m.Groups[1].Value, System.Globalization.CultureInfo.InvariantCulture))];
        Assert.Equal(inVolume.Order(), named);
    }

    [Fact]
    public void MaskRegions_PointAtTheirLabels()
    {
        string text = PhantomStudy.Text(Heads[PhantomKind.Adult]);
        int label = PhantomHead.Regions.Single(r => r.Name == "thalamus-right").Label;
        Assert.Matches($@"name: phantom-thalamus-right\s+mask: phantom-regions\.nii\.gz[^\n]*\n\s+label: {label}\b", text);
    }

    [Theory]
    [MemberData(nameof(Kinds))]
    public void Files_HoldTheHead_AndTheSameBytesTwice(PhantomKind kind)
    {
        using ScratchFolder one = new(), two = new();
        PhantomStudy.WriteFiles(Heads[kind], one.Path);
        PhantomStudy.WriteFiles(PhantomHead.Generate(kind, 0.003), two.Path);
        foreach (string name in new[] { PhantomStudy.HeadFile, PhantomStudy.RegionsFile, PhantomStudy.ListingFile })
        {
            Assert.Equal(File.ReadAllBytes(one.At(name)), File.ReadAllBytes(two.At(name)));
        }

        NiftiVolume read = NiftiReader.Read(one.At(PhantomStudy.HeadFile), "head");
        Assert.Empty(read.Warnings);
        byte[] labels = [.. Enumerable.Range(0, read.Header.Grid.Count).Select(n => (byte)read.Volume.Values[n])];
        Assert.True(Heads[kind].Labels.SequenceEqual(labels));
        string[] listing = File.ReadAllLines(one.At(PhantomStudy.ListingFile));
        Assert.Equal("label\tname\tvoxels\tvolume_mL", listing[0]);
        Assert.Equal(MaskFile.List(one.At(PhantomStudy.RegionsFile), "r").Labels.Select(l => $"{l.Label}\t{l.Voxels}"), listing.Skip(1).Select(l => l.Split('\t')).Where(c => c[2] != "0").Select(c => $"{c[0]}\t{c[2]}"));
    }

    [GeneratedRegex(@"  voxels:\n(    .*\n|\n(?=    ))+")]
    private static partial Regex VoxelHead();

    // Keys at the start of a line or in braces; not those that a comment's prose has before a colon.
    [GeneratedRegex(@"(?m)(?:^ +(?:- \{|# )?|\{|, )([A-Za-z_]+): ")]
    private static partial Regex Key();

    [GeneratedRegex(@"\{label: (\d+), tissue:")]
    private static partial Regex TissueLabel();
}
