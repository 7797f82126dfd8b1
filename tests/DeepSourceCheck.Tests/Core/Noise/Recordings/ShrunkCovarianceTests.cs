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

    [Theory]
    [InlineData(4000, 0.01)]
    [InlineData(200, 0.02)]
    [InlineData(24, 0.12)]
    public void HeldOutShare_BringsThePromiseToWhatFiltersFromHalfTheSamplesReach(int count, double allowed)
    {
        // Against the true covariance, which the share does not know. Means over 60 draws, their standard errors a third of what is allowed; with few samples the share, at most 1, is rather too low.
        (double claimed, double reached) = Powers(count);
        Assert.InRange(claimed, reached - allowed, reached + allowed / 3);
    }

    [Fact]
    public void FiltersFromPlentyOfSamples_KeepWhatThePaperOfAdaptiveArraysSays()
    {
        // Reed, Mallett and Brennan 1974: (nu - r + 2)/(nu + 1) of the ideal power, here with half of 200 samples and r = 4; shrinkage acts little.
        RelativeAssert.Equal((100 - 4 + 2) / 101.0, Powers(200).Reached, 0.01);
    }

    // Power that is claimed, and that filters from half of the samples reach on the true covariance; over the ideal one, mean over electrodes and draws.
    private static (double Claimed, double Reached) Powers(int count)
    {
        const int rows = 5, draws = 60;
        double[] deviation = [1, 1.3, 1.7, 2.2, 3];
        Matrix<double> centre = Matrix<double>.Build.Dense(rows, rows, (i, j) => (i == j ? 1 : 0) - 1.0 / rows), basis = Basis(rows);
        Matrix<double> truth = centre * Matrix<double>.Build.DenseOfDiagonalArray([.. deviation.Select(d => d * d)]) * centre;
        Matrix<double> ideal = basis * (basis.Transpose() * truth * basis).Inverse() * basis.Transpose();
        double claimed = 0, reached = 0;
        for (int seed = 0; seed < draws; seed++)
        {
            var random = new Random(seed);
            Matrix<double> drawn = Matrix<double>.Build.Dense(rows, count, (i, _) => Normal.Sample(random, 0, deviation[i]));
            SampleMoments first = Moments(drawn.SubMatrix(0, rows, 0, count / 2)), second = Moments(drawn.SubMatrix(0, rows, count / 2, count / 2)), all = new(rows);
            all.Add(first);
            all.Add(second);
            ShrunkCovariance whole = ShrunkCovariance.Of(all, count);
            double share = HeldOutShare.Of(whole, first, second, count);
            Matrix<double> promised = whole.Inverse(), filters = ShrunkCovariance.Of(first, count / 2).Inverse();
            for (int k = 0; k < rows; k++)
            {
                Vector<double> w = filters.Column(k);
                claimed += share * promised[k, k] / ideal[k, k] / rows / draws;
                reached += w[k] * w[k] / w.DotProduct(truth * w) / ideal[k, k] / rows / draws;
            }
        }

        return (claimed, reached);
    }
}
