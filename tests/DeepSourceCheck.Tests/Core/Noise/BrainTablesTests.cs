using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Noise;

/// <summary>The brain's share from tables of the study's own, louder or quieter; where it stands in both modalities; what a total must hold.</summary>
public class BrainTablesTests
{
    private const double Rounding = 1e-10;

    private static readonly Response Slow = new()
    {
        Name = "slow",
        Key = "responses.slow",
        Regions = [],
        Moment = 1e-9,
        Band = new Band(1, 40),
        Direction = new DirectionChoice(DirectionName.Isotropic, null),
    };

    private static readonly NoiseChoice Total = new() { EegDensity = 20e-9, MegDensity = 3e-15, MegPlanarDensity = 3e-13, EegTotal = new(10e-6, "Cz-mastoids", new Band(1, 40)) };

    private static readonly double[] CzMastoids = [1, -0.5, -0.5];

    private static readonly Lazy<(MegChannel[] Channels, BackgroundField Field)> Magnetometers = new(() => Field("magnetometer")), Planar = new(() => Field("planar-gradiometer"));

    // Few places and channels: scale and tables are exact whatever their number.
    private static (MegChannel[] Channels, BackgroundField Field) Field(string coil)
    {
        LayeredSphere sphere = new("adult", new(0, -0.018, 0.005),
            [new("brain", 0.078, 0.33, 0.33), new("csf", 0.080, 1.79, 1.79), new("skull", 0.086, 0.0132, 0.0132), new("scalp", 0.092, 0.43, 0.43)]);
        Electrode[] electrodes = [.. new[] { "Cz", "M1", "M2" }.Select(n => new Electrode(n, sphere.Centre + sphere.OuterRadius * ElectrodeLayout.Direction(n), true, 0))];
        MegChannel[] own = CoilArray.Generate(new(coil, 40, 0.015, 0.02, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack), sphere.Centre, sphere.OuterRadius);
        MegChannel[] tables = CoilArray.Generate(new("magnetometer", 40, 0, 0.02, CoilArray.DefaultEdgeFront, CoilArray.DefaultEdgeBack), sphere.Centre, sphere.OuterRadius);
        return (own, BackgroundField.Compute(sphere.BackgroundPlaces(60), new SphereLeadfield(sphere, electrodes, own), new SphereLeadfield(sphere, electrodes, tables), CzMastoids));
    }

    private static NoiseBuilder Builder(NoiseChoice choice, BrainTables? tables = null, (MegChannel[] Channels, BackgroundField Field)? at = null)
    {
        (MegChannel[] channels, BackgroundField field) = at ?? Magnetometers.Value;
        return new(choice, 3, [.. channels.Select(c => c.Kind)], field, CzMastoids, tables, channels);
    }

    private static double Brain(NoiseModel model, bool eeg, double low, double high) => eeg
        ? model.Contributions(CzMastoids, -1, low, high).Single(c => c.Cause == "brain").Variance
        : Enumerable.Range(0, model.MegRows).Average(k => model.Contributions(null, k, low, high).Single(c => c.Cause == "brain").Variance);

    [Fact]
    public void OwnTables_SetThePowerAtTheTablesSensors()
    {
        // Flat tables: variance = density^2 times the bandwidth, by hand.
        var tables = new BrainTables(new LogLogTable((1, 1e-6), (40, 1e-6)), new LogLogTable((1, 20e-15), (40, 20e-15)), "e.csv", "m.csv");
        NoiseModel model = Builder(Total, tables).Build(null, null, [Slow]);
        RelativeAssert.Equal(1e-12 * 19, Brain(model, eeg: true, 1, 20), Rounding, "EEG");
        RelativeAssert.Equal(4e-28 * 19, Brain(model, eeg: false, 1, 20), Rounding, "MEG");
    }

    [Fact]
    public void OneOwnTable_LeavesTheDefaultOneInTheOtherModality()
    {
        BrainTables tables = BrainTables.Default with { Eeg = new LogLogTable((1, 1e-6), (40, 1e-6)), EegName = "e.csv" };
        NoiseModel own = Builder(Total, tables).Build(null, null, [Slow]), scaled = Builder(Total with { BrainScale = 0.5 }).Build(null, null, [Slow]);
        RelativeAssert.Equal(1e-12 * 39, Brain(own, eeg: true, 1, 40), Rounding);
        RelativeAssert.Equal(4 * Brain(scaled, eeg: false, 1, 40), Brain(own, eeg: false, 1, 40), Rounding, "half the amplitude is a quarter of the variance");
    }

