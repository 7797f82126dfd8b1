using CsCheck;

using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Directions;

/// <summary>Properties of the split over random matrices of any scale and shape.</summary>
public class DirectionSplitProperties
{
    /// <summary>Rotations and sums of up to 300 rows: a few times rows x eps.</summary>
    private const double Rounding = 1e-13;

    private static readonly ImportedHead NoHead = new();

    /// <summary>Rows, decimal exponent of the scale, decimal exponents by which the second and third column shrink, entries.</summary>
    private static readonly Gen<double[]> Matrices =
        from rows in Gen.Int[3, 300]
        from scale in Gen.Int[-12, 9]
        from second in Gen.Int[0, 6]
        from third in Gen.Int[0, 10]
        from entries in Gen.Double[-1, 1].Array[rows * 3]
        select entries.Select((e, k) => e * Math.Pow(10, scale - (k % 3 == 1 ? second : k % 3 == 2 ? third : 0))).ToArray();

    [Fact]
    public void Split_RebuildsTheLeadfield() => Matrices.Sample(matrix =>
    {
        // |L v_k| = s_k and (L v_j).(L v_k) = 0: with orthonormal axes this rebuilds L.
        SplitBlock split = Splits.Of(matrix, Vec3.Zero, NoHead);
        double[][] images = [.. Enumerable.Range(0, 3).Select(k => Leadfields.SphereLeadfields.Times(matrix, split.V(k, 0)))];
        for (int k = 0; k < 3; k++)
        {
            Assert.InRange(Math.Abs(Math.Sqrt(images[k].Sum(v => v * v)) - split.S(k, 0)), 0, Rounding * split.S(0, 0));
            for (int j = 0; j < k; j++)
            {
                Assert.InRange(Math.Abs(images[k].Zip(images[j], (a, b) => a * b).Sum()), 0, Rounding * split.S(0, 0) * split.S(0, 0));
            }
        }
    }, iter: 300);

    [Fact]
    public void Axes_AreOrthonormalAndRightHanded() => Matrices.Sample(matrix =>
    {
        SplitBlock split = Splits.Of(matrix, Vec3.Zero, NoHead);
        Vec3 v1 = split.V(0, 0), v2 = split.V(1, 0), v3 = split.V(2, 0);
        foreach ((Vec3 a, Vec3 b, double expected) in new[] { (v1, v1, 1.0), (v2, v2, 1.0), (v3, v3, 1.0), (v1, v2, 0.0), (v1, v3, 0.0), (v2, v3, 0.0), (Vec3.Cross(v1, v2), v3, 1.0) })
        {
            Assert.InRange(Math.Abs(Vec3.Dot(a, b) - expected), 0, Rounding);
        }
    }, iter: 300);

    [Fact]
    public void SingularValues_EqualTheLibrarys() => Matrices.Sample(matrix =>
    {
        SplitBlock split = Splits.Of(matrix, Vec3.Zero, NoHead);
        double[] expected = PlainSingularValues.Of(matrix).Values;
        RelativeAssert.Close(expected, [split.S(0, 0), split.S(1, 0), split.S(2, 0)], Rounding);
        Assert.True(split.S(0, 0) >= split.S(1, 0) && split.S(1, 0) >= split.S(2, 0));
    }, iter: 300);

    [Fact]
    public void Split_OfALane_DoesNotDependOnItsNeighbours() => Gen.Double[-1, 1].Array[8 * 30].Sample(entries =>
    {
        double[][] matrices = [.. entries.Chunk(30).Select((m, k) => m.Select(e => e * Math.Pow(10, 3 * k - 9)).ToArray())];
        Vec3[] positions = [.. Enumerable.Range(0, 8).Select(k => new Vec3(k, 0, 0))];
        List<(SplitBlock Block, int Lane)> together = Splits.Of(matrices, positions, NoHead);
        for (int k = 0; k < 8; k++)
        {
            SplitBlock alone = Splits.Of(matrices[k], positions[k], NoHead);
            Assert.Equal([alone.S(0, 0), alone.S(1, 0), alone.S(2, 0)], new[] { together[k].Block.S(0, k), together[k].Block.S(1, k), together[k].Block.S(2, k) });
            Assert.Equal(alone.V(0, 0), together[k].Block.V(0, k));
        }
    }, iter: 100);

    [Fact]
    public void SingularValues_ScaleWithTheMatrix_FromTheSmallestToTheLargestNumbers() =>
        Gen.Select(Gen.Double[-1, 1].Array[45], Gen.Int[-1000, 1000]).Sample((matrix, exponent) =>
        {
            // Powers of two are exact, and squares of these leave the range of doubles.
            SplitBlock plain = Splits.Of(matrix, Vec3.Zero, NoHead);
            SplitBlock scaled = Splits.Of([.. matrix.Select(e => Math.ScaleB(e, exponent))], Vec3.Zero, NoHead);
            for (int k = 0; k < 3; k++)
            {
                RelativeAssert.Equal(Math.ScaleB(plain.S(k, 0), exponent), scaled.S(k, 0), Rounding);
                Assert.InRange(PlainSingularValues.Angle(plain.V(k, 0), scaled.V(k, 0)), 0, 1e-9); // gaps of random matrices are not controlled
            }
        }, iter: 300);
}
