using System.Numerics;

using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.Integration;

namespace DeepSourceCheck.Core.Waveforms;

// RecordedWaveform.cs - what the average holds of a waveform: after the recording filter and the jitter of its latency.
//   A(f) = W(f) exp(-(2 pi f sigma)^2/2) inside the band, 0 outside: a rectangular filter, as for the noise. W belongs to the waveform of peak 1 in the convention of the response.
//   a(t) = 2 Re integral A(f) exp(2 pi i f t) df has a new peak: its share of the old one is what can still be read off a trace.
//   Energy E = integral a^2 dt = 2 integral |A|^2 df.
//   Quadrature: pieces of the band, no longer than a factor of 1.2 and cut at the kinks of the noise; in each, Gauss-Legendre on panels shorter than half a cycle of the support. Noise that
//   changes slowly against a piece is then weighed at two nodes a piece, the Gauss rule of the weight |A|^2: exact for cubics, weights positive.
// Source: known signal in noise, Kay 1998, Fundamentals of Statistical Signal Processing II, chapter 5 (from memory); normal jitter multiplies the spectrum by its characteristic function.

/// <summary>A waveform as the average of many trials shows it.</summary>
public sealed class RecordedWaveform
{
    private const double PieceFactor = 1.2, LowestShare = 1e-6;
    private const int PanelOrder = 8, SamplesACycle = 8;

    private readonly double[] _frequencies, _weights;
    private readonly Complex[] _spectrum;
    private readonly double _from, _to, _step;

    /// <param name="waveform">The waveform, in any scale.</param>
    /// <param name="band">Band of the recording filter [Hz].</param>
    /// <param name="convention">What counts as its peak.</param>
    /// <param name="jitter">Standard deviation of the latency [s].</param>
    /// <param name="kinks">Frequencies [Hz] at which the noise has kinks.</param>
    /// <exception cref="ArgumentException">The waveform is zero throughout.</exception>
    public RecordedWaveform(Waveform waveform, Band band, Measured convention, double jitter, IEnumerable<double> kinks)
    {
        Description = waveform.Description;
        Jitter = jitter;
        (double low, double high) = waveform.Range();
        double peak = Peak(low, high, convention);
        if (!(peak > 0))
        {
            throw new ArgumentException("A waveform that is zero throughout has no peak.", nameof(waveform));
        }

        double margin = 1 / band.Width;
        (_from, _to, _step) = (waveform.FirstTime - margin, waveform.LastTime + margin, 1 / (SamplesACycle * band.High));
        double[] edges = Edges(band, kinks);
        var frequencies = new List<double>();
        var weights = new List<double>();
        var spectrum = new List<Complex>();
        var nodes = new List<SpectralNode>();
        var rule = new GaussLegendreRule(-1, 1, PanelOrder);
        for (int k = 0; k + 1 < edges.Length; k++)
        {
            int first = frequencies.Count, panels = (int)Math.Ceiling((edges[k + 1] - edges[k]) * 2 * (_to - _from));
            for (int p = 0; p < Math.Max(panels, 1); p++)
            {
                double half = (edges[k + 1] - edges[k]) / Math.Max(panels, 1) / 2, middle = edges[k] + (2 * p + 1) * half;
                for (int i = 0; i < rule.Order; i++)
                {
                    double f = middle + half * rule.GetAbscissa(i), x = 2 * Math.PI * f * jitter;
                    frequencies.Add(f);
                    weights.Add(half * rule.GetWeight(i));
                    spectrum.Add(waveform.Spectrum(f) / peak * Math.Exp(-x * x / 2));
                }
            }

            AddNodes(frequencies, weights, spectrum, first, nodes);
        }

        (_frequencies, _weights, _spectrum) = ([.. frequencies], [.. weights], [.. spectrum]);
        Nodes = nodes;
        Energy = 2 * nodes.Sum(n => n.Energy);
        Kept = Peak(convention);
    }

    /// <summary>What the waveform is.</summary>
    public string Description { get; }

    /// <summary>Standard deviation of the latency [s].</summary>
    public double Jitter { get; }

    /// <summary>Peak after filter and jitter over the peak before, without unit, in the convention of the response.</summary>
    public double Kept { get; }

    /// <summary>Energy of the waveform of peak 1 after filter and jitter [s].</summary>
    public double Energy { get; }

    /// <summary>Where and how strongly the waveform weighs the noise.</summary>
    public IReadOnlyList<SpectralNode> Nodes { get; }

