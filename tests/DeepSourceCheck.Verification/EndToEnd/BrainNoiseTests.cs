using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Verification.EndToEnd;

/// <summary>Brain noise of whole studies: its scale, where EEG and MEG share it, and what it must never do.</summary>
public class BrainNoiseTests
{
    /// <summary>Sums of some 1,500 squares: rounding.</summary>
    private const double Rounding = 1e-10;

    // The MEG array is the one to which the table refers: 200 magnetometers 20 mm from the scalp.
    private const string Both =
        WholeChain.Adult + """
        sensors:
          eeg: {layout: ten-ten-64, reference: average}
          eeg_derivations: [Cz-mastoids]
          meg: {coil: magnetometer, sites: 200, gap_mm: 20}
        noise: {brain: default, eeg_sensor_nV_per_rtHz: 20, meg_sensor_fT_per_rtHz: 3}
        responses:
          - {name: slow, regions: [inferior-colliculus-left], moment_nAm: 10, band_Hz: [1, 40], direction: tangential}
          - {name: fast, regions: [inferior-colliculus-left], moment_nAm: 10, band_Hz: [100, 1500], direction: tangential}
        """;

    private static readonly Lazy<WholeChain> Study = new(() => WholeChain.Run(Both));

    private static NoiseModel Model(WholeChain study) => study.Prepared.Setup.Noise!;

    private static INoiseTerm Brain(WholeChain study) => Model(study).Terms.Single(t => t.Name == "brain");

    private static double[] CzMastoids(WholeChain study) => study.Prepared.Setup.Derivations!.Weights(0);

    [Fact]
    public void Pattern_HasUnitVarianceAtCzMastoids_AndUnitMeanSquareOverTheTablesMagnetometers()
    {
        INoiseTerm brain = Brain(Study.Value);
        RelativeAssert.Equal(1, NoiseModel.UnitVariance(brain.Eeg!, CzMastoids(Study.Value)), Rounding);
        RelativeAssert.Equal(1, brain.Meg!.Factor!.Sum(x => x * x) / 200, Rounding);
    }

    [Fact]
    public void BandPower_AtTheTablesSensors_IsTheTablesOwn()
    {
        // The tables as study-file.md gives them, integrated with a fine trapezoidal rule in log frequency, independent of the program's quadrature.
        double eeg = Trapezoid([1, 10, 20, 40], [4, 4, 0.8, 0.15]), meg = Trapezoid([1, 10, 20, 40], [40, 30, 25, 10]);
        double foundEeg = Model(Study.Value).Contributions(CzMastoids(Study.Value), -1, 1, 40).Single(c => c.Cause == "brain").Variance;
        RelativeAssert.Equal(eeg * 1e-12, foundEeg, 1e-6);
        double foundMeg = Enumerable.Range(0, 200).Average(k => Model(Study.Value).Contributions(null, k, 1, 40).Single(c => c.Cause == "brain").Variance);
        RelativeAssert.Equal(meg * 1e-30, foundMeg, 1e-6);

        static double Trapezoid(double[] f, double[] d)
        {
            const int steps = 20_000;
            double sum = 0;
            for (int k = 0; k + 1 < f.Length; k++)
            {
                double slope = Math.Log(d[k + 1] / d[k]) / Math.Log(f[k + 1] / f[k]), width = Math.Log(f[k + 1] / f[k]) / steps;
                for (int i = 0; i <= steps; i++)
                {
                    double x = f[k] * Math.Exp(i * width), density = d[k] * Math.Pow(x / f[k], slope);
                    sum += density * density * x * width * (i is 0 or steps ? 0.5 : 1);
                }
            }

            return sum;
        }
    }

    [Fact]
    public void CrossTerms_StandOnlyWhereTheBrainDominatesBoth()
    {
        INoiseTerm brain = Brain(Study.Value);
        Assert.All([2.0, 10, 20, 40], f => Assert.True(brain.At(f).Cross > 0, $"{f} Hz"));
        Assert.All([200.0, 500, 1500], f => Assert.Equal(0, brain.At(f).Cross, 0.0));
        Assert.NotNull(Model(Study.Value).InBand(1, 40).Cross);
        Assert.Null(Model(Study.Value).InBand(200, 1500).Cross);
    }

