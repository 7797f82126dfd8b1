using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Tests.Core.Numerics;

/// <summary>The low-discrepancy stream.</summary>
public class SobolSequenceTests
{
    private static double[] Point(SobolSequence sequence, uint index)
    {
        var point = new double[sequence.Dimensions];
        sequence.Point(index, point);
        return point;
    }

    [Theory]
    [InlineData(0, "0 0 0 0 0 0 0 0 0 0 0 0 0")]
    [InlineData(1, "0.5 0.5 0.5 0.5 0.5 0.5 0.5 0.5 0.5 0.5 0.5 0.5 0.5")]
    [InlineData(2, "0.25 0.75 0.75 0.75 0.25 0.25 0.75 0.25 0.25 0.25 0.25 0.25 0.75")]
    [InlineData(6, "0.375 0.375 0.625 0.875 0.375 0.125 0.375 0.875 0.875 0.625 0.875 0.375 0.375")]
    [InlineData(7, "0.875 0.875 0.125 0.375 0.875 0.625 0.875 0.375 0.375 0.125 0.375 0.875 0.875")]
    [InlineData(37, "0.640625 0.921875 0.734375 0.828125 0.484375 0.765625 0.703125 0.015625 0.953125 0.953125 0.296875 0.046875 0.671875")]
    [InlineData(50, "0.296875 0.515625 0.453125 0.296875 0.390625 0.671875 0.046875 0.921875 0.734375 0.296875 0.140625 0.703125 0.703125")]
    public void PlainPoints_AreThoseOfAnIndependentImplementation(int index, string expected)
    {
        // scipy 1.10.1, stats.qmc.Sobol(13, scramble=False), direction numbers of Joe and Kuo 2008. It walks in Gray-code order: its point i is number i xor (i/2) here. All exact in binary.
        var sequence = new SobolSequence(SobolSequence.MostDimensions, shifted: false);
        Assert.Equal(expected.Split(' ').Select(v => double.Parse(v, System.Globalization.CultureInfo.InvariantCulture)), Point(sequence, (uint)index));
    }

    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public void EveryCoordinate_FillsEachOfEqualIntervalsOnce(bool shifted)
    {
        const int n = 256;
        var sequence = new SobolSequence(SobolSequence.MostDimensions, shifted);
        double[][] points = [.. Enumerable.Range(0, n).Select(k => Point(sequence, (uint)k))];
        for (int j = 0; j < sequence.Dimensions; j++)
        {
            Assert.Equal(n, points.Select(p => (int)(p[j] * n)).Distinct().Count());
        }
    }

    [Fact]
    public void FirstTwoCoordinates_FillEveryBoxOfEqualArea()
    {
        // A (0, 8, 2)-net in base 2: each of the 2^8 boxes of any shape 2^-a by 2^-(8-a) holds one of 256 points.
        var sequence = new SobolSequence(2);
        double[][] points = [.. Enumerable.Range(0, 256).Select(k => Point(sequence, (uint)k))];
        for (int a = 0; a <= 8; a++)
        {
            Assert.Equal(256, points.Select(p => ((int)(p[0] * (1 << a)), (int)(p[1] * (1 << (8 - a))))).Distinct().Count());
        }
    }

    [Fact]
    public void ShiftedPoints_LieInsideTheCube()
    {
        var sequence = new SobolSequence(9);
        for (uint k = 0; k < 4096; k++)
        {
            Assert.All(Point(sequence, k), u => Assert.True(u is > 0 and < 1));
        }
    }

    [Fact]
    public void Integral_OfASmoothFunction_IsNearerThanBySimulation()
    {
        // Product of (1 + (u - 1/2)/2): the integral over the cube is 1. Pseudo-random draws would be off by some 0.02 at 256 points of nine coordinates.
        var sequence = new SobolSequence(9);
        double mean = Enumerable.Range(0, 256).Average(k => Point(sequence, (uint)k).Aggregate(1.0, (product, u) => product * (1 + (u - 0.5) / 2)));
        Assert.InRange(mean, 0.995, 1.005);
    }

    [Fact]
    public void TooManyCoordinates_AreRefused() => Assert.Throws<ArgumentOutOfRangeException>(() => new SobolSequence(SobolSequence.MostDimensions + 1));
}
