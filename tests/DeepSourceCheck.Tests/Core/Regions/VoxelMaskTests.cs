using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Regions;

public sealed class VoxelMaskTests
{
    /// <summary>A mean of a few decimal numbers.</summary>
    private const double Rounding = 1e-12;

    [Fact]
    public void Label_ChoosesItsVoxelsAlone()
    {
        VoxelMask mask = VoxelMask.Of(Line(0, 3, 3, 0, 2, 3), label: 3);
        Assert.Equal(3, mask.Voxels);
        RelativeAssert.Equal(3e-9, mask.Volume, Rounding);
        RelativeAssert.Equal((1 + 2 + 5) / 3e3, mask.Centroid.X, Rounding);
        Assert.True(mask.Contains(new(0.0014, 0, 0)));
        Assert.False(mask.Contains(new(0.004, 0, 0)));
        Assert.False(mask.Contains(new(0.009, 0, 0)));
        RelativeAssert.Close([0.0005, 0.0055], [mask.WorldBounds.Low.X, mask.WorldBounds.High.X], Rounding);
        Assert.Empty(mask.Warnings);
        Assert.Equal("label 3", mask.Selection);
    }

    [Fact]
    public void Label_OfScaledValues_ToleratesSinglePrecision()
    {
        ValueVolume volume = new("m.nii", Grid(3), VoxelValues.Of(new short[] { 10, 20, 30 }, (float)0.1));
        Assert.True(volume.IsWhole);
        Assert.Equal(1, VoxelMask.Of(volume, label: 3).Voxels);
    }

    [Fact]
    public void Threshold_TakesValuesOfAtLeastIt() => Assert.Equal(2, VoxelMask.Of(Line(0, 0.25, 0.75, 0.5), threshold: 0.5).Voxels);

    [Fact]
    public void WholeNumbersWithoutLabel_KeepAllNonZero_AndSayWhenLabelsAreSeveral()
    {
        Assert.Empty(VoxelMask.Of(Line(0, 1, 1)).Warnings);
        VoxelMask several = VoxelMask.Of(Line(0, 1, 4, -2));
        Assert.Equal(3, several.Voxels);
        Assert.Contains("more than one label", Assert.Single(several.Warnings), StringComparison.Ordinal);
    }

    [Fact]
    public void FractionsWithoutLabel_KeepOneHalf_AndSaySo()
    {
        VoxelMask mask = VoxelMask.Of(Line(0, 0.25, 0.5, 0.75));
        Assert.Equal(2, mask.Voxels);
        Assert.Contains("0.5", Assert.Single(mask.Warnings), StringComparison.Ordinal);
        Assert.Contains("percent", Assert.Single(VoxelMask.Of(Line(0, 12.5, 80.5)).Warnings), StringComparison.Ordinal);
    }

    [Fact]
    public void NonFiniteValues_AreNeverInside()
    {
        double[] values = [double.NaN, double.PositiveInfinity, double.NegativeInfinity, 1, 0];
        Assert.Equal(1, VoxelMask.Of(Line(values)).Voxels);
        Assert.Equal(1, VoxelMask.Of(Line(values), label: 1).Voxels);
        Assert.Equal(1, VoxelMask.Of(Line(values), threshold: 0.5).Voxels);
    }

    [Fact]
    public void EmptyChoice_NamesFileLabelAndExistingLabels()
    {
        string message = Refusal(() => VoxelMask.Of(Line(0, 3, 5), label: 4));
        Assert.Contains("line.nii", message, StringComparison.Ordinal);
        Assert.Contains("label 4", message, StringComparison.Ordinal);
        Assert.Contains("3, 5", message, StringComparison.Ordinal);
        Assert.Contains("every voxel of the volume is zero", Refusal(() => VoxelMask.Of(Line(0, 0))), StringComparison.Ordinal);
        Assert.Contains("no finite value", Refusal(() => VoxelMask.Of(Line(double.NaN))), StringComparison.Ordinal);
        Assert.Contains("0.25", Refusal(() => VoxelMask.Of(Line(0, 0.25))), StringComparison.Ordinal);
        Assert.Contains("only label in the volume is 3", Refusal(() => VoxelMask.Of(Line(0, 3), threshold: 7)), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(0.0, null, "0 is what surrounds")]
    [InlineData(double.NaN, null, "is not a region")]
    [InlineData(null, 0.0, "above 0")]
    [InlineData(null, -1.0, "above 0")]
    [InlineData(null, double.NaN, "above 0")]
    [InlineData(1.0, 0.5, "one of them")]
    public void ImpossibleChoice_IsRefused(double? label, double? threshold, string reason) =>
        Assert.Contains(reason, Refusal(() => VoxelMask.Of(Line(0, 1), label, threshold)), StringComparison.Ordinal);

    private static string Refusal(Action action) => Assert.Throws<InputException>(action).Message;

    private static ValueVolume Line(params double[] values) => new("line.nii", Grid(values.Length), VoxelValues.Of(values));

    private static VoxelGrid Grid(int length) => new(length, 1, 1, Affine.Identity.ThenScale(0.001));
}
