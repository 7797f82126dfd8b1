namespace DeepSourceCheck.Core.Noise;

/// <summary>An amplitude density over frequency, a power law between the points of a table.</summary>
/// <remarks>Outside the table the end segments go on: the caller warns where a band leaves the table.</remarks>
public sealed class LogLogTable
{
    private readonly double[] _frequencies;
    private readonly double[] _densities;

    /// <param name="points">(frequency [Hz], amplitude density [unit/sqrt(Hz)]), increasing, positive; at least two.</param>
    public LogLogTable(params (double Frequency, double Density)[] points)
    {
        _frequencies = [.. points.Select(p => p.Frequency)];
        _densities = [.. points.Select(p => p.Density)];
        if (points.Length < 2 || points.Any(p => !(p.Frequency > 0 && p.Density > 0)) || !_frequencies.Zip(_frequencies.Skip(1)).All(p => p.First < p.Second))
        {
            throw new ArgumentException("A table needs two or more points with increasing positive frequencies and positive densities.", nameof(points));
        }
    }

    /// <summary>Frequencies of the points [Hz].</summary>
    public IReadOnlyList<double> Frequencies => _frequencies;

    /// <summary>Amplitude density at a frequency [unit/sqrt(Hz)].</summary>
    /// <param name="frequency">Positive [Hz].</param>
    public double DensityAt(double frequency)
    {
        int k = Array.BinarySearch(_frequencies, frequency);
        if (k >= 0)
        {
            return _densities[k];
        }

        k = Math.Clamp(~k - 1, 0, _frequencies.Length - 2);
        double slope = Math.Log(_densities[k + 1] / _densities[k]) / Math.Log(_frequencies[k + 1] / _frequencies[k]);
        return _densities[k] * Math.Pow(frequency / _frequencies[k], slope);
    }

    /// <summary>The same table times a factor.</summary>
    public LogLogTable Scaled(double factor) => new([.. _frequencies.Zip(_densities, (f, d) => (f, factor * d))]);

    /// <summary>rms over a band: sqrt of the integral of the squared density [unit].</summary>
    public double Rms(double low, double high) =>
        Math.Sqrt(BandIntegral.Of(f => { double d = DensityAt(f); return d * d; }, low, high, _frequencies));
}