    [Fact]
    public void CrossTerms_EndWhereMuscleTakesOver()
    {
        // With a stated total the brain's share of the EEG ends near 20 Hz (tables: 0.8 of 0.85 uV/sqrt(Hz) there, 0.15 of 0.25 at 40 Hz, where it has 36 % of the power).
        WholeChain study = WholeChain.Run(WholeChain.Changed(Both, ("brain: default", "eeg_total: {rms_uV: 16, derivation: Cz-mastoids, band_Hz: [1, 40]}")));
        Assert.True(Brain(study).At(15).Cross > 0);
        Assert.Equal(0, Brain(study).At(60).Cross, 0.0);
    }

    [Fact]
    public void StatedTotal_IsMetInItsDerivation_WithBrainAndInstrumentInIt()
    {
        WholeChain study = WholeChain.Run(WholeChain.Changed(Both, ("brain: default", "eeg_total: {rms_uV: 16, derivation: Cz-mastoids, band_Hz: [1, 40]}")));
        IReadOnlyList<(string Cause, double Variance)> causes = Model(study).Contributions(CzMastoids(study), -1, 1, 40);
        Assert.Equal(["instrument", "brain", "muscle and electrode"], causes.Select(c => c.Cause));
        Assert.All(causes, c => Assert.True(c.Variance > 0, c.Cause));
        RelativeAssert.Equal(16e-6 * 16e-6, causes.Sum(c => c.Variance), 1e-9);
    }

    [Fact]
    public void JointFigures_AreAtLeastEach_WithCrossTermsPresent()
    {
        const double rounding = 1e-9;
        foreach (DirectionName direction in new[] { DirectionName.Tangential, DirectionName.StrongestTangential, DirectionName.Isotropic, DirectionName.Best })
        {
            double filter = Study.Value.Db(Modality.Both, direction, Names.MatchedFilter), pair = Study.Value.Db(Modality.Both, direction, "Cz-mastoids");
            Assert.True(filter >= Study.Value.Db(Modality.Eeg, direction, Names.MatchedFilter) - rounding, $"{direction}");
            Assert.True(filter >= Study.Value.Db(Modality.Meg, direction, Names.MatchedFilter) - rounding, $"{direction}");
            Assert.True(pair >= Study.Value.Db(Modality.Eeg, direction, "Cz-mastoids") - rounding, $"{direction}");
            Assert.True(pair >= Study.Value.Db(Modality.Meg, direction, Names.BestChannel) - rounding, $"{direction}");
            Assert.True(filter >= pair - rounding, $"{direction}: no pair of readings exceeds the filter");
        }
    }

    [Theory]
    [InlineData("coil: magnetometer, sites: 200, gap_mm: 20")]
    [InlineData("coil: axial-gradiometer, sites: 100")]
    [InlineData("coil: on-scalp-triaxial, sites: 60")]
    public void BrainNoise_OfEegAndMeg_IsUncorrelatedInASphere(string coils)
    {
        // The field outside is the gradient of a potential U. With sources of every orientation, even over a sphere, the covariance of the scalp's potential at r1 and of U at r2 is a
        // pseudoscalar made of two vectors, and there is none: EEG and MEG brain noise are uncorrelated, whatever the coils. Derived here. 500 places leave some thousandths.
        const double places = 0.01, decibels = 0.05;
        WholeChain study = WholeChain.Run(WholeChain.Changed(Both, ("coil: magnetometer, sites: 200, gap_mm: 20", coils)));
        NoiseCovariance noise = Model(study).InBand(1, 40);
        int n = noise.EegRows, m = noise.MegRows;
        double worst = Enumerable.Range(0, n).Max(i => Enumerable.Range(0, m).Max(k => Math.Abs(noise.Cross![i * m + k]) / Math.Sqrt(noise.Eeg[i * n + i] * noise.Meg[k * m + k])));
        Assert.InRange(worst, 0, places);
        double sum = 10 * Math.Log10(Math.Pow(10, study.Db(Modality.Eeg, DirectionName.StrongestTangential, "Cz-mastoids") / 10) + Math.Pow(10, study.Db(Modality.Meg, DirectionName.StrongestTangential, Names.BestChannel) / 10));
        Assert.InRange(study.Db(Modality.Both, DirectionName.StrongestTangential, "Cz-mastoids"), sum - decibels, sum + decibels);
    }

