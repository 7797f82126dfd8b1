using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Files.Regions;

public class RegionLibraryTests
{
    private static readonly RegionLibrary Library = RegionLibrary.Load();

    // The names of the contract.
    private static readonly string[] Sided =
    [
        "thalamus", "ventral-posterolateral-thalamus", "medial-geniculate", "lateral-geniculate", "caudate", "putamen", "pallidum", "accumbens", "hippocampus",
        "amygdala", "subthalamic-nucleus", "substantia-nigra", "red-nucleus", "inferior-colliculus", "superior-colliculus", "cochlear-nucleus", "superior-olive",
        "lateral-lemniscus", "cuneate-nucleus", "cerebellum",
    ];

    private static Ellipsoid Shape(string name) => Library.Find(name)!.Shape!;

    [Fact]
    public void Names_AreThoseOfTheContract()
    {
        string[] expected = [.. Sided.SelectMany(s => new[] { s + "-left", s + "-right" }), "midbrain", "pons", "medulla", "cortex"];
        Assert.Equal(expected.Order(StringComparer.Ordinal), Library.Names.Order(StringComparer.Ordinal));
    }

    [Fact]
    public void EveryRegion_SaysWhatIsKnownAboutIt() => Assert.All(Library.Regions, r =>
    {
        Assert.NotEmpty(r.VolumeSource);
        Assert.NotEmpty(r.PlaceSource);
        Assert.NotEmpty(r.Note);
        Assert.Contains("MNI", r.Frame, StringComparison.Ordinal);
    });

    // Published adult volumes of one side in mL, typed from the project's facts (section E, sources there) and not from the library's files.
    [Theory]
    [InlineData("thalamus-left", 5.5, 8)]
    [InlineData("caudate-left", 3.3, 4.7)]
    [InlineData("putamen-left", 4.3, 5.5)]
    [InlineData("pallidum-left", 1.1, 1.9)]
    [InlineData("hippocampus-left", 2.8, 4.3)]
    [InlineData("amygdala-left", 1.1, 1.9)]
    [InlineData("accumbens-left", 0.4, 0.7)]
    [InlineData("midbrain", 5, 7)]
    [InlineData("pons", 12, 17)]
    [InlineData("medulla", 4, 5.5)]
    [InlineData("cerebellum-left", 50, 75)]
    [InlineData("inferior-colliculus-left", 0.065, 0.15)]
    [InlineData("superior-colliculus-left", 0.13, 0.2)]
    [InlineData("cochlear-nucleus-left", 0.03, 0.06)]
    [InlineData("superior-olive-left", 0.01, 0.03)]
    [InlineData("lateral-lemniscus-left", 0.03, 0.06)]
    [InlineData("medial-geniculate-left", 0.06, 0.12)]
    [InlineData("lateral-geniculate-left", 0.052, 0.105)]
    [InlineData("ventral-posterolateral-thalamus-left", 0.4, 0.9)]
    [InlineData("cuneate-nucleus-left", 0.03, 0.06)]
    [InlineData("subthalamic-nucleus-left", 0.1, 0.16)]
    [InlineData("substantia-nigra-left", 0.4, 0.6)]
    [InlineData("red-nucleus-left", 0.25, 0.33)]
    public void Volume_LiesInThePublishedRange(string name, double low, double high)
    {
        LibraryRegion region = Library.Find(name)!;
        Assert.InRange(region.Shape!.Volume * 1e6, low, high);
        RelativeAssert.Equal(low, region.VolumeRange!.Value.Low * 1e6, 1e-12);
        RelativeAssert.Equal(high, region.VolumeRange.Value.High * 1e6, 1e-12);
    }

    [Fact]
    public void Sides_AreMirrorImages_AndOnTheirOwnSide() => Assert.All(Sided, s =>
    {
        Ellipsoid left = Shape(s + "-left"), right = Shape(s + "-right");
        Assert.Equal(left.Centre with { X = -left.Centre.X }, right.Centre);
        RelativeAssert.Equal(left.Volume, right.Volume, 1e-14);
        Vec3 probe = left.Centre + new Vec3(0.001, 0.002, -0.0015);
        RelativeAssert.Equal(left.Q(probe), right.Q(probe with { X = -probe.X }), 1e-12);
        Assert.Null(RegionSide.Contradiction(s + "-left", left.Centre));
        Assert.Null(RegionSide.Contradiction(s + "-right", right.Centre));
    });

