using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Noise;

/// <summary>Amplifiers and sensors whose noise rises below a corner.</summary>
public class InstrumentCornerTests
{
    // The quadrature is exact for sums of powers of f; what is left is rounding of some hundred terms.
    private const double Rounding = 1e-12;

    private static readonly Response Slow = new()
    {
        Name = "slow",
        Key = "responses.slow",
        Regions = [],
        Moment = 1e-9,
        Band = new Band(1, 40),
        Direction = new DirectionChoice(DirectionName.Isotropic, null),
    };

    private static NoiseModel Model(NoiseChoice choice, out IReadOnlyList<string> warnings, Response? response = null)
    {
        var builder = new NoiseBuilder(choice, 2, [CoilKind.Magnetometer, CoilKind.PlanarGradiometer], null, null);
        NoiseModel model = builder.Build(null, null, [response ?? Slow]);
        warnings = builder.Warnings;
        return model;
    }

    [Theory]
    [InlineData(1, 40, 1)]
    [InlineData(0.1, 30, 10)]
    [InlineData(100, 1500, 50)]
    public void Variance_OverABand_IsTheHandCalculation(double low, double high, double corner)
    {
        // integral of d^2 (1 + fc/f) over [a, b] = d^2 (b - a + fc ln(b/a)), elementary calculus.
        NoiseModel model = Model(new NoiseChoice { EegDensity = 20e-9, MegDensity = 5e-15, MegPlanarDensity = 3e-13, EegCorner = corner, MegCorner = 2 * corner }, out _);
        NoiseCovariance noise = model.InBand(low, high);
        RelativeAssert.Equal(400e-18 * (high - low + corner * Math.Log(high / low)), noise.Eeg[0], Rounding, "EEG");
        RelativeAssert.Equal(25e-30 * (high - low + 2 * corner * Math.Log(high / low)), noise.Meg[0], Rounding, "magnetometer");
        RelativeAssert.Equal(9e-26 * (high - low + 2 * corner * Math.Log(high / low)), noise.Meg[3], Rounding, "planar gradiometer");
        Assert.Equal(0.0, noise.Eeg[1], 0.0);
    }

    [Fact]
    public void Variance_From1To40Hz_WithACornerOf10Hz_IsKnown()
    {
        // 20 nV/sqrt(Hz): sqrt(39 + 10 ln 40) = sqrt(75.8888) = 8.71142; times 20 nV = 174.228 nV (by hand).
        NoiseModel model = Model(new NoiseChoice { EegDensity = 20e-9, MegDensity = 5e-15, MegPlanarDensity = 3e-13, EegCorner = 10 }, out _);
        RelativeAssert.Equal(174.228e-9, Math.Sqrt(model.InBand(1, 40).Eeg[0]), 1e-5);
    }

    [Fact]
    public void Density_AtTheCorner_IsRootTwoOfTheWhiteOne()
    {
        NoiseModel model = Model(new NoiseChoice { EegDensity = 20e-9, MegDensity = 5e-15, MegPlanarDensity = 3e-13, EegCorner = 7 }, out _);
        RelativeAssert.Equal(20e-9 * Math.Sqrt(2), Math.Sqrt(model.Spectra([1, 0], -1, [7.0])[0].Power[0]), Rounding);
        RelativeAssert.Equal(20e-9, Math.Sqrt(model.Spectra([1, 0], -1, [1e9])[0].Power[0]), 1e-8);
    }

    [Fact]
    public void StatedTotal_LeavesLessForMuscle_TheHigherTheCorner()
    {
        double[] cz = [1, -0.5, -0.5];
        double Muscle(double corner)
        {
            var choice = new NoiseChoice { EegDensity = 100e-9, EegCorner = corner, EegTotal = new EegTotalChoice(10e-6, "Cz-mastoids", new Band(1, 40)), Brain = false };
            NoiseModel model = new NoiseBuilder(choice, 3, [], null, cz).Build(null, null, [Slow]);
            IReadOnlyList<(string Cause, double Variance)> causes = model.Contributions(cz, -1, 1, 40);
            RelativeAssert.Equal(100e-12, causes.Sum(c => c.Variance), 1e-10, "the total is what is stated");
            return causes.Single(c => c.Cause == "muscle and electrode").Variance;
        }

        RelativeAssert.Equal(1.5 * 1e-14 * 10 * Math.Log(40), Muscle(0) - Muscle(10), 1e-6);
    }

    [Fact]
    public void BandFromZero_IsSaidInAWarning()
    {
        NoiseChoice choice = new() { EegDensity = 20e-9, MegDensity = 5e-15, MegPlanarDensity = 3e-13, MegCorner = 1 };
        Model(choice, out IReadOnlyList<string> warnings, Slow with { Band = new Band(0, 40) });
        Assert.Contains(warnings, w => w.Contains("no finite power down to 0 Hz", StringComparison.Ordinal) && w.Contains("0.00004 Hz", StringComparison.Ordinal));
        Model(choice with { MegCorner = 0 }, out IReadOnlyList<string> white, Slow with { Band = new Band(0, 40) });
        Assert.DoesNotContain(white, w => w.Contains("0 Hz and is counted", StringComparison.Ordinal));
    }
}
