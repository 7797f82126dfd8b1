using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.Distributions;
using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Verification.Rules;

/// <summary>Every closed form of a rule's probability against the test itself, carried out many times on drawn trials. Seeded.</summary>
public class SimulatedPowerTests
{
    private const int Draws = 4000;

    /// <summary>Standard errors of a share of <see cref="Draws"/>: one in 15,000 beyond four.</summary>
    private const double Errors = 4;

    private static void Agrees(double expected, int passed, string what)
    {
        double found = (double)passed / Draws, error = Math.Sqrt(Math.Max(expected * (1 - expected), 1e-4) / Draws);
        Assert.True(Math.Abs(found - expected) <= Errors * error, $"{what}: {found} of the draws pass, {expected} expected, standard error {error}");
    }

    private static int Passed(int seed, Func<Random, bool> once)
    {
        var random = new Random(seed);
        return Enumerable.Range(0, Draws).Count(_ => once(random));
    }

    private static double[] Normals(Random random, int n)
    {
        var values = new double[n];
        Normal.Samples(random, values, 0, 1);
        return values;
    }

    [Theory]
    [InlineData(0.0, 40)]
    [InlineData(0.2, 40)]
    [InlineData(0.2, 12)]
    public void KnownAndEstimatedNoise_OneReading(double power, int trials)
    {
        ITargetRule known = RuleBinding.Of(new DetectionChoice(0.05, 0.8, 1), RuleReading.OfOneReading());
        ITargetRule estimated = RuleBinding.Of(new DetectionChoice(0.05, 0.8, 1, Topography.Known, true), RuleReading.OfOneReading());
        double z = Normal.InvCDF(0, 1, 0.95), t = StudentT.InvCDF(0, 1, trials - 1, 0.95);
        Agrees(known.Probability(power, 0, trials)!.Value, Passed(1, r => Normals(r, trials).Average() + Math.Sqrt(power) > z / Math.Sqrt(trials)), "known");
        Agrees(estimated.Probability(power, 0, trials)!.Value, Passed(2, r =>
        {
            double[] x = [.. Normals(r, trials).Select(e => e + Math.Sqrt(power))];
            double mean = x.Average(), sd = Math.Sqrt(x.Sum(v => (v - mean) * (v - mean)) / (trials - 1));
            return mean * Math.Sqrt(trials) / sd > t;
        }), "estimated");
    }

    [Theory]
    [InlineData(0.0, 2, 30)]
    [InlineData(0.25, 2, 30)]
    [InlineData(0.4, 6, 30)]
    public void KnownAndEstimatedCovariance_ManyRows(double power, int rows, int trials)
    {
        var reading = new RuleReading(Modality.Meg, "matched-filter", rows);
        ITargetRule known = RuleBinding.Of(new DetectionChoice(0.05, 0.8, 1, Topography.Unknown), reading);
        ITargetRule estimated = RuleBinding.Of(new DetectionChoice(0.05, 0.8, 1, Topography.Unknown, true), reading);
        double x = ChiSquared.InvCDF(rows, 0.95), f = FisherSnedecor.InvCDF(rows, trials - rows, 0.95);
        int bySquare = 0, byT2 = 0;
        Passed(3, random =>
        {
            Matrix<double> data = Matrix<double>.Build.Dense(trials, rows, Normals(random, trials * rows));
            data.SetColumn(0, data.Column(0) + Math.Sqrt(power));       // the pattern lies along one whitened axis: T2 does not know which
            Vector<double> mean = data.ColumnSums() / trials;
            Matrix<double> apart = data - Matrix<double>.Build.Dense(trials, rows, (_, c) => mean[c]);
            Matrix<double> covariance = apart.TransposeThisAndMultiply(apart) / (trials - 1);
            bySquare += trials * mean.DotProduct(mean) > x ? 1 : 0;
            double t2 = trials * mean.DotProduct(covariance.Solve(mean));
            byT2 += t2 * (trials - rows) / (rows * (trials - 1.0)) > f ? 1 : 0;
            return true;
        });
        Agrees(known.Probability(power, 0, trials)!.Value, bySquare, "known");
        Agrees(estimated.Probability(power, 0, trials)!.Value, byT2, "estimated");
    }