    [Fact]
    public void SmallNuclei_LieInTheirStructures()
    {
        Assert.True(Shape("thalamus-left").Contains(Shape("ventral-posterolateral-thalamus-left").Centre));
        Assert.True(Shape("midbrain").Contains(Shape("red-nucleus-left").Centre));
        Assert.True(Shape("medulla").Contains(Shape("cuneate-nucleus-left").Centre));
        Assert.True(Shape("pons").Contains(Shape("lateral-lemniscus-left").Centre));
    }

    // The lateral lemniscus runs from the superior olive to the inferior colliculus (anatomy): its long axis points along that line.
    [Fact]
    public void LateralLemniscus_PointsFromOliveToColliculus()
    {
        Vec3 line = Shape("inferior-colliculus-left").Centre - Shape("superior-olive-left").Centre;
        Assert.InRange(TestHeads.AngleDeg(Shape("lateral-lemniscus-left").Axis(2), line), 0, 8);
    }

    public static TheoryData<string, string, int[], double> Masks()
    {
        int[] cerebellum = [.. Enumerable.Range(91, 18)];
        const string one = "aal.nii.gz", template = "jhu189.nii.gz";
        return new()
        {
            { "thalamus", one, [77, 78], 3 }, { "thalamus", template, [83, 84], 3 },
            { "putamen", one, [73, 74], 3 }, { "putamen", template, [79, 80], 3 },
            { "caudate", one, [71, 72], 3 }, { "caudate", template, [77, 78], 3 },
            { "pallidum", one, [75, 76], 3 }, { "pallidum", template, [81, 82], 3 },
            { "hippocampus", one, [37, 38], 3.5 }, { "hippocampus", template, [75, 76], 3.5 },
            { "amygdala", one, [41, 42], 3.5 }, { "amygdala", template, [73, 74], 3.5 },
            { "cerebellum", one, cerebellum, 4 }, { "cerebellum", template, [95, 96], 5 },
            { "accumbens", template, [89, 90], 3 }, { "red-nucleus", template, [91, 92], 3 },

            // The template marks 0.2 of some 0.5 mL, the front third of the nigra.
            { "substantia-nigra", template, [93, 94], 6.5 },
        };
    }

    // Label volumes of the Debian package mricron-data: aal (Tzourio-Mazoyer 2002, NeuroImage 15:273), jhu189 (its file names PubMed 22498656). Centroids of both sides, mirrored and averaged.
    // Two labellings of the same structure differ by 2 to 4 mm themselves: tolerances in mm stand beside each structure.
    [AtlasTheory]
    [MemberData(nameof(Masks))]
    public void Centroid_LiesWithinItsToleranceOfTheMask(string structure, string volume, int[] labels, double toleranceMm)
    {
        Vec3[] voxels = BothSidesOnTheLeft(volume, labels);
        Vec3 centroid = Mean(voxels);
        double distance = (centroid - Shape(structure + "-left").Centre).Norm * 1000;
        Assert.True(distance <= toleranceMm, $"{structure} against {volume}: {distance:0.0} mm, allowed {toleranceMm}");
    }

    // Labels 91 to 94 and 97 to 100 are red nucleus, nigra, peduncle and the rest of the midbrain; 101, 102, 107, 108, 111 to 114 the parts of the pons.
    // The volume ends at z = -50 mm, and its peduncles reach up into the capsule: 5 mm.
    [AtlasTheory]
    [InlineData("midbrain", new[] { 91, 92, 93, 94, 97, 98, 99, 100 })]
    [InlineData("pons", new[] { 101, 102, 107, 108, 113, 114 })]
    public void MidlineStructure_LiesWithin5MmOfTheMask(string structure, int[] labels)
    {
        Vec3 centroid = Mean(new LabelVolume(Path.Combine(Atlas.Folder, "jhu189.nii.gz")).Voxels([.. labels], 0));
        Assert.InRange((centroid - Shape(structure).Centre).Norm * 1000, 0, 5);
    }

