using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Tests.References;

namespace DeepSourceCheck.Tests.Core.Geometry;

/// <summary>Pieces by joined runs against pieces by flooding.</summary>
public class ConnectedVoxelsTests
{
    [Theory]
    [InlineData(1, 0.1, true)]
    [InlineData(2, 0.3, true)]
    [InlineData(3, 0.3, false)]
    [InlineData(4, 0.5, false)]
    [InlineData(5, 0.9, false)]
    public void Pieces_AreThoseOfAFlood(int seed, double filled, bool corners)
    {
        var grid = new VoxelGrid(9, 7, 8, new(new(0.002, 0, 0), new(0, 0.003, 0), new(0, 0, 0.001), new(1, 2, 3)));
        var random = new Random(seed);
        bool[] set = [.. Enumerable.Range(0, grid.Count).Select(_ => random.NextDouble() < filled)];
        List<List<int>> expected = PlainDistances.Pieces(grid, at => set[at], corners);
        IReadOnlyList<VoxelPiece> pieces = ConnectedVoxels.Find(grid, at => set[at], corners);
        int[][] found = [.. pieces.Select(p => p.Runs.SelectMany(r => Enumerable.Range(r.Start, r.Length)).ToArray())];
        Assert.Equal(expected.OrderByDescending(p => p.Count).ThenBy(p => p[0]).Select(p => p.ToArray()), found);
        Assert.All(pieces.Zip(found), pair => Assert.Equal(pair.Second.Length, pair.First.Count));
        Vec3 mean = found[0].Aggregate(Vec3.Zero, (sum, at) => sum + grid.Centre(grid.Voxel(at).I, grid.Voxel(at).J, grid.Voxel(at).K)) / found[0].Length;

        // Sums of some hundred places in another order.
        Assert.True((mean - pieces[0].Centre).Norm < 1e-12);
    }

    [Fact]
    public void EmptySet_HasNoPieces() => Assert.Empty(ConnectedVoxels.Find(new VoxelGrid(3, 3, 3, Affine.Identity), _ => false, corners: true));
}
