using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.Distributions;
using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Noise.Recordings;

/// <summary>The shrunk covariance against the paper's own formulas, and what it must not depend on.</summary>
public class ShrunkCovarianceTests
{
    // Sums of some hundred products in another order.
    private const double Rounding = 1e-11;

    private static Matrix<double> Samples(int rows, int count, int seed)
    {
        var random = new Random(seed);
        Matrix<double> mixing = Matrix<double>.Build.Dense(rows, rows, (i, j) => Normal.Sample(random, 0, 1) / (1 + Math.Abs(i - j)));
        return mixing * Matrix<double>.Build.Dense(rows, count, (_, _) => Normal.Sample(random, 0, 1));
    }

    private static SampleMoments Moments(Matrix<double> samples)
    {
        var moments = new SampleMoments(samples.RowCount);
        foreach (Vector<double> x in samples.EnumerateColumns())
        {
            moments.Add((x - x.Average()).ToArray());
        }

        return moments;
    }

    // Orthonormal basis of what the average leaves: the paper's I is then our P.
    private static Matrix<double> Basis(int rows)
    {
        Matrix<double> centred = Matrix<double>.Build.Dense(rows, rows - 1, (i, j) => (i == j ? 1 : 0) - 1.0 / rows);
        return centred.GramSchmidt().Q;
    }

    [Theory]
    [InlineData(3, 8)]
    [InlineData(6, 10)]
    [InlineData(6, 400)]
    [InlineData(20, 15)]
    public void Covariance_IsThatOfThePaper_InTheSpaceThatTheAverageLeaves(int rows, int count)
    {
        Matrix<double> samples = Samples(rows, count, rows), basis = Basis(rows);
        (Matrix<double> plain, double weight) = PlainLedoitWolf.Of(basis.Transpose() * samples);
        ShrunkCovariance shrunk = ShrunkCovariance.Of(Moments(samples), count);
        RelativeAssert.Equal(weight, shrunk.Weight, 1e-9);
        RelativeAssert.Close((basis * plain * basis.Transpose()).ToRowMajorArray(), shrunk.Values, Rounding);
    }

    [Fact]
    public void Inverse_IsThatOfTheSpaceThatTheAverageLeaves()
    {
        Matrix<double> samples = Samples(5, 30, 1), basis = Basis(5);
        (Matrix<double> plain, _) = PlainLedoitWolf.Of(basis.Transpose() * samples);
        Matrix<double> expected = basis * plain.Inverse() * basis.Transpose();
        RelativeAssert.Close(expected.ToRowMajorArray(), ShrunkCovariance.Of(Moments(samples), 30).Inverse().ToRowMajorArray(), 1e-9);
    }

    [Fact]
    public void FewIndependentSamples_WeighEqualVarianceMore()
    {
        SampleMoments moments = Moments(Samples(8, 4000, 2));
        double[] weights = [.. new[] { 4000, 400, 40, 4 }.Select(nu => ShrunkCovariance.Of(moments, nu).Weight)];
        Assert.Equal(weights.Order(), weights);
        RelativeAssert.Equal(10 * weights[0], weights[1], 1e-9, "the weight goes with 1/nu");
        Assert.Equal(1, weights[3], 1e-9);
    }

    [Fact]
    public void HeldOutShare_BringsThePromiseToWhatFiltersFromHalfTheSamplesKeep()
    {
        // Reed, Mallett and Brennan 1974: a plug-in filter of nu/2 samples keeps (nu/2 - r + 2)/(nu/2 + 1) of the ideal power. With 250 samples a dimension shrinkage hardly acts, and the
        // claimed power must come to that; 0.02 is some four standard errors over the draws. Few samples: shrinkage helps the filter, so the claim lies between the formula and the ideal.
        const int rows = 5, rank = rows - 1;
        RelativeAssert.Equal(Kept(1000), Claimed(1000), 0.02);
        Assert.InRange(Claimed(24), Kept(24), 0.97);

        static double Kept(double nu) => (nu / 2 - rank + 2) / (nu / 2 + 1);
    }

    // Claimed over ideal power, mean over electrodes and draws from one known covariance.
    private static double Claimed(int count)
    {
        const int rows = 5;
        Matrix<double> mixing = Samples(rows, 12, 7);
        double[] ideal = [.. ShrunkCovariance.Of(Moments(mixing), 1e15).Inverse().Diagonal()];
        return Enumerable.Range(0, 40).Average(seed =>
        {
            var random = new Random(seed);
            Matrix<double> drawn = mixing * Matrix<double>.Build.Dense(12, count, (_, _) => Normal.Sample(random, 0, 1)) / Math.Sqrt(12);
            SampleMoments first = Moments(drawn.SubMatrix(0, rows, 0, count / 2)), second = Moments(drawn.SubMatrix(0, rows, count / 2, count / 2)), all = new(rows);
            all.Add(first);
            all.Add(second);
            ShrunkCovariance whole = ShrunkCovariance.Of(all, count);
            return HeldOutShare.Of(whole, first, second, count) * whole.Inverse().Diagonal().Select((power, k) => power / ideal[k]).Average();
        });
    }
}
