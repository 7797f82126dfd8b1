using System.Globalization;

using CsCheck;

using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics;
using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Tests.Core.Numerics;

/// <summary>Noncentral chi-square, F and t: published values, the term-by-term twin, an independent implementation, and their own properties.</summary>
public class NoncentralTests
{
    private const string Python = "/usr/bin/python3", Scipy = "/usr/lib/python3/dist-packages/scipy";

    /// <summary>Relative. The twin's terms come from logarithms of the gamma function.</summary>
    private const double TwinTolerance = 1e-9;

    /// <summary>Relative, the accuracy that planning asks for; probabilities above 1e-8, since the other implementation may find upper tails as complements.</summary>
    private const double IndependentTolerance = 1e-10, SmallestCompared = 1e-6;

    /// <summary>Absolute: the library's expansions are off by some 1e-11 to 1e-10 at hundreds of degrees of freedom.</summary>
    private const double MarcumTolerance = 1e-9;

    /// <summary>Relative, at 1e7 degrees of freedom: what the other implementation itself is off there, see <see cref="SurvivalAtTenMillion_IsTheExactSum"/>.</summary>
    private const double IndependentAtTenMillion = 2e-8;

    [Theory]                                                    // critical values recomputed from exact distributions, one with a published twin (3.1: Elberling and Don 1984); digits as given
    [InlineData(0.05, 5, 250, 2.250)]
    [InlineData(0.01, 5, 250, 3.091)]
    [InlineData(0.001, 5, 250, 4.250)]
    [InlineData(0.05, 2, 120, 3.072)]
    [InlineData(0.05, 2, 240, 3.033)]
    [InlineData(0.01, 2, 240, 4.695)]
    public void CriticalF_IsTheTabulated(double alpha, double d1, double d2, double critical) =>
        Assert.Equal(critical, Math.Round(NoncentralF.Critical(alpha, d1, d2), 3));

    [Theory]                                                    // published tables of the t law
    [InlineData(0.05, 9, 1.833)]
    [InlineData(0.05, 29, 1.699)]
    [InlineData(0.025, 29, 2.045)]
    public void CriticalT_IsTheTabulated(double alpha, double nu, double critical) => Assert.Equal(critical, Math.Round(NoncentralT.Critical(alpha, nu), 3));

    [Theory]                                                    // published tables of the chi-square law
    [InlineData(0.05, 1, 3.841)]
    [InlineData(0.01, 2, 9.210)]
    [InlineData(0.05, 10, 18.307)]
    public void CriticalChiSquare_IsTheTabulated(double alpha, double k, double critical) => Assert.Equal(critical, Math.Round(NoncentralChiSquare.Critical(alpha, k), 3));

    [Fact]
    public void ChanceOfPassingThePublishedFspValue_IsBelowOnePercent() => Assert.Equal(0.0098, Math.Round(NoncentralF.Survival(3.1, 5, 250, 0), 4));

    [Theory]                                                    // noncentralities recomputed from exact distributions: F(5, 250), and half of those of F(2, 240); digits as given
    [InlineData(0.01, 0.9, 5, 250, 22.7)]
    [InlineData(0.01, 0.8, 5, 250, 18.4)]
    public void NoncentralityOfTheFspRule_IsTheTabulated(double alpha, double power, double d1, double d2, double lambda) =>
        Assert.Equal(lambda, Math.Round(NoncentralF.Noncentrality(NoncentralF.Critical(alpha, d1, d2), d1, d2, power), 1));

    [Theory]
    [InlineData(0.05, 0.8, 4.88)]
    [InlineData(0.05, 0.9, 6.41)]
    [InlineData(0.01, 0.9, 8.88)]
    public void HalfTheNoncentralityOfTheSpectralF_IsTheTabulated(double alpha, double power, double half) =>
        Assert.Equal(half, Math.Round(NoncentralF.Noncentrality(NoncentralF.Critical(alpha, 2, 240), 2, 240, power) / 2, 2));

    [Theory]                                                    // one-sample t, two-sided .05, power .80 (Cohen 1988, from memory): people needed for an effect
    [InlineData(0.8, 15)]
    [InlineData(0.5, 34)]
    [InlineData(0.3, 90)]
    [InlineData(0.2, 199)]
    public void TTest_NeedsTheTabulatedPeople(double effect, int people)
    {
        double Power(int n) => NoncentralT.Survival(NoncentralT.Critical(0.025, n - 1), n - 1, effect * Math.Sqrt(n));
        Assert.True(Power(people) >= 0.8, $"{people}: {Power(people)}");
        Assert.True(Power(people - 1) < 0.8, $"{people - 1}: {Power(people - 1)}");
    }

