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
    public void HeldOutShare_OfManySamples_IsNearOne_OfFewLess()
    {
        // Reed, Mallett and Brennan 1974: a plug-in filter of half the samples keeps (nu/2 - r + 2)/(nu/2 + 1), its promise is nu/(nu - r - 1) too high. With 200 samples an electrode
        // shrinkage hardly acts, and the product must come out; 0.02 is twice the spread over seeds.
        const int rows = 5, rank = rows - 1, many = 1000;
        double share = Share(many);
        double expected = (many / 2.0 - rank + 2) / (many / 2.0 + 1) * (many - rank - 1.0) / many;
        Assert.InRange(share, expected - 0.02, Math.Min(1, expected + 0.02));
        Assert.True(Share(16) < 0.9);

        static double Share(int count)
        {
            // The mean over draws, so that the spread of one does not matter.
            return Enumerable.Range(0, 20).Average(seed =>
            {
                Matrix<double> samples = Samples(rows, count, 7);
                var random = new Random(seed);
                Matrix<double> drawn = samples * Matrix<double>.Build.Dense(count, count, (i, j) => Normal.Sample(random, 0, 1)) / Math.Sqrt(count);
                SampleMoments first = Moments(drawn.SubMatrix(0, rows, 0, count / 2)), second = Moments(drawn.SubMatrix(0, rows, count / 2, count - count / 2)), all = new(rows);
                all.Add(first);
                all.Add(second);
                return HeldOutShare.Of(ShrunkCovariance.Of(all, count), first, second, count);
            });
        }
    }
}
