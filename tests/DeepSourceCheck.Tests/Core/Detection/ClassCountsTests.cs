using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Tests.References;

namespace DeepSourceCheck.Tests.Core.Detection;

/// <summary>Counts by class against one count a value.</summary>
public class ClassCountsTests
{
    [Theory]
    [InlineData(1, 1)]
    [InlineData(7, 3)]
    [InlineData(40_000, 1)]                                     // more than are collected at once
    [InlineData(40_000, 13)]                                    // runs that end within a vector
    [InlineData(100_000, 16)]
    public void Values_AtEveryRank_AreThoseOfOneCountAValue(int values, int run)
    {
        var random = new Random(values + run);
        double[] all = [.. Enumerable.Range(0, values).Select(k => Value(random))];
        var plain = new PlainClassCounts();
        var fast = new ClassCounts();
        for (int from = 0; from < values; from += run)
        {
            ReadOnlySpan<double> some = all.AsSpan(from, Math.Min(run, values - from));
            fast.Add(some);
            foreach (double value in some)
            {
                plain.Add(value);
            }
        }

        Same(plain, fast, random);
    }

    [Fact]
    public void Merged_InEitherOrder_IsOneOfAllValues()
    {
        var random = new Random(8);
        double[] all = [.. Enumerable.Range(0, 50_000).Select(k => Value(random))];
        var plain = new PlainClassCounts();
        foreach (double value in all)
        {
            plain.Add(value);
        }

        ClassCounts first = Of(all.AsSpan(0, 20_011)), second = Of(all.AsSpan(20_011));
        first.Merge(second);
        Same(plain, first, random);
        second.Merge(Of(all.AsSpan(0, 20_011)));
        second.Complete();
        Same(plain, second, random);
    }

    [Fact]
    public void Rank_BeyondTheCount_IsRefused()
    {
        var counts = new ClassCounts();
        counts.Add([1, double.NaN, 2]);
        Assert.Equal(2, counts.Count);
        Assert.Throws<ArgumentOutOfRangeException>(() => counts.AtRank(2));
    }

    // Over some decades, with silence, minus zero, infinity and NaN among them.
    private static double Value(Random random) => random.Next(40) switch
    {
        0 => 0,
        1 => -0.0,
        2 => double.NaN,
        3 => double.PositiveInfinity,
        _ => Math.Exp(12 * random.NextDouble()),
    };

    private static ClassCounts Of(ReadOnlySpan<double> values)
    {
        var counts = new ClassCounts();
        counts.Add(values);
        return counts;
    }

    private static void Same(PlainClassCounts plain, ClassCounts fast, Random random)
    {
        Assert.Equal(plain.Count, fast.Count);
        for (int k = 0; k < Math.Min(plain.Count, 300); k++)
        {
            long rank = k == 0 ? plain.Count - 1 : random.NextInt64(plain.Count);
            Assert.Equal(plain.AtRank(rank), fast.AtRank(rank));
        }
    }
}
