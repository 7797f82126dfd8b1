using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Tests.Core.Heads.Voxels;

/// <summary>Tensors are found again, and told from what is none.</summary>
public class ConductivityTensorsTests
{
    [Fact]
    public void Tensors_AreThoseOfTheirVoxels()
    {
        // Voxels 0, 63, 64 and 200 of 256: first and last of a word, and words without any.
        int[] voxels = [0, 63, 64, 200];
        var has = new ulong[4];
        foreach (int v in voxels)
        {
            has[v / 64] |= 1UL << (v % 64);
        }

        var tensors = new ConductivityTensors(has, [.. Enumerable.Range(0, 24).Select(n => (float)n)]);
        Assert.Equal(4, tensors.Count);
        for (int k = 0; k < voxels.Length; k++)
        {
            Assert.True(tensors.TryGet(voxels[k], out SymmetricTensor t));
            Assert.Equal(new SymmetricTensor(6 * k, 6 * k + 1, 6 * k + 2, 6 * k + 3, 6 * k + 4, 6 * k + 5), t);
        }

        Assert.All(Enumerable.Range(0, 256).Except(voxels), v => Assert.False(tensors.TryGet(v, out _)));
        Assert.Throws<ArgumentException>(() => new ConductivityTensors(has, new float[23]));
    }

    [Theory]
    [InlineData(1, 0, 1, 0, 0, 1, true)]
    [InlineData(0.3, 0.1, 0.2, -0.05, 0.02, 0.1, true)]
    [InlineData(1, 1, 1, 0, 0, 1, false)]
    [InlineData(1, 0, 1, 0, 0, -1, false)]
    [InlineData(-1, 0, -1, 0, 0, 1, false)]
    [InlineData(1, 0, 1, 2, 0, 1, false)]
    [InlineData(0, 0, 0, 0, 0, 0, false)]
    public void PositiveDefinite_IsWhatLetsNoCurrentRunBack(double xx, double xy, double yy, double xz, double yz, double zz, bool expected)
    {
        var tensor = new SymmetricTensor(xx, xy, yy, xz, yz, zz);
        Assert.Equal(expected, tensor.IsPositiveDefinite);

        // Against the power along many directions, the diagonals among them: there lies the one along which the third tensor insulates.
        Vec3[] diagonals = [new(1, 1, 0), new(1, -1, 0), new(1, 0, 1), new(1, 0, -1), new(0, 1, 1), new(0, 1, -1)];
        bool forward = Enumerable.Range(0, 2000).Select(k => GoldenSpiral.Point(k, 2000)).Concat(diagonals).All(u => Vec3.Dot(u, tensor.Apply(u)) > 1e-6);
        Assert.Equal(expected, forward);
    }
}
