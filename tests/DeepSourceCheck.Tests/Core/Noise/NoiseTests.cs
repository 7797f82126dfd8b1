using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Noise;

/// <summary>Noise tables, bands and what the stated total leaves.</summary>
public class NoiseTests
{
    /// <summary>The contract gives 2.0 uV to two digits.</summary>
    private const double TwoDigits = 0.03;

    private static readonly Response Click = new()
    {
        Name = "click",
        Key = "responses.click",
        Regions = [],
        Moment = 1e-9,
        Band = new Band(100, 1500),
        Direction = new DirectionChoice(DirectionName.Isotropic, null),
    };

    private static readonly NoiseChoice Default = new()
    {
        EegDensity = 20e-9,
        MegDensity = 5e-15,
        EegTotal = new EegTotalChoice(2e-6, "Cz-mastoids", new Band(100, 3000)),
    };

    private static readonly double[] CzMastoids = [1, -0.5, -0.5];

    [Fact]
    public void TotalTable_Gives2MicrovoltsRms_From100To3000Hz() =>
        // study-file.md: "gives 2.0 uV rms over 100-3000 Hz"; facts.md C: relaxed adult, Cz-mastoid, after rejection.
        RelativeAssert.Equal(2.0e-6, DefaultNoiseTables.EegTotal.Rms(100, 3000), TwoDigits);

    [Fact]
    public void Rms_OfAPowerLaw_EqualsItsIntegral()
    {
        // density c f^p: variance c^2 (b^(2p+1) - a^(2p+1)) / (2p+1), elementary calculus
        var table = new LogLogTable((1, 2), (100, 0.02));       // slope -1
        RelativeAssert.Equal(Math.Sqrt(4 * (1.0 / 3 - 1.0 / 50)), table.Rms(3, 50), 1e-13);
        var flat = new LogLogTable((1, 3), (10, 3));
        RelativeAssert.Equal(3 * Math.Sqrt(1400), flat.Rms(100, 1500), 1e-13, "goes on beyond the table");
    }

    [Fact]
    public void DensityAt_IsAPowerLawBetweenPoints()
    {
        LogLogTable table = DefaultNoiseTables.EegBrain;
        RelativeAssert.Equal(4e-6, table.DensityAt(3), 1e-14);
        RelativeAssert.Equal(0.15e-6, table.DensityAt(40), 1e-14);
        RelativeAssert.Equal(Math.Sqrt(0.8e-6 * 0.15e-6), table.DensityAt(Math.Sqrt(20 * 40.0)), 1e-13, "geometric mean half-way in log frequency");
        RelativeAssert.Equal(0.01e-6 / 3, table.DensityAt(400), 1e-12, "falls on at the last slope: 0.03 to 0.01 in one octave");
    }

    [Fact]
    public void SensorNoise_OverABand_IsDensityTimesRootBandwidth()
    {
        // facts.md end-to-end row 3: 3 fT/rtHz x sqrt(1400 Hz) = 112 fT
        var builder = new NoiseBuilder(new NoiseChoice { MegDensity = 3e-15 }, 0, [CoilKind.Magnetometer, CoilKind.Magnetometer], null, null);
        NoiseCovariance noise = builder.Build(null, null, [Click]).InBand(100, 1500);
        RelativeAssert.Equal(112.25e-15, Math.Sqrt(noise.Meg[0]), 1e-4);
        Assert.Equal(0.0, noise.Meg[1], 0.0);
        Assert.Contains(builder.Warnings, w => w.Contains("sensors alone", StringComparison.Ordinal));
    }

    [Fact]
    public void PlanarGradiometers_TakeTheirOwnDensity()
    {
        var builder = new NoiseBuilder(new NoiseChoice { MegDensity = 3e-15, MegPlanarDensity = 3e-13 }, 0, [CoilKind.Magnetometer, CoilKind.PlanarGradiometer], null, null);
        NoiseCovariance noise = builder.Build(null, null, [Click]).InBand(100, 200);
        RelativeAssert.Equal(3e-14, Math.Sqrt(noise.Meg[0]), 1e-12);
        RelativeAssert.Equal(3e-12, Math.Sqrt(noise.Meg[3]), 1e-12);
    }

