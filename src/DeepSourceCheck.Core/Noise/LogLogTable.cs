namespace DeepSourceCheck.Core.Noise;

/// <summary>An amplitude density over frequency, a power law between the points of a table.</summary>
/// <remarks>Outside the table the end segments go on: the caller warns where a band leaves <see cref="KnownFrom"/> to <see cref="KnownTo"/>.</remarks>
public sealed class LogLogTable
{
    private readonly double[] _frequencies;
    private readonly double[] _densities;

    /// <param name="points">(frequency [Hz], amplitude density [unit/sqrt(Hz)]), increasing, positive; at least two.</param>
    public LogLogTable(params (double Frequency, double Density)[] points)
    {
        (_frequencies, _densities) = (new double[points.Length], new double[points.Length]);
        bool sound = points.Length >= 2;
        for (int k = 0; k < points.Length; k++)
        {
            (_frequencies[k], _densities[k]) = points[k];
            sound &= _frequencies[k] > (k == 0 ? 0 : _frequencies[k - 1]) && _densities[k] > 0;
        }

        if (!sound)
        {
            throw new ArgumentException("A table needs two or more points with increasing positive frequencies and positive densities.", nameof(points));
        }

        KnownTo = _frequencies[^1];
    }

    /// <summary>Frequencies of the points [Hz].</summary>
    public IReadOnlyList<double> Frequencies => _frequencies;

    /// <summary>Lowest frequency for which the table stands [Hz]: its first point.</summary>
    public double KnownFrom => _frequencies[0];

    /// <summary>Highest frequency for which the table stands [Hz]: its last point, or beyond it where its last slope is part of what is known.</summary>
    public double KnownTo { get; init; }

    /// <summary>Amplitude density at a frequency [unit/sqrt(Hz)].</summary>
    /// <param name="frequency">Positive [Hz].</param>
    public double DensityAt(double frequency)
    {
        int above = 0;
        while (above < _frequencies.Length && _frequencies[above] < frequency)
        {
            above++;
        }

        if (above < _frequencies.Length && _frequencies[above] == frequency)
        {
            return _densities[above];
        }

        int k = Math.Clamp(above - 1, 0, _frequencies.Length - 2);
        double slope = Math.Log(_densities[k + 1] / _densities[k]) / Math.Log(_frequencies[k + 1] / _frequencies[k]);
        return _densities[k] * Math.Pow(frequency / _frequencies[k], slope);
    }

    /// <summary>The same table times a factor.</summary>
    public LogLogTable Scaled(double factor)
    {
        var points = new (double, double)[_frequencies.Length];
        for (int k = 0; k < points.Length; k++)
        {
            points[k] = (_frequencies[k], factor * _densities[k]);
        }

        return new(points) { KnownTo = KnownTo };
    }

    /// <summary>rms over a band: sqrt of the integral of the squared density [unit].</summary>
    public double Rms(double low, double high) =>
        Math.Sqrt(BandIntegral.Of(f => { double d = DensityAt(f); return d * d; }, low, high, _frequencies));
}
