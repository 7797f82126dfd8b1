using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Heads.Voxels.Phantom;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels.Phantom;

/// <summary>The adult phantom at 2 mm; the same claims at 1 mm and for the neonate are in the verification project.</summary>
public class PhantomHeadTests
{
    private static readonly Lazy<PhantomHead> Adult = new(() => PhantomHead.Generate(PhantomKind.Adult, 0.002));

    [Theory]
    [InlineData(PhantomKind.Adult)]
    [InlineData(PhantomKind.Neonate)]
    public void SameArguments_GiveTheSameBytes_OnAnyNumberOfThreads(PhantomKind kind)
    {
        PhantomHead one = PhantomHead.Generate(kind, 0.003, threads: 1), many = PhantomHead.Generate(kind, 0.003, threads: 5);
        Assert.True(one.Labels.SequenceEqual(many.Labels));
        Assert.True(one.RegionLabels.SequenceEqual(many.RegionLabels));
        Assert.Equal(one.Landmarks, many.Landmarks);
    }

    [Theory]
    [InlineData(0.0009)]
    [InlineData(0.0031)]
    [InlineData(double.NaN)]
    public void VoxelOutsideTheRange_IsRefused(double voxel) => Assert.Throws<ArgumentOutOfRangeException>(() => PhantomHead.Generate(PhantomKind.Adult, voxel));

    [Fact]
    public void Cancelled_EndsWithoutAHead()
    {
        using CancellationTokenSource source = new();
        source.Cancel();
        Assert.Throws<OperationCanceledException>(() => PhantomHead.Generate(PhantomKind.Adult, 0.003, cancellation: source.Token));
    }

    [Fact]
    public void Volumes_LieInPublishedAdultRanges() => PhantomClaims.AdultVolumes(Adult.Value);

    [Fact]
    public void LibraryRegions_LieInGreyAndWhite() => PhantomClaims.LibraryRegions(Adult.Value);

    [Fact]
    public void Inside_TouchesSoftTissueAtTheBaseAlone() => PhantomClaims.NoLeak(Adult.Value);

    [Fact]
    public void Tissues_HangTogether() => PhantomClaims.HangTogether(Adult.Value);

    [Fact]
    public void Head_TouchesTheVolumesLowerFaceAlone() => PhantomClaims.FreeFaces(Adult.Value);

    // Antonakakis 2020 [seen]: 5.97 +- 1.19 mm over 20 adults; one standard deviation each way, and half a voxel for what a ray cannot see.
    [Fact]
    public void SkullOfTheVault_HasThePublishedMeanThickness() => Assert.InRange(1000 * PhantomClaims.VaultThickness(Adult.Value).Average(), 5.97 - 1.19 - 1, 5.97 + 1.19 + 1);

    [Fact]
    public void Skull_IsThickerThanAVoxelEverywhereAndTwoNearlyEverywhere()
    {
        double[] thickness = PhantomClaims.VaultThickness(Adult.Value);
        Assert.True(thickness.Min() > 0.002, $"{1000 * thickness.Min():F2} mm");
        Assert.True(thickness.Count(t => t > 0.0035) > 0.98 * thickness.Length);
    }

    [Fact]
    public void Landmarks_LieOnTheSkin()
    {
        PhantomHead head = Adult.Value;
        Assert.Equal(["Iz", "LPA", "Nz", "RPA"], head.Landmarks.Keys.Order(StringComparer.Ordinal));
        Vec3 middle = new(0, -0.018, -0.03);
        Assert.All(head.Landmarks, l =>
        {
            Vec3 outwards = (l.Value - middle).Unit();
            Assert.Equal(PhantomHead.Air, head.Labels[head.Grid.IndexAt(l.Value + 0.003 * outwards)]);
            Assert.Equal(PhantomHead.Scalp, head.Labels[head.Grid.IndexAt(l.Value - 0.003 * outwards)]);
        });

        // Places of a real head in MNI space, as the study file's page gives them; people differ by more than a centimetre.
        Assert.True((head.Landmarks["Nz"] - new Vec3(0, 0.085, -0.040)).Norm < 0.015);
        Assert.True((head.Landmarks["Iz"] - new Vec3(0, -0.119, -0.020)).Norm < 0.015);
        Assert.True((head.Landmarks["LPA"] - new Vec3(-0.087, -0.019, -0.049)).Norm < 0.02);
        Assert.True((head.Landmarks["RPA"] - new Vec3(0.088, -0.018, -0.052)).Norm < 0.02);
    }

    [Fact]
    public void Regions_AreGreyOrWhite_OnTheirOwnSide_AndNearTheLibrarysPlaces()
    {
        PhantomHead head = Adult.Value;
        RegionLibrary library = RegionLibrary.Load();
        Vec3[] sum = new Vec3[PhantomHead.Regions.Count + 1];
        int[] count = new int[sum.Length];
        for (int n = 0; n < head.Labels.Length; n++)
        {
            byte region = head.RegionLabels[n];
            if (region != 0)
            {
                (int i, int j, int k) = head.Grid.Voxel(n);
                sum[region] += head.Grid.Centre(i, j, k);
                count[region]++;
                Assert.True(head.Labels[n] is PhantomHead.Grey or PhantomHead.White);
            }
        }

        Assert.All(PhantomHead.Regions, r =>
        {
            Assert.True(count[r.Label] > 0, r.Name);
            Vec3 centroid = sum[r.Label] / count[r.Label];
            Assert.Null(RegionSide.Contradiction(r.Name, centroid));

            // Library and phantom were drawn apart: as far as the library itself may lie from label volumes (its README).
            Assert.True((centroid - library.Find(r.Name)!.Shape!.Centre).Norm < 0.0065, $"{r.Name} {centroid}");
        });
    }