    [Fact]
    public void StatedTotal_IsMetInItsOwnDerivationAndBand()
    {
        var builder = new NoiseBuilder(Default, 3, [], null, CzMastoids);
        NoiseCovariance noise = builder.Build(null, null, [Click]).InBand(100, 3000);
        double variance = 0;
        for (int i = 0; i < 3; i++)
        {
            for (int j = 0; j < 3; j++)
            {
                variance += CzMastoids[i] * CzMastoids[j] * noise.Eeg[3 * i + j];
            }
        }

        RelativeAssert.Equal(2e-6, Math.Sqrt(variance), 1e-12);
    }

    [Fact]
    public void Contributions_OfAReading_AddUpToItsVariance()
    {
        NoiseModel model = new NoiseBuilder(Default, 3, [], null, CzMastoids).Build(null, null, [Click]);
        IReadOnlyList<(string Cause, double Variance)> causes = model.Contributions(CzMastoids, -1, 100, 3000);
        Assert.Equal(["instrument", "muscle and electrode"], causes.Select(c => c.Cause));
        RelativeAssert.Equal(4e-12, causes.Sum(c => c.Variance), 1e-12);
        RelativeAssert.Equal(1.5 * 20e-9 * 20e-9 * 2900, causes[0].Variance, 1e-12, "Cz against the mean of two: variances 1 + 1/4 + 1/4");
    }

    [Fact]
    public void TotalBelowInstrument_IsRefused_WithBothFigures()
    {
        NoiseChoice quiet = Default with { EegTotal = new EegTotalChoice(0.5e-6, "Cz-mastoids", new Band(100, 3000)) };
        InputException error = Assert.Throws<InputException>(() => new NoiseBuilder(quiet, 3, [], null, CzMastoids).Build(null, null, [Click]));
        Assert.Equal("noise.eeg_total.rms_uV", error.Problems[0].Key);
        Assert.Contains("instrument 0.9", error.Problems[0].Message, StringComparison.Ordinal);
        Assert.Contains("nothing is left", error.Problems[0].Message, StringComparison.Ordinal);
    }

    [Fact]
    public void InstrumentAlone_IsSaidInAWarning()
    {
        var builder = new NoiseBuilder(new NoiseChoice { EegDensity = 20e-9 }, 3, [], null, null);
        builder.Build(null, null, [Click]);
        Assert.Contains(builder.Warnings, w => w.Contains("instrument alone", StringComparison.Ordinal));
    }

    [Fact]
    public void BandOutsideTheTables_IsSaidInAWarning()
    {
        var builder = new NoiseBuilder(Default, 3, [], null, CzMastoids);
        builder.Build(null, null, [Click with { Band = new Band(0.1, 4000) }]);
        Assert.Contains(builder.Warnings, w => w.Contains("0.1 to 4000 Hz leaves the table of the total EEG (1 to 3000 Hz)", StringComparison.Ordinal));
    }

    [Fact]
    public void FlatFigures_ReplaceEverythingElse()
    {
        var builder = new NoiseBuilder(new NoiseChoice { EegRms = 2e-6, MegRms = 180e-15 }, 2, [CoilKind.Magnetometer], null, null);
        NoiseCovariance noise = builder.Build(null, null, [Click]).InBand(1, 2);
        Assert.Equal([4e-12, 0, 0, 4e-12], noise.Eeg);
        RelativeAssert.Equal(180e-15 * 180e-15, noise.Meg[0], 1e-15);
        Assert.Empty(builder.Warnings);
    }

    [Fact]
    public void Units_ConvertBothWays()
    {
        RelativeAssert.Equal(3e-13, Si.FromFemtoteslaPerCm(3), 1e-15, "3 fT/cm is 3e-13 T/m");
        RelativeAssert.Equal(3.0, Si.ToFemtoteslaPerCm(3e-13), 1e-15);
        RelativeAssert.Equal(2e-9, Si.FromNanoAmpereMetres(2), 1e-15);
    }
}
