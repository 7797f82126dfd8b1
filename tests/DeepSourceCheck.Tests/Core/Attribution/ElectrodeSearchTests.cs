using DeepSourceCheck.Core.Attribution;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Tests.Core.Leadfields;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Attribution;

/// <summary>The greedy choice of electrodes: its powers are those of filters, it knows no reference, and exhaustive search says what it loses.</summary>
public class ElectrodeSearchTests
{
    // Cholesky steps against explicit inverses of at most 8 x 8, conditions of some 1e3.
    private const double Rounding = 1e-9;

    // What greedy keeps of the best set's mean power. Fields and noise without any structure are its worst case: 0.76 measured over the seeds below. Fields on a head are smooth, and it does better there.
    private const double GreedyShareOfRandomFields = 0.7, GreedyShareOnAHead = 0.9;

    private const int Electrodes = 8, Fields = 5;

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(4)]
    [InlineData(5)]
    public void Powers_AreThoseOfTheMatchedFilterOfTheChosenElectrodes(int seed)
    {
        (double[] c, double[] x) = Problem(seed);
        var chosen = new List<int>();
        foreach (ChosenElectrode step in new ElectrodeSearch(c, x, Electrodes).Greedy(Electrodes))
        {
            chosen.Add(step.Electrode);
            RelativeAssert.Close(Filter(c, x, [.. chosen]), step.Powers, Rounding, $"{chosen.Count} electrodes");
        }

        Assert.Equal(Enumerable.Range(0, Electrodes), chosen.Order());
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(4)]
    [InlineData(5)]
    public void Greedy_AgainstExhaustiveSearchOnEightElectrodes(int seed)
    {
        // Two electrodes come from all pairs and are the best; all eight are all there are; between them greedy may fall short, and by how much is held here.
        (double[] c, double[] x) = Problem(seed);
        IReadOnlyList<ChosenElectrode> greedy = new ElectrodeSearch(c, x, Electrodes).Greedy(Electrodes);
        for (int size = 2; size <= Electrodes; size++)
        {
            double best = Subsets(size).Max(s => Filter(c, x, s).Average()), found = greedy[size - 1].Powers.Average();
            Assert.InRange(found / best, size == 2 || size == Electrodes ? 1 - Rounding : GreedyShareOfRandomFields, 1 + Rounding);
        }
    }

    [Theory]
    [InlineData(0.02)]
    [InlineData(0.04)]
    [InlineData(0.06)]
    public void Greedy_AgainstExhaustiveSearch_OnAHead(double radius)
    {
        // Eight electrodes over the adult sphere, equal and independent noise, sources of five directions at one depth.
        LayeredSphere head = SphereLeadfields.Adult;
        Vec3 place = head.Centre + radius * new Vec3(0.36, -0.48, 0.8);
        double[] leadfield = SphereLeadfields.Eeg(head, [place], SphereLeadfields.Electrodes(head, Electrodes))[0];
        Vec3[] moments = [.. Enumerable.Range(0, Fields).Select(s => 1e-8 * GoldenSpiral.Point(s, Fields))];
        double[] c = SmallStudy.Identity(Electrodes, 1e-12), x = [.. Enumerable.Range(0, Electrodes * Fields).Select(k => SphereLeadfields.Times(leadfield, moments[k % Fields])[k / Fields])];
        IReadOnlyList<ChosenElectrode> greedy = new ElectrodeSearch(c, x, Electrodes).Greedy(Electrodes);
        for (int size = 2; size <= greedy.Count; size++)
        {
            double best = Subsets(size).Max(s => Filter(c, x, s).Average());
            Assert.InRange(greedy[size - 1].Powers.Average() / best, GreedyShareOnAHead, 1 + Rounding);
        }
    }

    [Fact]
    public void Choice_DoesNotDependOnTheReference()
    {
        (double[] c, double[] x) = Problem(7);
        IReadOnlyList<ChosenElectrode> plain = new ElectrodeSearch(c, x, Electrodes).Greedy(Electrodes);
        double[][] references = [[.. Enumerable.Repeat(1.0 / Electrodes, Electrodes)], [0, 0, 1, 0, 0, 0, 0, 0], [0.5, 0, 0, 0, 0, 0, 0, 0.5]];
        foreach (double[] weights in references)
        {
            Matrix<double> p = Matrix<double>.Build.Dense(Electrodes, Electrodes, (i, j) => (i == j ? 1 : 0) - weights[j]);
            double[] referenced = RowMajor(p * Square(c) * p.Transpose()), fields = RowMajor(p * Matrix<double>.Build.Dense(Electrodes, Fields, (i, s) => x[i * Fields + s]));
            IReadOnlyList<ChosenElectrode> other = new ElectrodeSearch(referenced, fields, Electrodes).Greedy(Electrodes);
            Assert.Equal(plain.Select(s => s.Electrode), other.Select(s => s.Electrode));
            for (int k = 1; k < plain.Count; k++)
            {
                RelativeAssert.Close(plain[k].Powers, other[k].Powers, Rounding, "powers");
            }
        }
    }

    [Fact]
    public void ElectrodeThatRepeatsAnother_NeverJoins()
    {
        // Electrode 7 reads what electrode 0 reads, noise and all: nothing is left of it.
        (double[] c, double[] x) = Problem(11);
        for (int j = 0; j < Electrodes; j++)
        {
            c[7 * Electrodes + j] = c[j];
        }

        for (int i = 0; i < Electrodes; i++)
        {
            c[i * Electrodes + 7] = c[i * Electrodes];
        }

        c[7 * Electrodes + 7] = c[0];
        Array.Copy(x, 0, x, 7 * Fields, Fields);
        IReadOnlyList<ChosenElectrode> chosen = new ElectrodeSearch(c, x, Electrodes).Greedy(Electrodes);
        Assert.Equal(Electrodes - 1, chosen.Count);
        Assert.Single(chosen, s => s.Electrode is 0 or 7);
    }

    [Fact]
    public void Pairs_AreRankedByTheirMeanPower()
    {
        (double[] c, double[] x) = Problem(13);
        var search = new ElectrodeSearch(c, x, Electrodes);
        IReadOnlyList<(int A, int B, double Mean)> pairs = search.Pairs();
        Assert.Equal(Electrodes * (Electrodes - 1) / 2, pairs.Count);
        Assert.Equal(pairs.Select(p => p.Mean).OrderDescending(), pairs.Select(p => p.Mean));
        RelativeAssert.Close(Filter(c, x, [pairs[0].A, pairs[0].B]), search.Pair(pairs[0].A, pairs[0].B), Rounding, "best pair");
    }

    [Fact]
    public void TooFewElectrodes_AreRefused() => Assert.Throws<ArgumentException>(() => new ElectrodeSearch([1], [1.0], 1));

    private static (double[] Covariance, double[] Fields) Problem(int seed)
    {
        var random = new Random(seed);
        return (SmallStudy.RandomCovariance(random, Electrodes, 2e-6), [.. Enumerable.Range(0, Electrodes * Fields).Select(_ => 1e-6 * (2 * random.NextDouble() - 1))]);
    }

    // Plain twin: differences against the last of the set, their covariance inverted.
    private static double[] Filter(double[] c, double[] x, int[] set)
    {
        if (set.Length < 2)
        {
            return new double[Fields];
        }

        int n = set.Length - 1, anchor = set[^1];
        Matrix<double> d = Matrix<double>.Build.Dense(n, Electrodes, (i, j) => (j == set[i] ? 1 : 0) - (j == anchor ? 1 : 0));
        Matrix<double> inverse = (d * Square(c) * d.Transpose()).Inverse();
        return [.. Enumerable.Range(0, Fields).Select(s =>
        {
            Vector<double> b = d * Vector<double>.Build.Dense(Electrodes, k => x[k * Fields + s]);
            return b * inverse * b;
        })];
    }

    private static IEnumerable<int[]> Subsets(int size) =>
        Enumerable.Range(0, 1 << Electrodes).Where(bits => int.PopCount(bits) == size).Select(bits => Enumerable.Range(0, Electrodes).Where(k => (bits >> k & 1) == 1).ToArray());

    private static Matrix<double> Square(double[] c) => Matrix<double>.Build.Dense(Electrodes, Electrodes, (i, j) => c[i * Electrodes + j]);

    private static double[] RowMajor(Matrix<double> m) => [.. m.EnumerateRows().SelectMany(r => r)];
}
