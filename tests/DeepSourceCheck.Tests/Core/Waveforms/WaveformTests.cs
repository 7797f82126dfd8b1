using System.Numerics;

using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Waveforms;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Waveforms;

/// <summary>Courses of a response in time: their transforms, and what filter and jitter leave of them.</summary>
public class WaveformTests
{
    /// <summary>Trapezoids over a smooth waveform that ends at zero: the integration is exact to about this, relative to the largest value of the transform.</summary>
    private const double Integration = 2e-7;

    /// <summary>Of a band from 0 what lies below a millionth of its upper edge is left out: here 7e-6 of the energy, 2e-5 of that of a smeared one.</summary>
    private const double WideBand = 5e-5;

    private const double Width = 1.2e-3;

    private static readonly double Tau = Width / (2 * Math.Sqrt(2 * Math.Log(2)));

    private static readonly Band Wide = new(0, 2000);

    public static TheoryData<string> Kinds => ["oscillation", "half a cycle", "gaussian", "samples"];

    private static Waveform Of(string kind) => kind switch
    {
        "oscillation" => new WindowedOscillation(500, 2),
        "half a cycle" => new WindowedOscillation(500, 0.5),
        "gaussian" => new GaussianPulse(Width),
        _ => new SampledWaveform("w.csv", [0, 0.001, 0.0015, 0.004], [0, 2, -1, 0.5]),
    };

    [Theory]
    [MemberData(nameof(Kinds))]
    public void Spectrum_EqualsTheIntegral(string kind)
    {
        Waveform w = Of(kind);
        double largest = Integral(w, 0).Magnitude + Integral(w, 500).Magnitude;
        foreach (double f in new[] { 0, 3, 125, 250, 499.9999999, 500, 750, 1000, 2345.6 })
        {
            Assert.InRange((w.Spectrum(f) - Integral(w, f)).Magnitude, 0, Integration * largest);
        }
    }

    [Fact]
    public void EnergyOfAGaussianInAWideBand_IsItsClosedForm() =>
        RelativeAssert.Equal(Tau * Math.Sqrt(Math.PI), new RecordedWaveform(new GaussianPulse(Width), Wide, Measured.BaselineToPeak, 0, []).Energy, WideBand);

    [Theory]
    [InlineData(0.3e-3)]
    [InlineData(1.5e-3)]
    public void JitterOfAGaussian_WidensIt(double sigma)
    {
        // A Gaussian smeared by a normal latency is a Gaussian: peak tau/sqrt(tau^2 + sigma^2), energy sqrt(pi) tau^2/sqrt(tau^2 + sigma^2).
        var recorded = new RecordedWaveform(new GaussianPulse(Width), Wide, Measured.BaselineToPeak, sigma, []);
        double wider = Math.Sqrt(Tau * Tau + sigma * sigma);
        RelativeAssert.Equal(Tau / wider, recorded.Kept, WideBand);
        RelativeAssert.Equal(Math.Sqrt(Math.PI) * Tau * Tau / wider, recorded.Energy, WideBand);
    }

    [Fact]
    public void JitterOfManyCycles_MultipliesTheirPeakByItsCharacteristicFunction()
    {
        const double f = 500, sigma = 0.3e-3;
        var recorded = new RecordedWaveform(new WindowedOscillation(f, 60), new Band(100, 1500), Measured.BaselineToPeak, sigma, []);
        double x = 2 * Math.PI * f * sigma;
        RelativeAssert.Equal(Math.Exp(-x * x / 2), recorded.Kept, 2e-3);        // 60 cycles are a line of 1/60 of its frequency
    }

    [Fact]
    public void FilterAroundAWaveform_LeavesItsPeak()
    {
        RelativeAssert.Equal(1, new RecordedWaveform(Of("gaussian"), Wide, Measured.BaselineToPeak, 0, []).Kept, WideBand);
        RelativeAssert.Equal(1, new RecordedWaveform(Of("gaussian"), Wide, Measured.PeakToTrough, 0, []).Kept, 1e-3);
    }

