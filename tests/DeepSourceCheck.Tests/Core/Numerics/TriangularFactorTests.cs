using System.Runtime.Intrinsics;

using CsCheck;

using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Numerics;

/// <summary>R of the factorisation, a matrix a lane.</summary>
public class TriangularFactorTests
{
    /// <summary>Backward error of modified Gram-Schmidt over up to 60 rows.</summary>
    private const double Rounding = 1e-13;

    private static double[] Repeat(double[] matrix) => [.. matrix.SelectMany(v => Enumerable.Repeat(v, 8))];

    /// <summary>R of one matrix, from the width that this processor runs in; the widths agree bit by bit, see LaneWidthTests.</summary>
    private static double[] Entries(double[] matrix, int rows) => LaneWidth.Lanes switch
    {
        8 => Entries<EightLanes>(matrix, rows),
        4 => Entries<FourLanes>(matrix, rows),
        _ => Entries<TwoLanes>(matrix, rows),
    };

    private static double[] Entries<T>(double[] matrix, int rows)
        where T : struct, ILaneVector<T>
    {
        TriangularFactor<T> r = TriangularFactor<T>.Of(Repeat(matrix), rows, 8 - T.Count);
        return [.. new[] { r.R11, r.R12, r.R13, r.R22, r.R23, r.R33 }.Select(v =>
        {
            var lanes = new double[T.Count];
            (v * r.Scale).Store(ref lanes[0], 0);
            return lanes[^1];
        })];
    }

    [Fact]
    public void Factor_ReproducesTheGramMatrix() => Gen.Select(Gen.Int[3, 60], Gen.Int[-9, 9]).SelectMany((rows, scale) =>
        Gen.Double[-1, 1].Array[rows * 3].Select(m => m.Select(v => v * Math.Pow(10, scale)).ToArray())).Sample(matrix =>
    {
        double[] r = Entries(matrix, matrix.Length / 3);
        double Gram(int a, int b) => Enumerable.Range(0, matrix.Length / 3).Sum(k => matrix[k * 3 + a] * matrix[k * 3 + b]);
        double top = Gram(0, 0) + Gram(1, 1) + Gram(2, 2);
        (double Expected, double Actual)[] pairs =
        [
            (Gram(0, 0), r[0] * r[0]), (Gram(0, 1), r[0] * r[1]), (Gram(0, 2), r[0] * r[2]),
            (Gram(1, 1), r[1] * r[1] + r[3] * r[3]), (Gram(1, 2), r[1] * r[2] + r[3] * r[4]), (Gram(2, 2), r[2] * r[2] + r[4] * r[4] + r[5] * r[5]),
        ];
        Assert.All(pairs, p => Assert.InRange(Math.Abs(p.Expected - p.Actual), 0, Rounding * top));
    }, iter: 300);

    [Fact]
    public void Factor_OfZeroColumns_HasZeroRowsAndNoNaN()
    {
        double[][] cases = [[0, 1, 2, 0, 3, 4, 0, 5, 6], [1, 0, 2, 3, 0, 4, 5, 0, 6], [1, 2, 0, 3, 4, 0, 5, 6, 0], [1, 1, 1, 2, 2, 2, 3, 3, 3], new double[9]];
        foreach (double[] matrix in cases)
        {
            double[] r = Entries(matrix, 3);
            Assert.All(r, v => Assert.True(double.IsFinite(v)));
            RelativeAssert.Equal(Math.Sqrt(matrix.Sum(v => v * v)), Math.Sqrt(r.Sum(v => v * v)), 1e-14);
        }
    }

    [Theory]
    [InlineData(1e-300)]
    [InlineData(1e-170)]
    [InlineData(1e170)]
    [InlineData(1e300)]
    public void Factor_WhereSquaresLeaveTheRange_IsScaled(double size)
    {
        double[] r = Entries([3 * size, 0, 0, 4 * size, 5 * size, 0], 2);
        RelativeAssert.Equal(5 * size, r[0], 1e-15);
        RelativeAssert.Equal(4 * size, r[1], 1e-15);
        RelativeAssert.Equal(3 * size, r[3], 1e-15);
    }

    [Fact]
    public void Factor_OfASpanThatIsTooShort_IsRefused() => Assert.Throws<ArgumentException>(() => TriangularFactor<EightLanes>.Of(new double[47], 2, 0));

    [Fact]
    public void PowerOfTwo_IsTheOneAtOrBelow()
    {
        Vector512<double> power = LaneVector.PowerOfTwo(new EightLanes(Vector512.Create(1.0, 1.99, 2.0, 3e-7, 5e300, 0.0, 5e-324, 0.75))).Value;
        Assert.Equal([1.0, 1.0, 2.0, Math.ScaleB(1, -22), Math.ScaleB(1, 998), 1.0, Math.ScaleB(1, -1022), 0.5], Enumerable.Range(0, 8).Select(k => power[k]));
    }
}