    [Fact]
    public void CoarseVoxels_WarnOfTheSkull()
    {
        Assert.Empty(Adult.Value.Warnings);
        Assert.Contains("two voxels", Assert.Single(PhantomHead.Generate(PhantomKind.Adult, 0.003).Warnings), StringComparison.Ordinal);
    }

    [Fact]
    public void RegionsTooSmallForTheVoxels_AreNamed()
    {
        PhantomHead head = PhantomHead.Generate(PhantomKind.Neonate, 0.003);
        string[] lost = [.. PhantomHead.Regions.Where(r => !head.RegionLabels.Contains((byte)r.Label)).Select(r => r.Name)];
        Assert.NotEmpty(lost);
        Assert.All(lost, name => Assert.Contains(name, head.Warnings[^1], StringComparison.Ordinal));
    }

    // In the newborn's own millimetres: a rhombus of 24 by 18 mm has 216 mm^2, a slanting and curved one somewhat more on its surface; bone of 1.8 mm and more at voxels of 1 mm.
    [Fact]
    public void Fontanelle_ClosesARhombusOfTheNewbornsVault_AndTheAdultHasNone()
    {
        PhantomHead head = PhantomHead.Generate(PhantomKind.Neonate, 0.001);
        List<Vec3> places = [];
        int meetsSkin = 0, meetsInside = 0;
        for (int n = 0; n < head.Labels.Length; n++)
        {
            if (head.Labels[n] == PhantomHead.Fontanelle)
            {
                (int i, int j, int k) = head.Grid.Voxel(n);
                places.Add(1000 * (head.Grid.Centre(i, j, k) - PhantomHead.ScalingCentre));
                meetsSkin += head.Labels[head.Grid.Index(i, j, k + 1)] == PhantomHead.Scalp ? 1 : 0;
                meetsInside += head.Labels[head.Grid.Index(i, j, k - 1)] is PhantomHead.Csf or PhantomHead.Grey ? 1 : 0;
            }
        }

        Assert.InRange(2 * places.Max(p => Math.Abs(p.X)), 14, 18);
        Assert.InRange(places.Max(p => p.Y) - places.Min(p => p.Y), 19, 24);
        Assert.InRange(places.Average(p => p.X), -0.5, 0.5);
        Assert.True(places.Average(p => p.Y) > 20 && places.Min(p => p.Z) > 30, "it lies before and above the middle");
        Assert.InRange(meetsSkin, 180, 250);                       // seen from above: 216 voxels of 1 mm^2, a voxel's row of its outline more or less
        Assert.InRange(meetsInside, 180, 250);
        Assert.InRange(places.Count / 216.0, 1.8, 3.5);
        Assert.False(Adult.Value.Labels.Contains(PhantomHead.Fontanelle));
    }

    // It is part of the skull: no leak, and no source is admitted in it.
    [Fact]
    public void Fontanelle_IsSkullToTheChecks()
    {
        TissueVolume volume = PhantomHead.Generate(PhantomKind.Neonate, 0.0015).ToTissueVolume();
        Tissue membrane = Assert.Single(volume.Tissues, t => t.Name == "fontanelle");
        Assert.Equal((TissueKind.Skull, TissueKind.Skull), (membrane.Kind, TissueWords.KindOf(membrane.Name)!.Value));
        CroppedHead head = HeadCrop.Of(volume)!;
        Assert.DoesNotContain(SkullLeaks.Find(head.Volume, head.Touched), l => l.Outer.Kind == TissueKind.Scalp && l.Inner.Kind != TissueKind.Csf);
        Assert.All(SkullLeaks.Find(head.Volume, head.Touched).SelectMany(l => l.Places), p => Assert.True(p.Centre.Z < 0, $"a leak at {p.Centre}"));
    }

    [Theory]
    [InlineData(PhantomKind.Adult, 7)]
    [InlineData(PhantomKind.Neonate, 7)]
    public void TissueVolume_HoldsEveryLabelOfTheVolume(PhantomKind kind, int tissues)
    {
        PhantomHead head = PhantomHead.Generate(kind, 0.003);
        TissueVolume volume = head.ToTissueVolume();
        Assert.Equal(tissues, volume.Tissues.Count);
        HashSet<int> labels = [];
        for (int n = 0; n < head.Labels.Length; n++)
        {
            labels.Add(head.Labels[n]);
            Assert.Equal(head.Labels[n], volume.Tissues[volume.Cells[n]].Label);
        }

        Assert.Equal(volume.Tissues.Select(t => t.Label), labels.Order());
    }
}