    [Fact]
    public void Survival_EqualsTheSumTermByTerm() => Gen.Double[0.5, 60].Select(Gen.Double[1, 400], Gen.Double[0, 300], Gen.Double[0.3, 1.7]).Sample((d1, d2, lambda, at) =>
    {
        double f = at * (d1 + lambda) / d1;
        RelativeAssert.Equal(PlainNoncentral.FSurvival(f, d1, d2, lambda), NoncentralF.Survival(f, d1, d2, lambda), TwinTolerance, $"F {f} {d1} {d2} {lambda}");
        double x = at * (d1 + lambda);
        RelativeAssert.Equal(PlainNoncentral.ChiSquareSurvival(x, d1, lambda), NoncentralChiSquare.Survival(x, d1, lambda), TwinTolerance, $"chi-square {x} {d1} {lambda}");
        double delta = Math.Sqrt(lambda), t = at * (delta + 1);
        double plain = PlainNoncentral.TSurvival(t, d2, delta);
        Assert.True(Math.Abs(plain - NoncentralT.Survival(t, d2, delta)) < TwinTolerance, $"t {t} {d2} {delta}: {plain}");     // the twin is a complement: absolute
    }, iter: 100, seed: "0000KeqOG7K1");

    [Fact]
    public void SurvivalAndNoncentrality_AreInverse() => Gen.Double[1, 500].Select(Gen.Double[0, 7], Gen.Double[0.05, 0.99], Gen.Double[1e-4, 0.04]).Sample((d1, logarithm, power, alpha) =>
    {
        const double Tolerance = 1e-12;                         // relative: the search ends within a few units in the last place
        double d2 = Math.Pow(10, logarithm);
        double f = NoncentralF.Critical(alpha, d1, d2), x = NoncentralChiSquare.Critical(alpha, d1), t = NoncentralT.Critical(alpha, d2);
        RelativeAssert.Equal(alpha, NoncentralF.Survival(f, d1, d2, 0), Tolerance);
        RelativeAssert.Equal(alpha, NoncentralChiSquare.Survival(x, d1, 0), Tolerance);
        RelativeAssert.Equal(alpha, NoncentralT.Survival(t, d2, 0), Tolerance);
        RelativeAssert.Equal(power, NoncentralF.Survival(f, d1, d2, NoncentralF.Noncentrality(f, d1, d2, power)), Tolerance);
        RelativeAssert.Equal(power, NoncentralChiSquare.Survival(x, d1, NoncentralChiSquare.Noncentrality(x, d1, power)), Tolerance);
        RelativeAssert.Equal(power, NoncentralT.Survival(t, d2, NoncentralT.Noncentrality(t, d2, power)), Tolerance);
    }, iter: 60, seed: "b0gZqZp8din3");

    [Fact]
    public void SurvivalGrowsWithNoncentrality() => Gen.Double[1, 200].Select(Gen.Double[1, 1e5], Gen.Double[0, 1000], Gen.Double[1.001, 2]).Sample((d1, d2, lambda, factor) =>
    {
        double f = (d1 + lambda) / d1;
        Assert.True(NoncentralF.Survival(f, d1, d2, lambda * factor + 0.01) > NoncentralF.Survival(f, d1, d2, lambda));
        Assert.True(NoncentralChiSquare.Survival(d1 + lambda, d1, lambda * factor + 0.01) > NoncentralChiSquare.Survival(d1 + lambda, d1, lambda));
    }, iter: 100, seed: "0000KeqOG7K1");

    [Fact]
    public void SquaredT_IsF() => Gen.Double[1, 1e4].Select(Gen.Double[0.01, 9]).Sample((nu, t) =>
        RelativeAssert.Equal(2 * NoncentralT.Survival(t, nu, 0), NoncentralF.Survival(t * t, 1, nu, 0), 1e-13, $"{nu} {t}"), iter: 100, seed: "0000KeqOG7K1");

    [Fact]
    public void ManyDegreesOfFreedom_TendToTheNormalAndTheChiSquareLaw()
    {
        const double Tolerance = 1e-7;                          // relative: corrections are of the order of 1/d2
        RelativeAssert.Equal(Normal.CDF(0, 1, 3.3 - 2.3), NoncentralT.Survival(2.3, 1e9, 3.3), Tolerance);
        RelativeAssert.Equal(NoncentralChiSquare.Survival(80, 63, 25), NoncentralF.Survival(80.0 / 63, 63, 1e9, 25), Tolerance);
        RelativeAssert.Equal(NoncentralChiSquare.Survival(80, 63, 25), NoncentralF.Survival(80.0 / 63, 63, 1e12, 25), 1e-10);
    }

