using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Regions;

public sealed class LabelListingTests
{
    /// <summary>Products and means of decimal metres.</summary>
    private const double Rounding = 1e-12;

    // Voxel centres at x = -2, -1, 0, 1, 2 mm.
    private static readonly VoxelGrid Across = new(5, 1, 1, Affine.Identity.ThenScale(0.001) with { Offset = new(-0.002, 0, 0) });

    [Fact]
    public void Labels_AreListedInOrderWithVolumeAndCentroid()
    {
        LabelListing listing = List([9, 2, 0, 9, 9]);
        Assert.Equal([2L, 9L], listing.Entries.Select(e => e.Label));
        LabelEntry nine = listing.Entries[1];
        Assert.Equal(3, nine.Voxels);
        RelativeAssert.Equal(3e-9, nine.Volume, Rounding);
        RelativeAssert.Equal((-2 + 1 + 2) / 3e3, nine.Centroid.X, Rounding);
        Assert.Empty(listing.Warnings);
    }

    [Theory]
    [InlineData("left", 1, 1, 0, 0, 0)]
    [InlineData("right", 0, 0, 0, 0, 1)]
    [InlineData("midline", 0, 0, 1, 0, 0)]
    [InlineData("midline", 1, 0, 0, 0, 1)]
    [InlineData("left", 1, 1, 1, 0, 0)]
    [InlineData("midline", 1, 1, 1, 1, 0)]
    public void Side_IsThatOfMoreThanFourFifthsOfTheVoxels(string side, double a, double b, double c, double d, double e) =>
        Assert.Equal(side, Assert.Single(List([a, b, c, d, e]).Entries).Side);

    [Fact]
    public void FlippedStorage_KeepsSides()
    {
        VoxelGrid flipped = new(5, 1, 1, new(new(-0.001, 0, 0), new(0, 0.001, 0), new(0, 0, 0.001), new(0.002, 0, 0)));
        Assert.Equal("right", Assert.Single(LabelListing.Of(new("f.nii", flipped, VoxelValues.Of(new byte[] { 1, 1, 0, 0, 0 }))).Entries).Side);
    }

    [Fact]
    public void Fractions_AreOneRegionFromOneHalf_AndSaySo()
    {
        LabelListing listing = List([0.5, 0.75, 0.25, double.NaN, 0]);
        Assert.Equal(2, Assert.Single(listing.Entries).Voxels);
        Assert.Contains("fractions", Assert.Single(listing.Warnings), StringComparison.Ordinal);
        Assert.Empty(List([0.25, 0, 0, 0, 0]).Entries);
    }

    [Fact]
    public void EmptyVolume_IsSaid()
    {
        LabelListing listing = List([0, 0, double.NaN, 0, 0]);
        Assert.Empty(listing.Entries);
        Assert.Contains("no label", Assert.Single(listing.Warnings), StringComparison.Ordinal);
    }

    [Fact]
    public void TooManyLabels_AreRefusedAsAnImage()
    {
        int[] values = [.. Enumerable.Range(1, LabelListing.MostLabels + 1)];
        ValueVolume volume = new("image.nii", new(values.Length, 1, 1, Affine.Identity), VoxelValues.Of(values));
        Assert.Contains("image, not a label volume", Assert.Throws<InputException>(() => LabelListing.Of(volume)).Message, StringComparison.Ordinal);
        values[^1] = 1;
        Assert.Equal(LabelListing.MostLabels, LabelListing.Of(new("labels.nii", volume.Grid, VoxelValues.Of(values))).Entries.Count);
    }

    private static LabelListing List(double[] values) => LabelListing.Of(new("x.nii", Across, VoxelValues.Of(values)));
}