    [Theory]
    [InlineData(Measured.BaselineToPeak)]
    [InlineData(Measured.PeakToTrough)]
    public void Peak_IsThatOfAFineGrid(Measured convention)
    {
        // The slow twin: w filtered by a rectangle, sampled a thousand times a cycle of the upper edge.
        var band = new Band(100, 900);
        Waveform w = Of("samples");
        var recorded = new RecordedWaveform(w, band, convention, 0.1e-3, []);
        double scale = convention == Measured.PeakToTrough ? 3 : 2, low = 0, high = 0;      // -1 to 2
        for (double t = -2e-3; t < 6e-3; t += 2e-6)
        {
            double value = Filtered(w, band, 0.1e-3, t) / scale;
            (low, high) = (Math.Min(low, value), Math.Max(high, value));
        }

        RelativeAssert.Equal(convention == Measured.PeakToTrough ? high - low : Math.Max(high, -low), recorded.Kept, 1e-5);
    }

    [Fact]
    public void Nodes_WeighASmoothDensityAsTheIntegralDoes()
    {
        // Integral of |A|^2 f^-4 over 40 to 900 Hz by trapezoids; the nodes hold cubics on pieces of 1.2.
        var band = new Band(40, 900);
        Waveform w = Of("oscillation");
        var recorded = new RecordedWaveform(w, band, Measured.BaselineToPeak, 0.2e-3, [100]);
        const int steps = 100_000;
        double exact = 0;
        for (int k = 0; k <= steps; k++)
        {
            double f = band.Low + band.Width * k / steps, x = 2 * Math.PI * f * 0.2e-3, a = w.Spectrum(f).Magnitude * Math.Exp(-x * x / 2);
            exact += (k is 0 or steps ? 0.5 : 1) * a * a * Math.Pow(f, -4) * band.Width / steps;
        }

        RelativeAssert.Equal(exact, recorded.Nodes.Sum(n => n.Energy * Math.Pow(n.Frequency, -4)), 3e-4);
        Assert.All(recorded.Nodes, n => Assert.True(n.Energy > 0 && n.Frequency > band.Low && n.Frequency < band.High));
    }

    [Fact]
    public void WindowRms_OfAGaussianInALongWindow_IsTheRootOfItsEnergyOverTheWindow()
    {
        const double window = 12e-3;
        var recorded = new RecordedWaveform(new GaussianPulse(Width), Wide, Measured.BaselineToPeak, 0, []);
        RelativeAssert.Equal(Math.Sqrt(Tau * Math.Sqrt(Math.PI) / window), recorded.WindowRmsPerPeak(window), 1e-3);
    }

    [Fact]
    public void WindowRms_OfAWindowInsideASlowWave_ApproachesThePeak() =>
        RelativeAssert.Equal(1, new RecordedWaveform(new GaussianPulse(Width), Wide, Measured.BaselineToPeak, 0, []).WindowRmsPerPeak(Width / 100), 1e-3);

    private static Complex Integral(Waveform w, double f)
    {
        const int steps = 200_000;
        double dt = (w.LastTime - w.FirstTime) / steps;
        Complex sum = 0;
        for (int k = 0; k <= steps; k++)
        {
            double t = w.FirstTime + k * dt;
            sum += (k is 0 or steps ? 0.5 : 1) * dt * w.At(t) * Complex.Exp(new Complex(0, -2 * Math.PI * f * t));
        }

        return sum;
    }

    private static double Filtered(Waveform w, Band band, double sigma, double t)
    {
        const int steps = 400;
        double df = band.Width / steps, sum = 0;
        for (int k = 0; k < steps; k++)
        {
            double f = band.Low + (k + 0.5) * df, x = 2 * Math.PI * f * sigma;
            sum += 2 * df * (w.Spectrum(f) * Complex.Exp(new Complex(0, 2 * Math.PI * f * t))).Real * Math.Exp(-x * x / 2);
        }

        return sum;
    }
}