    // d1 = 2: the tails are finite sums y^b (1 + b x + b (b + 1) x^2 / 2 + ...); summed in 50 decimal digits outside the project.
    [Theory]
    [InlineData(2.9957331714584465, 0.0, 0.049999999976845474261)]
    [InlineData(2.9957331714584465, 0.5, 0.089585318547929174667)]
    [InlineData(4.605172307015301, 0.0, 0.0099999999973268590294)]
    [InlineData(4.605172307015301, 0.5, 0.023374503581990259240)]
    [InlineData(4.605172307015301, 5.0, 0.27336304323174229308)]
    public void SurvivalAtTenMillion_IsTheExactSum(double f, double lambda, double exact) =>
        RelativeAssert.Equal(exact, NoncentralF.Survival(f, 2, 1e7, lambda), 1e-13, "some hundred units in the last place");

    [Fact]
    public void ChiSquareSurvival_EqualsTheLibrarysMarcumFunction() => Gen.Double[1, 500].Select(Gen.Double[0.01, 1e4], Gen.Double[0.9, 1.1]).Sample((k, lambda, at) =>
    {
        double x = at * (k + lambda), own = NoncentralChiSquare.Survival(x, k, lambda);
        Assert.True(Math.Abs(SpecialFunctions.MarcumQ(k / 2, lambda / 2, x / 2) - own) < MarcumTolerance, $"{x:R} {k:R} {lambda:R}: {own:R}, library {SpecialFunctions.MarcumQ(k / 2, lambda / 2, x / 2):R}");
    }, iter: 300, seed: "0000KeqOG7K1");

    // Ranges of planning: up to some 500 rows, noncentralities up to 1e4, up to 1e7 trials.
    private const string Script = """
        from scipy import stats
        for alpha in (0.05, 0.01, 1e-4):
            for d1 in (1, 2, 5, 63, 354, 500):
                x = stats.chi2.isf(alpha, d1)
                for lam in (0.0, 0.5, 5.0, 22.7, 100.0, 1000.0, 10000.0):
                    print('x', repr(float(x)), d1, 0, lam, repr(float(stats.ncx2.sf(x, d1, lam) if lam > 0 else stats.chi2.sf(x, d1))))
                    for d2 in (1, 5, 60, 250, 5000, 1e7):
                        f = stats.f.isf(alpha, d1, d2)
                        if f < 1e6:
                            print('f', repr(float(f)), d1, d2, lam, repr(float(stats.ncf.sf(f, d1, d2, lam) if lam > 0 else stats.f.sf(f, d1, d2))))
            for nu in (1, 5, 60, 250, 5000, 1e7):
                t = stats.t.isf(alpha, nu)
                for delta in (0.0, 0.3, 1.0, 3.0, 5.0, 12.0):
                    print('t', repr(float(t)), 1, nu, delta, repr(float(stats.nct.sf(t, nu, delta) if delta > 0 else stats.t.sf(t, nu))))
        """;

    [FactIfPresent("apt-get install python3-scipy", Python, Scipy)]
    public void Survival_EqualsAnIndependentImplementation()
    {
        int compared = 0;
        List<string> apart = [];
        foreach (string line in ProcessText.Of(Python, "-c", Script).Split('\n', StringSplitOptions.RemoveEmptyEntries))
        {
            string[] words = line.Split(' ');
            double[] v = [.. words.Skip(1).Select(w => double.Parse(w, CultureInfo.InvariantCulture))];
            double own = words[0] switch
            {
                "x" => NoncentralChiSquare.Survival(v[0], v[1], v[3]),
                "f" => NoncentralF.Survival(v[0], v[1], v[2], v[3]),
                _ => NoncentralT.Survival(v[0], v[2], v[3]),
            };
            double tolerance = v[2] == 1e7 ? IndependentAtTenMillion : IndependentTolerance;
            if (v[4] > SmallestCompared && Math.Abs(own - v[4]) > tolerance * v[4])
            {
                apart.Add($"{line}: own {own:R}, apart {(own - v[4]) / v[4]:E1}");
            }

            compared++;
        }

        Assert.True(compared > 800, $"{compared} values");
        Assert.True(apart.Count == 0, $"{apart.Count} of {compared}:\n{string.Join('\n', apart.Take(40))}");
    }
}
