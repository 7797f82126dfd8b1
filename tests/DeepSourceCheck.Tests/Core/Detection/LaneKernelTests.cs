using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using CsCheck;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Detection;

/// <summary>The kernels over rows of eight dipoles, each against its plain twin.</summary>
public class LaneKernelTests
{
    /// <summary>Sums of at most 300 products in another order: some hundred units in the last place.</summary>
    private const double Rounding = 3e-14;

    /// <summary>A square that the difference of nearly equal numbers enters: e.e - (e.w)^2, b - e.e.</summary>
    private const double RoundingOfDifferences = 1e-12;

    /// <summary>300 rows with a covariance of condition below 2000.</summary>
    private const double RoundingOfWhitening = 1e-12;

    private const int Lanes = LeadfieldBlock.Lanes;

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(7)]
    [InlineData(64)]
    [InlineData(291)]
    public void LaneKernels_AgreeWithTheirTwins(int count)
    {
        var random = new Random(count);
        double[] rows = Rows(random, count);
        LaneDirection[] set = [.. Enumerable.Range(0, 11).Select(_ => Directions(random))];
        var norms = new double[count * Lanes];
        var gram = new Vector512<double>[6];
        DeepSourceCheck.Core.Detection.Lanes.Gram(rows, count, gram);
        Vector512<double> power = DeepSourceCheck.Core.Detection.Lanes.ProjectedPower(rows, count, set[0]), quadratic = DeepSourceCheck.Core.Detection.Lanes.Quadratic(gram, set[0]);
        Vector512<double> largest = DeepSourceCheck.Core.Detection.Lanes.Largest(rows, count, set[0], out Vector512<double> index), norm = DeepSourceCheck.Core.Detection.Lanes.LargestNorm(rows, count, norms, out Vector512<double> longest);
        Vector512<double> both = DeepSourceCheck.Core.Detection.Lanes.PowerAndLargest(rows, count, set[0], out Vector512<double> largestOfBoth, out Vector512<double> indexOfBoth);
        Vector512<double> sum = DeepSourceCheck.Core.Detection.Lanes.SumOfLargest(rows, count, set);
        for (int lane = 0; lane < Lanes; lane++)
        {
            Vec3[] own = Lane(rows, count, lane);
            Vec3 u = Of(set[0], lane);
            (int A, int B)[] entries = [(0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)];
            double scale = own.Sum(r => Vec3.Dot(r, r));
            for (int k = 0; k < 6; k++)
            {
                Assert.InRange(gram[k][lane] - PlainRows.Gram(own, entries[k].A, entries[k].B), -Rounding * scale, Rounding * scale);
            }

            Assert.InRange(power[lane] - PlainRows.ProjectedPower(own, u), -Rounding * scale, Rounding * scale);
            Assert.InRange(quadratic[lane] - PlainRows.ProjectedPower(own, u), -Rounding * scale, Rounding * scale);
            (double expected, int row) = PlainRows.Largest(own, u);
            Assert.InRange(largest[lane] - expected, -Rounding * scale, Rounding * scale);
            Assert.Equal(row, (int)index[lane]);
            RelativeAssert.Equal(PlainRows.LargestNorm(own), norm[lane], Rounding);
            Assert.Equal(norm[lane], norms[(int)longest[lane] * Lanes + lane]);
            for (int k = 0; k < count; k++)
            {
                RelativeAssert.Equal(Vec3.Dot(own[k], own[k]), norms[k * Lanes + lane], Rounding);
            }

            Assert.Equal((power[lane], largest[lane], index[lane]), (both[lane], largestOfBoth[lane], indexOfBoth[lane]));
            Assert.InRange(sum[lane] - set.Sum(d => PlainRows.Largest(own, Of(d, lane)).Power), -Rounding * scale * set.Length, Rounding * scale * set.Length);
        }
    }

    [Fact]
    public void BestPair_AgreesWithTheDoubleLoop() =>
        Gen.Int[1, 70].Select(Gen.Int[1, 90], Gen.Int, Gen.Double[-3, 3], Gen.Bool).Sample((eegCount, megCount, seed, decades, flat) =>
        {
            // MEG rows in one plane for each dipole, as in a sphere, or in none; EEG rows stronger or weaker by up to three decades.
            var random = new Random(seed);
            double[] eeg = [.. Rows(random, eegCount).Select(x => x * Math.Pow(10, decades))], meg = Rows(random, megCount);
            LaneDirection unseen = flat ? Directions(random) : default;
            for (int k = 0; flat && k < megCount; k++)
            {
                for (int lane = 0; lane < Lanes; lane++)
                {
                    Vec3 w = Of(unseen, lane), row = Lane(meg, megCount, lane)[k];
                    row -= Vec3.Dot(row, w) * w;
                    (meg[LeadfieldBlock.At(k, 0) + lane], meg[LeadfieldBlock.At(k, 1) + lane], meg[LeadfieldBlock.At(k, 2) + lane]) = row;
                }
            }

            Vector512<double> best = new PairSearch().Largest(View(eeg), eegCount, View(meg), megCount, unseen);
            for (int lane = 0; lane < Lanes; lane++)
            {
                RelativeAssert.Equal(PlainRows.BestPair(Lane(eeg, eegCount, lane), Lane(meg, megCount, lane)), best[lane], RoundingOfDifferences);
            }
        }, seed: "0000KeqOG7K1", iter: 300);

    [Fact]
    public void BestPair_OfSilentMeg_IsTheStrongestElectrode()
    {
        double[] eeg = Rows(new Random(4), 5), meg = new double[6 * 3 * Lanes];
        Vector512<double> best = new PairSearch().Largest(View(eeg), 5, View(meg), 6, default);
        for (int lane = 0; lane < Lanes; lane++)
        {
            RelativeAssert.Equal(PlainRows.LargestNorm(Lane(eeg, 5, lane)), best[lane], Rounding);
        }
    }

    [Theory]
    [InlineData(1)]
    [InlineData(7)]
    [InlineData(8)]
    [InlineData(9)]
    [InlineData(64)]
    [InlineData(291)]
    public void Whitener_OfAnyNumberOfRows_HasThePowersOfForwardSubstitution(int n)
    {
        // The order of pivots differs, so that rows do; their sum of squares b' C^-1 b does not.
        var random = new Random(n);
        double[] c = SmallStudy.RandomCovariance(random, n, 1e-13), input = [.. Rows(random, n).Select(x => 1e-13 * x)];
        Whitener whitener = Whitener.Of(c, n);
        var output = new double[input.Length];
        whitener.Apply(input, output);
        for (int axis = 0; axis < 3; axis++)
        {
            for (int lane = 0; lane < Lanes; lane++)
            {
                double[] values = [.. Enumerable.Range(0, n).Select(k => input[LeadfieldBlock.At(k, axis) + lane])];
                double expected = PlainRows.Whiten(c, values).Sum(y => y * y);
                double found = Enumerable.Range(0, whitener.Rank).Sum(k => output[LeadfieldBlock.At(k, axis) + lane] * output[LeadfieldBlock.At(k, axis) + lane]);
                RelativeAssert.Equal(expected, found, RoundingOfWhitening);
            }
        }
    }

    private static double[] Rows(Random random, int count) => [.. Enumerable.Range(0, count * 3 * Lanes).Select(_ => random.NextDouble() - 0.5)];

    private static ReadOnlySpan<Vector512<double>> View(double[] rows) => MemoryMarshal.Cast<double, Vector512<double>>(rows.AsSpan());

    private static Vec3[] Lane(double[] rows, int count, int lane) =>
        [.. Enumerable.Range(0, count).Select(k => new Vec3(rows[LeadfieldBlock.At(k, 0) + lane], rows[LeadfieldBlock.At(k, 1) + lane], rows[LeadfieldBlock.At(k, 2) + lane]))];

    private static LaneDirection Directions(Random random)
    {
        Vec3[] u = [.. Enumerable.Range(0, Lanes).Select(_ => new Vec3(random.NextDouble() - 0.5, random.NextDouble() - 0.5, random.NextDouble() - 0.5).Unit())];
        return new(
            Vector512.Create<double>(u.Select(v => v.X).ToArray()), Vector512.Create<double>(u.Select(v => v.Y).ToArray()), Vector512.Create<double>(u.Select(v => v.Z).ToArray()));
    }

    private static Vec3 Of(in LaneDirection u, int lane) => new(u.X[lane], u.Y[lane], u.Z[lane]);
}