    // Elongated structures: the long axis of the mask's second moments against the ellipsoid's longest semi-axis.
    [AtlasTheory]
    [InlineData("thalamus", "aal.nii.gz", new[] { 77, 78 })]
    [InlineData("thalamus", "jhu189.nii.gz", new[] { 83, 84 })]
    [InlineData("putamen", "aal.nii.gz", new[] { 73, 74 })]
    [InlineData("putamen", "jhu189.nii.gz", new[] { 79, 80 })]
    [InlineData("caudate", "aal.nii.gz", new[] { 71, 72 })]
    [InlineData("caudate", "jhu189.nii.gz", new[] { 77, 78 })]
    [InlineData("pallidum", "aal.nii.gz", new[] { 75, 76 })]
    [InlineData("pallidum", "jhu189.nii.gz", new[] { 81, 82 })]
    [InlineData("hippocampus", "aal.nii.gz", new[] { 37, 38 })]
    [InlineData("hippocampus", "jhu189.nii.gz", new[] { 75, 76 })]
    public void LongAxis_PointsAlongTheMask(string structure, string volume, int[] labels)
    {
        const double AllowedDeg = 20;
        Vec3[] voxels = BothSidesOnTheLeft(volume, labels);
        Vec3 mean = Mean(voxels);
        Matrix<double> moments = Matrix<double>.Build.Dense(3, 3, (i, j) => voxels.Average(p => (p[i] - mean[i]) * (p[j] - mean[j])) * 1e6);
        Vector<double> axis = moments.Evd(Symmetricity.Symmetric).EigenVectors.Column(2);
        Ellipsoid e = Shape(structure + "-left");
        int longest = Enumerable.Range(0, 3).MaxBy(a => e.SemiAxes[a]);
        double angle = TestHeads.AngleDeg(e.Axis(longest), new(axis[0], axis[1], axis[2]));
        angle = Math.Min(angle, 180 - angle);
        Assert.True(angle <= AllowedDeg, $"{structure} against {volume}: {angle:0.0} degrees");
    }

    // "Some 18 % of a cerebellar hemisphere does not fit a 78 mm sphere" was found for an upright ellipsoid at (25, -62, -36) mm with semi-axes 25, 28, 21 mm: one
    // percentage point for "some". The library's hemisphere, turned and moved to the masks, loses 15 %, of 0.995 times 78 mm.
    [Fact]
    public void Cerebellum_LosesSome18PercentInTheDefaultHead()
    {
        Ellipsoid upright = new(new(0.025, -0.062, -0.036), new(0.025, 0.028, 0.021), Rotation.Identity);
        LayeredSphere admits78 = new("78 mm", TestHeads.Adult.Centre, [new("brain", 0.078 / LayeredSphere.LargestEccentricity, 0.33, 0.33)]);
        Assert.InRange(RegionFill.ShareRefused(upright.Shape, admits78), 0.17, 0.19);

        LibraryRegion region = Library.Find("cerebellum-left")!;
        double share = RegionFill.ShareRefused(region.Shape!.Shape, TestHeads.Adult);
        Assert.InRange(share, 0.14, 0.22);
        FilledRegion filled = RegionFill.Fill(region, null, TestHeads.Adult);
        RelativeAssert.Equal(share, filled.Dropped.Count / (double)(filled.Dropped.Count + filled.Positions.Length), 0.05);
        Assert.Contains($"{100.0 * filled.Dropped.Count / (filled.Dropped.Count + filled.Positions.Length):0} %", filled.Warnings[0], StringComparison.Ordinal);
        Assert.Contains("skull base", filled.Warnings[1], StringComparison.Ordinal);
    }

    [Fact]
    public void EveryRegion_FillsTheDefaultHead() => Assert.All(Library.Regions, r =>
    {
        FilledRegion filled = RegionFill.Fill(r, null, TestHeads.Adult);
        Assert.InRange(filled.Positions.Length, 50, 20_000);

        // The prediction may stand on either side of one halving.
        Assert.InRange((filled.Positions.Length + filled.Dropped.Count) / (double)RegionFill.PredictCount(r, null, TestHeads.Adult), 0.1, 10);
        Assert.Equal("library", filled.Origin);
        Assert.True(r.Shape is null || Math.Abs((filled.Positions.Length + filled.Dropped.Count) * Math.Pow(filled.Spacing!.Value, 3) / r.Shape.Volume - 1) < 0.2, r.Name);
        Assert.Equal(r.SphereLimits is not null, filled.Warnings.Any(w => w.Contains("misfit", StringComparison.Ordinal)));
    });

    [Theory]
    [InlineData("cerebellum-left")]
    [InlineData("hippocampus-right")]
    [InlineData("amygdala-left")]
    [InlineData("pons")]
    [InlineData("medulla")]
    [InlineData("cochlear-nucleus-right")]
    [InlineData("superior-olive-left")]
    [InlineData("cuneate-nucleus-left")]
    public void LowRegions_CarryTheLimitsOfASphere(string name) => Assert.Contains("5.5 mm", Library.Find(name)!.SphereLimits, StringComparison.Ordinal);