    /// <summary>Value after filter and jitter at a time [s] of the waveform of peak 1.</summary>
    public double At(double time)
    {
        double sum = 0;
        for (int k = 0; k < _frequencies.Length; k++)
        {
            (double sin, double cos) = Math.SinCos(2 * Math.PI * _frequencies[k] * time);
            sum += _weights[k] * (_spectrum[k].Real * cos - _spectrum[k].Imaginary * sin);
        }

        return 2 * sum;
    }

    /// <summary>Root mean square over a window, placed where it is largest, over the peak that is kept; without unit.</summary>
    /// <param name="window">Length of the window [s].</param>
    public double WindowRmsPerPeak(double window)
    {
        double step = Math.Min(_step, window / SamplesACycle);
        int inside = (int)Math.Round(window / step);
        int samples = (int)Math.Ceiling((_to - _from + 2 * window) / step) + 1;
        double begin = _from - window, sum = 0, largest = 0;
        double[] squares = [.. Enumerable.Range(0, samples).Select(k => Math.Pow(At(begin + k * step), 2))];
        for (int k = 0; k < samples; k++)
        {
            sum += squares[k] - (k >= inside ? squares[k - inside] : 0);
            largest = Math.Max(largest, sum);
        }

        return Math.Sqrt(largest / inside) / Kept;
    }

    private double Peak(Measured convention)
    {
        int samples = (int)Math.Ceiling((_to - _from) / _step) + 1;
        double[] grid = [.. Enumerable.Range(0, samples).Select(k => _from + k * _step)];
        double low = 0, high = 0;
        double[] values = [.. grid.Select(At)];
        double largest = values.Max(Math.Abs);
        for (int k = 1; k + 1 < samples; k++)
        {
            // Only an extremum that may be the largest or smallest is refined: a grid of eight points a cycle loses at most 8 % of one.
            bool top = values[k] >= values[k - 1] && values[k] >= values[k + 1], bottom = values[k] <= values[k - 1] && values[k] <= values[k + 1];
            if ((top || bottom) && (values[k] > 0.9 * high || values[k] < 0.9 * low || Math.Abs(values[k]) > 0.9 * largest))
            {
                double refined = Extrema.Of(At, [grid[k - 1], grid[k], grid[k + 1]]).Select(At).MaxBy(Math.Abs);
                (low, high) = (Math.Min(low, refined), Math.Max(high, refined));
            }
        }

        return Peak(low, high, convention);
    }

    private static double Peak(double low, double high, Measured convention) =>
        convention == Measured.PeakToTrough ? high - low : Math.Max(high, -low);

    private static double[] Edges(Band band, IEnumerable<double> kinks)
    {
        double from = Math.Max(band.Low, LowestShare * band.High);
        double[] cuts = [from, .. kinks.Where(f => f > from && f < band.High).Distinct().Order(), band.High];
        var edges = new List<double> { from };
        for (int k = 1; k < cuts.Length; k++)
        {
            double ratio = cuts[k] / cuts[k - 1];
            int pieces = Math.Max(1, (int)Math.Ceiling(Math.Log(ratio) / Math.Log(PieceFactor)));
            edges.AddRange(Enumerable.Range(1, pieces).Select(p => p == pieces ? cuts[k] : cuts[k - 1] * Math.Pow(ratio, (double)p / pieces)));
        }

        return [.. edges];
    }

    // The Gauss rule of two nodes for the weight |A|^2 on a piece: with mean mu, variance v and third central moment c the nodes are mu + x, x^2 - (c/v) x - v = 0.
    private static void AddNodes(List<double> frequencies, List<double> weights, List<Complex> spectrum, int first, List<SpectralNode> nodes)
    {
        double energy = 0, mean = 0, variance = 0, third = 0;
        for (int k = first; k < frequencies.Count; k++)
        {
            double e = weights[k] * Square(spectrum[k]);
            energy += e;
            mean += e * frequencies[k];
        }

        if (!(energy > 0))
        {
            return;
        }

        mean /= energy;
        for (int k = first; k < frequencies.Count; k++)
        {
            double e = weights[k] * Square(spectrum[k]) / energy, d = frequencies[k] - mean;
            variance += e * d * d;
            third += e * d * d * d;
        }

        double skew = third / (2 * variance), root = Math.Sqrt(skew * skew + variance), below = skew - root, above = skew + root;
        nodes.Add(new(mean + below, energy * above / (above - below)));
        nodes.Add(new(mean + above, -energy * below / (above - below)));
    }

    private static double Square(Complex z) => z.Real * z.Real + z.Imaginary * z.Imaginary;
}
