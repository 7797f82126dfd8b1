using System.Globalization;
using System.Numerics;

namespace DeepSourceCheck.Core.Waveforms;

// SampledWaveform.cs - straight lines between samples, zero outside.
//   A piece of half length h about t0 with middle value m and slope g has the transform
//     exp(-i w t0) [ 2 m sin(w h)/w - 2 i g (sin(w h) - w h cos(w h))/w^2 ],  w = 2 pi f
//   and for small w h: 2 m h (1 - (w h)^2/6 ...) - 2 i g h^2 (w h/3 - (w h)^3/30 ...).

/// <summary>Samples of a waveform.</summary>
public sealed class SampledWaveform : Waveform
{
    private const double SmallAngle = 1e-3;

    private readonly double[] _times, _values;
    private readonly string _name;

    /// <param name="name">Where the samples come from.</param>
    /// <param name="times">Times [s], rising; at least two.</param>
    /// <param name="values">Values against the baseline, in any unit.</param>
    public SampledWaveform(string name, IReadOnlyList<double> times, IReadOnlyList<double> values)
    {
        if (times.Count != values.Count || times.Count < 2 || Enumerable.Range(1, times.Count - 1).Any(k => !(times[k] > times[k - 1])))
        {
            throw new ArgumentException("A sampled waveform needs two samples at least, at rising times, and a value for each.", nameof(times));
        }

        (_name, _times, _values) = (name, [.. times], [.. values]);
    }

    /// <inheritdoc/>
    public override string Description => string.Create(CultureInfo.InvariantCulture,
        $"{_times.Length} samples over {(LastTime - FirstTime) * 1000:0.###} ms from {_name}, straight lines between them");

    /// <inheritdoc/>
    public override double FirstTime => _times[0];

    /// <inheritdoc/>
    public override double LastTime => _times[^1];

    /// <inheritdoc/>
    public override IReadOnlyList<double> Knots => _times;

    /// <inheritdoc/>
    public override double At(double time)
    {
        if (time < FirstTime || time > LastTime)
        {
            return 0;
        }

        int found = Array.BinarySearch(_times, time);
        if (found >= 0)
        {
            return _values[found];
        }

        int k = ~found;
        double share = (time - _times[k - 1]) / (_times[k] - _times[k - 1]);
        return _values[k - 1] + share * (_values[k] - _values[k - 1]);
    }

    /// <inheritdoc/>
    public override Complex Spectrum(double frequency)
    {
        double w = 2 * Math.PI * frequency, re = 0, im = 0;
        for (int k = 1; k < _times.Length; k++)
        {
            double h = (_times[k] - _times[k - 1]) / 2, middle = (_values[k] + _values[k - 1]) / 2, rise = (_values[k] - _values[k - 1]) / 2, x = w * h;
            double even, odd;
            if (Math.Abs(x) < SmallAngle)
            {
                even = 2 * middle * h * (1 - x * x / 6);
                odd = 2 * rise * h * x * (1.0 / 3 - x * x / 30);
            }
            else
            {
                (double sin, double cos) = Math.SinCos(x);
                even = 2 * middle * h * sin / x;
                odd = 2 * rise * h * (sin - x * cos) / (x * x);
            }

            (double s, double c) = Math.SinCos(w * (_times[k] + _times[k - 1]) / 2);
            re += even * c - odd * s;
            im += -even * s - odd * c;
        }

        return new(re, im);
    }
}