    [Theory]
    [InlineData(0.0685, 0.070, 0.080)]
    [InlineData(0.049, 0.0505, 0.056)]
    public void SmallHeads_HoldTheScaledRegions(double brain, double skull, double scalp)
    {
        LayeredSphere head = new("small", new(0, -0.018, 0.005), [new("brain", brain, 0.33, 0.33), new("csf", skull, 1.79, 1.79), new("skull", scalp, 0.01, 0.01)]);
        double factor = brain / 0.078;
        foreach (LibraryRegion adult in Library.Regions.Where(r => r.Shape is not null))
        {
            Ellipsoid scaled = Library.Get(adult.Name, factor, head.Centre).Shape!;
            RelativeAssert.Equal(factor * factor * factor, scaled.Volume / adult.Shape!.Volume, 1e-12, adult.Name);
            RelativeAssert.Equal(factor * (adult.Shape.Centre - head.Centre).Norm, (scaled.Centre - head.Centre).Norm, 1e-9, adult.Name);
        }

        // Scaling keeps what fits: the same share of the cerebellum is refused.
        Assert.InRange(RegionFill.ShareRefused(Library.Get("cerebellum-left", factor, head.Centre).Shape!.Shape, head)
            - RegionFill.ShareRefused(Shape("cerebellum-left").Shape, TestHeads.Adult), -0.01, 0.01);
    }

    [Theory]
    [InlineData("thalamus", "thalamus-left or thalamus-right")]
    [InlineData("thalmus-left", "nearest: thalamus-left")]
    [InlineData("Midbrain", "nearest: midbrain")]
    public void UnknownRegion_IsRefusedWithWhatToWrite(string name, string part)
    {
        InputException error = Assert.Throws<InputException>(() => Library.Get(name, 1, Vec3.Zero, "responses.r.regions[0]"));
        Assert.Contains(part, error.Message, StringComparison.Ordinal);
        Assert.Equal("responses.r.regions[0]", error.Problems[0].Key);
    }

    [Theory]
    [InlineData("structure: x\ncolour: red\n", "colour is not a key")]
    [InlineData("structure: x\nvolume_mL: 3\nplace: {}\n", "volume_mL must be a mapping")]
    [InlineData("structure: x\nframe: MNI\nvolume_mL: {low: 1, high: 2, source: s, grade: sure}\nplace: {source: s, grade: seen}\nnote: n\nmidline: {centre_mm: [0, 0, 0], semi_axes_mm: [1, 1, 1], rotation_deg: [0, 0, 0]}\n", "volume_mL.grade must be seen, memory or derived")]
    [InlineData("structure: x\nvolume_mL: {}\nplace: {}\nmidline: {centre_mm: [0, 0], semi_axes_mm: [1, 1, 1], rotation_deg: [0, 0, 0]}\n", "midline.centre_mm must be three numbers")]
    public void MalformedFile_IsNamedWithItsKey(string text, string part)
    {
        InvalidDataException error = Assert.Throws<InvalidDataException>(() => LibraryRegionReader.Read("regions/x.yaml", new StringReader(text)));
        Assert.StartsWith("regions/x.yaml", error.Message, StringComparison.Ordinal);
        Assert.Contains(part, error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void RightSide_MayBeStated()
    {
        const string text = "structure: x\nframe: MNI\nvolume_mL: {low: 1, high: 2, source: s, grade: memory}\nplace: {source: s, grade: seen}\nnote: n\n"
            + "left: {centre_mm: [-10, 0, 0], semi_axes_mm: [1, 2, 3], rotation_deg: [0, 0, 0]}\n"
            + "right: {centre_mm: [12, 1, 0], semi_axes_mm: [1, 2, 4], rotation_deg: [0, 0, 90]}\n";
        IReadOnlyList<LibraryRegion> sides = LibraryRegionReader.Read("x.yaml", new StringReader(text));
        Assert.Equal(["x-left", "x-right"], sides.Select(r => r.Name));
        Assert.Equal(new Vec3(0.012, 0.001, 0), sides[1].Shape!.Centre);
        Assert.InRange(TestHeads.AngleDeg(sides[1].Shape!.Axis(0), new(0, 1, 0)), 0, 1e-9);
        Assert.Equal((Grade.Memory, Grade.Seen), (sides[1].VolumeGrade, sides[1].PlaceGrade));
    }

    private static Vec3 Mean(Vec3[] points) => points.Aggregate(Vec3.Zero, (sum, p) => sum + p) / points.Length;

    // Each side counts the same, whatever its number of voxels.
    private static Vec3[] BothSidesOnTheLeft(string volume, int[] labels)
    {
        LabelVolume v = new(Path.Combine(Atlas.Folder, volume));
        Vec3[] left = v.Voxels([.. labels], -1), right = v.Voxels([.. labels], 1);
        int n = Math.Min(left.Length, right.Length);
        Assert.True(n > 100, $"{volume}: {n} voxels");
        return [.. left, .. right.Select(p => p with { X = -p.X })];
    }
}