    [Fact]
    public void Total_ThatTheBrainExceeds_IsRefused_WithWhatWouldFit_AndThatFits()
    {
        InputException error = Assert.Throws<InputException>(() => Builder(Total).Build(null, null, [Slow]));
        Assert.Equal("noise.eeg_total.rms_uV", error.Problems[0].Key);
        // Both remedies as printed: the smallest total in the stated band, and the largest factor.
        double rms = Number(error.Message, "above ", " uV rms over 1 to 40 Hz"), scale = Number(error.Message, "{scale: ", "}");
        Assert.Throws<InputException>(() => Builder(Total with { EegTotal = Total.EegTotal! with { Rms = 1e-6 * (rms - 0.01) } }).Build(null, null, [Slow]));
        Builder(Total with { EegTotal = Total.EegTotal! with { Rms = 1e-6 * (rms + 0.01) } }).Build(null, null, [Slow]);
        Assert.Throws<InputException>(() => Builder(Total with { BrainScale = scale + 0.011 }).Build(null, null, [Slow]));
        NoiseModel model = Builder(Total with { BrainScale = scale }).Build(null, null, [Slow]);
        RelativeAssert.Equal(1e-10, model.Contributions(CzMastoids, -1, 1, 40).Sum(c => c.Variance), Rounding, "10 uV rms");
        Assert.All(model.Contributions(CzMastoids, -1, 1, 40), c => Assert.True(c.Variance >= 0, c.Cause));

        static double Number(string text, string before, string after)
        {
            int from = text.IndexOf(before, StringComparison.Ordinal) + before.Length;
            return double.Parse(text[from..text.IndexOf(after, from, StringComparison.Ordinal)], System.Globalization.CultureInfo.InvariantCulture);
        }
    }

    [Fact]
    public void Total_ThatTheInstrumentAloneExceeds_IsNotCuredByTheBrain()
    {
        NoiseChoice choice = Total with { EegDensity = 1e-5 };
        string message = Assert.Throws<InputException>(() => Builder(choice).Build(null, null, [Slow])).Message;
        Assert.DoesNotContain("noise.brain", message, StringComparison.Ordinal);
        Assert.Contains("quieter amplifier", message, StringComparison.Ordinal);
    }

    [Fact]
    public void BandOutsideAnOwnTable_IsSaid_WithItsName()
    {
        var tables = new BrainTables(new LogLogTable((2, 1e-6), (30, 1e-7)), BrainTables.Default.Meg, "brain-eeg.csv", BrainTables.Default.MegName);
        NoiseBuilder builder = Builder(Total, tables);
        builder.Build(null, null, [Slow]);
        Assert.Contains(builder.Warnings, w => w.Contains("slow: the band 1 to 40 Hz leaves brain-eeg.csv (2 to 30 Hz)", StringComparison.Ordinal));
        Assert.DoesNotContain(builder.Warnings, w => w.Contains("default table", StringComparison.Ordinal));
    }

    [Fact]
    public void DefaultBrainTables_FallOn_WithoutAWarningAsFarAsTheTotalGoes()
    {
        NoiseBuilder builder = Builder(Total with { EegTotal = new(2e-6, "Cz-mastoids", new Band(100, 3000)) });
        builder.Build(null, null, [Slow with { Band = new Band(100, 3000) }]);
        Assert.DoesNotContain(builder.Warnings, w => w.Contains("leaves", StringComparison.Ordinal));
        builder = Builder(new NoiseChoice { MegDensity = 3e-15, EegRms = 1e-6, Brain = true });
        builder.Build(null, null, [Slow with { Band = new Band(0.5, 4000) }]);
        Assert.Contains(builder.Warnings, w => w.Contains("leaves the default table of the brain in MEG (1 to 3000 Hz)", StringComparison.Ordinal));
    }