    [Theory]
    [InlineData(0.0)]
    [InlineData(3.68)]
    [InlineData(4.54)]
    public void VarianceRatio_PassesAsOftenAsItSays(double snr)
    {
        // The rule's own model: the average's variance has 5 degrees of freedom, the noise's 250. Passed at SNR 3.68 and 4.54 with power .80 and .90 (recomputed from exact distributions).
        const double Critical = 3.0911794567304476;
        var rule = new VarianceRatioRule(new VarianceRatioChoice(Critical, null, 0.9, 1, 5, 250), RuleReading.OfOneReading() with { WindowPerPeak = 1 });
        double probability = rule.Probability(snr, 0, 1)!.Value;
        Agrees(probability, Passed(4, random =>
        {
            double[] e = Normals(random, 255);
            double above = e.Take(5).Select((v, k) => v + (k == 0 ? Math.Sqrt(5 * snr) : 0)).Sum(v => v * v) / 5;
            return above / (e.Skip(5).Sum(v => v * v) / 250) > Critical;
        }), "F ratio");
        double expected = snr == 0 ? 0.01 : snr == 3.68 ? 0.8 : 0.9;
        Assert.Equal(expected, probability, 0.002);             // SNR to three digits
    }

    [Theory]
    [InlineData(0.0, 20)]
    [InlineData(0.5, 20)]
    [InlineData(1.0, 12)]
    public void SteadyState_SpectralTestAndCoherence(double power, int trials)
    {
        // One complex bin a trial, real and imaginary part of variance 1: a sinusoid of power SNR P adds sqrt(P), so that the sum over N trials has noncentrality N P.
        var rule = new SteadyStateRule(0.05, 0.8, 1);
        double critical = 1 - Math.Pow(0.05, 1.0 / (trials - 1)), f = FisherSnedecor.InvCDF(2, 240, 0.95);
        int spectral = 0, coherent = 0;
        Passed(5, random =>
        {
            double[] e = Normals(random, 2 * trials + 240);
            double re = 0, im = 0, total = 0;
            for (int k = 0; k < trials; k++)
            {
                double x = e[2 * k] + Math.Sqrt(power), y = e[2 * k + 1];
                re += x;
                im += y;
                total += x * x + y * y;
            }

            coherent += (re * re + im * im) / (trials * total) > critical ? 1 : 0;
            double bin = (re * re + im * im) / trials / 2, neighbours = e.Skip(2 * trials).Sum(v => v * v) / 240;
            spectral += bin / neighbours > f ? 1 : 0;
            return true;
        });
        Agrees(rule.Probability(power, 0, trials)!.Value, spectral, "spectral");
        Agrees(Coherence.PowerOf(0.05, power, trials), coherent, "coherence");
    }

    [Fact]
    public void LognormalNoise_WeightedAveraging_GainsTheStatedFactor()
    {
        // Variance of the plain average over that of the one weighted by 1/s^2, over many trials: exp(4 var ln s).
        const double Spread = 0.4;
        var random = new Random(6);
        double plain = 0, inverse = 0;
        const int Trials = 400_000;
        for (int k = 0; k < Trials; k++)
        {
            double s = Math.Exp(Spread * Normal.Sample(random, 0, 1));
            plain += s * s;
            inverse += 1 / (s * s);
        }

        double gain = plain / Trials * (inverse / Trials);
        Assert.InRange(gain / Math.Exp(4 * Spread * Spread), 0.97, 1.03);
    }

    [Fact]
    public void MarcumsFunctionOfTheLibrary_IsTheChiSquareTail() =>
        Assert.InRange(MathNet.Numerics.SpecialFunctions.MarcumQ(2.5, 11.35, 7.5) - NoncentralChiSquare.Survival(15, 5, 22.7), -1e-10, 1e-10);
}