    [Fact]
    public void JointNoise_IsAPositiveSemidefiniteCovariance()
    {
        NoiseCovariance noise = Model(Study.Value).InBand(1, 40);
        int n = noise.EegRows, m = noise.MegRows;
        double[] joint = new double[(n + m) * (n + m)];
        for (int i = 0; i < n + m; i++)
        {
            for (int k = 0; k < n + m; k++)
            {
                joint[i * (n + m) + k] = i < n && k < n ? noise.Eeg[i * n + k] : i >= n && k >= n ? noise.Meg[(i - n) * m + k - n] : noise.Cross![i < n ? i * m + k - n : k * m + i - n];
            }
        }

        double[] scaled = [.. joint.Select((v, at) => v / Math.Sqrt(joint[at / (n + m) * (n + m + 1)] * joint[at % (n + m) * (n + m + 1)]))];
        var eigenvalues = MathNet.Numerics.LinearAlgebra.Matrix<double>.Build.DenseOfRowMajor(n + m, n + m, scaled).Evd(MathNet.Numerics.LinearAlgebra.Symmetricity.Symmetric).EigenValues;
        Assert.True(eigenvalues.Min(e => e.Real) > -1e-12, "of correlations, rounding");
    }

    [Fact]
    public void BrainNoise_OfMeg_IsNotInflated_At100To1500Hz()
    {
        // Scalp EEG is mostly muscle and electrode noise there; turned into MEG brain noise it would raise MEG trials twentyfold.
        for (int k = 0; k < 200; k += 20)
        {
            IReadOnlyList<(string Cause, double Variance)> causes = Model(Study.Value).Contributions(null, k, 100, 1500);
            Assert.True(causes.Single(c => c.Cause == "brain").Variance < 0.15 * causes.Single(c => c.Cause == "instrument").Variance, $"channel {k}");
        }

        WholeChain quiet = WholeChain.Run(WholeChain.Changed(Both, ("brain: default", "eeg_total: {rms_uV: 2, derivation: Cz-mastoids, band_Hz: [100, 3000]}"), ("band_Hz: [1, 40]", "band_Hz: [50, 90]")));
        WholeChain tense = WholeChain.Run(WholeChain.Changed(Both, ("brain: default", "eeg_total: {rms_uV: 4, derivation: Cz-mastoids, band_Hz: [100, 3000]}"), ("band_Hz: [1, 40]", "band_Hz: [50, 90]")));
        Assert.Equal(Model(quiet).InBand(100, 1500).Meg, Model(tense).InBand(100, 1500).Meg);
        Assert.Null(Model(quiet).InBand(100, 1500).Cross);
    }

    [Fact]
    public void OnScalpSensors_ReadMoreBrainNoise_AsTheySeeMoreBrain()
    {
        // 2 to 3 times the noise of cryogenic sensors (derived from the closed form's peak ratios, apart from this program).
        WholeChain study = WholeChain.Run(WholeChain.Changed(Both, ("coil: magnetometer, sites: 200, gap_mm: 20", "coil: on-scalp, sites: 200")));
        Assert.InRange(Math.Sqrt(Brain(study).Meg!.Factor!.Sum(x => x * x) / 200), 1.3, 3.5);
    }

    [Fact]
    public void DefaultTables_ContradictThemselvesBelow20Hz_AndTheProgramSaysSo()
    {
        // The default total has 3 uV/sqrt(Hz) at 4 Hz, the default brain 4: a total scaled at 100-3000 Hz leaves nothing for muscle over 1-40 Hz, and the study is refused with the figures.
        InputException refused = Assert.Throws<InputException>(() => WholeChain.Default(("band_Hz: [100, 1500]", "band_Hz: [1, 40]")));
        Assert.Contains("nothing is left for muscle and electrodes", refused.Message, StringComparison.Ordinal);
        Assert.Contains("noise.brain: {scale: 0.9", refused.Message, StringComparison.Ordinal);
        Assert.Contains("noise.brain: none", refused.Message, StringComparison.Ordinal);
    }
}