    [Fact]
    public void CrossTerms_NeedTheBrainAboveTheArraysOwnNoise()
    {
        NoiseChoice quiet = Total with { BrainScale = 0.7 };
        Assert.True(Cross(quiet, Magnetometers.Value, 10) > 0);
        Assert.Equal(0, Cross(quiet with { MegDensity = 200e-15 }, Magnetometers.Value, 10), 0.0);
        Assert.Equal(0, Cross(quiet with { Environment = new(200e-15, 0, Removed: false) }, Magnetometers.Value, 10), 0.0);
        Assert.True(Cross(quiet with { Environment = new(200e-15, 0, Removed: true) }, Magnetometers.Value, 10) > 0, "what is taken out dominates nothing");
        // Planar gradiometers have a unit and a density of their own: 1 fT/cm lets the brain through at 10 Hz, 1000 fT/cm does not.
        Assert.True(Cross(quiet with { MegPlanarDensity = 1e-13 }, Planar.Value, 10) > 0);
        Assert.Equal(0, Cross(quiet with { MegPlanarDensity = 1e-10 }, Planar.Value, 10), 0.0);
        Assert.Equal(0, Cross(quiet, Magnetometers.Value, 100), 0.0);        // EEG is muscle there

        static double Cross(NoiseChoice choice, (MegChannel[] Channels, BackgroundField Field) at, double f) =>
            Builder(choice, null, at).Build(null, null, [Slow]).Terms.Single(t => t.Name == "brain").At(f).Cross;
    }

    [Fact]
    public void Spectra_IntegrateToTheContributions_AndLeaveOutNothing()
    {
        NoiseModel model = Builder(Total with { BrainScale = 0.7, EegCorner = 2, MegCorner = 3, Environment = new(5e-15, 4, Removed: false) }).Build(null, null, [Slow]);
        foreach (double[]? weights in new[] { CzMastoids, null })
        {
            IReadOnlyList<(string Cause, double Variance)> band = model.Contributions(weights, 7, 5, 9);
            double[] frequencies = [.. Enumerable.Range(0, 4001).Select(k => 5 + 4 * k / 4000.0)];
            IReadOnlyList<(string Cause, double[] Power)> spectra = model.Spectra(weights, 7, frequencies);
            Assert.Equal(band.Select(c => c.Cause), spectra.Select(c => c.Cause));
            for (int c = 0; c < band.Count; c++)
            {
                double trapezoid = Enumerable.Range(0, 4000).Sum(k => 0.0005 * (spectra[c].Power[k] + spectra[c].Power[k + 1]));
                RelativeAssert.Equal(band[c].Variance, trapezoid, 1e-6, $"{band[c].Cause}: a trapezoidal rule");
            }
        }

        Assert.Equal(["instrument", "brain", "environment"], model.Spectra(null, 0, [10.0]).Select(c => c.Cause));
    }

    [Fact]
    public void RemovedRoom_IsNoCause_AndTakesTheBrainsShareOfItsTermsAlong()
    {
        NoiseModel left = Builder(Total with { BrainScale = 0.7, Environment = new(5e-15, 0, Removed: false) }).Build(null, null, [Slow]);
        NoiseModel removed = Builder(Total with { BrainScale = 0.7, Environment = new(5e-15, 0, Removed: true) }).Build(null, null, [Slow]);
        Assert.DoesNotContain(removed.Terms, t => t.Name == "environment");
        NoiseCovariance noise = removed.InBand(1, 40), all = left.InBand(1, 40);
        double[] projected = removed.MegOperator!.ApplyToCovariance(all.Meg);
        RelativeAssert.Close(projected, noise.Meg, Rounding, "C projected with its environment is C projected without");
        for (int k = 0; k < 40; k += 13)
        {
            RelativeAssert.Equal(noise.Meg[k * 41], removed.Contributions(null, k, 1, 40).Sum(c => c.Variance), Rounding, "the chain's causes add up");
        }

        // Cross terms: C_em P'.
        double[] byHand = new double[3 * 40];
        for (int k = 0; k < 40; k++)
        {
            double[] p = removed.MegOperator!.Weights(k);
            for (int i = 0; i < 3; i++)
            {
                byHand[i * 40 + k] = Enumerable.Range(0, 40).Sum(j => all.Cross![i * 40 + j] * p[j]);
            }
        }

        RelativeAssert.Close(byHand, noise.Cross!, 1e-6, "brain dominates at slightly other frequencies with the room left in");
    }
}
