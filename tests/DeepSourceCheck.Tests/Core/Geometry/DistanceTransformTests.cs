using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Geometry;

/// <summary>The transform against the least over all voxels of the set.</summary>
public class DistanceTransformTests
{
    // Results are single precision.
    private const double SinglePrecision = 1e-6;

    [Theory]
    [InlineData(1, 0.002, 0.002, 0.002, 3)]
    [InlineData(2, 0.001, 0.0025, 0.004, 3)]
    [InlineData(3, 0.003, 0.001, 0.0007, 60)]
    [InlineData(4, 0.002, 0.002, 0.002, 1)]
    public void Distances_AreTheLeastOverTheSet(int seed, double hx, double hy, double hz, int members)
    {
        // Unequal sizes and a turned frame: a swapped index or an axis taken for a world axis shows.
        Rotation turn = Rotation.FromFixedAxes(0.3, -0.5, 1.1);
        var grid = new VoxelGrid(11, 8, 13, new(
            new(turn.Row0.X * hx, turn.Row0.Y * hy, turn.Row0.Z * hz), new(turn.Row1.X * hx, turn.Row1.Y * hy, turn.Row1.Z * hz),
            new(turn.Row2.X * hx, turn.Row2.Y * hy, turn.Row2.Z * hz), new(0.01, -0.02, 0.03)));
        var random = new Random(seed);
        HashSet<int> set = [.. Enumerable.Range(0, members).Select(_ => random.Next(grid.Count))];
        double[] expected = PlainDistances.ToSet(grid, set.Contains);
        float[] actual = DistanceTransform.ToSet(grid, set.Contains);
        for (int at = 0; at < grid.Count; at++)
        {
            RelativeAssert.Equal(expected[at], actual[at], SinglePrecision, $"seed {seed}, voxel {grid.Voxel(at)}");
        }
    }

    [Fact]
    public void EmptySet_IsInfinitelyFar()
    {
        var grid = new VoxelGrid(3, 4, 5, Affine.Identity);
        Assert.All(DistanceTransform.ToSet(grid, _ => false), d => Assert.True(float.IsPositiveInfinity(d)));
        Assert.All(DistanceTransform.ToSet(grid, _ => true), d => Assert.Equal(0, d));
    }
}
