using System.Globalization;
using System.Numerics;

namespace DeepSourceCheck.Core.Waveforms;

// WindowedOscillation.cs - n cycles of a cosine under a raised cosine.
//   w(t) = (1 + cos(2 pi t/T))/2 cos(2 pi f0 t), |t| <= T/2, T = n/f0
//   W(f) = (H(f - f0) + H(f + f0))/2, H(f) = (T/2) sinc(f T)/(1 - (f T)^2), sinc(x) = sin(pi x)/(pi x)
// Source: transform of the raised cosine (Hann window), Harris 1978, Proc IEEE 66:51 (from memory).

/// <summary>A dominant frequency and its number of cycles, peak in the middle.</summary>
/// <param name="frequency">f0 [Hz], positive.</param>
/// <param name="cycles">n, from the first to the last value other than zero; positive.</param>
public sealed class WindowedOscillation(double frequency, double cycles) : Waveform
{
    private readonly double _frequency = frequency, _length = cycles / frequency;

    /// <inheritdoc/>
    public override string Description => string.Create(CultureInfo.InvariantCulture, $"{cycles:0.###} cycles of {_frequency:0.###} Hz under a raised cosine");

    /// <inheritdoc/>
    public override double FirstTime => -_length / 2;

    /// <inheritdoc/>
    public override double LastTime => _length / 2;

    /// <inheritdoc/>
    public override IReadOnlyList<double> Knots
    {
        get
        {
            int pieces = 8 * (int)Math.Ceiling(Math.Max(cycles, 1));
            return [.. Enumerable.Range(0, pieces + 1).Select(k => _length * ((double)k / pieces - 0.5))];
        }
    }

    /// <inheritdoc/>
    public override double At(double time) => Math.Abs(time) > _length / 2 ? 0
        : 0.5 * (1 + Math.Cos(2 * Math.PI * time / _length)) * Math.Cos(2 * Math.PI * _frequency * time);

    /// <inheritdoc/>
    public override Complex Spectrum(double frequency) => 0.5 * (Envelope(frequency - _frequency) + Envelope(frequency + _frequency));

    private double Envelope(double f)
    {
        double x = Math.Abs(f * _length), y = x - 1;
        if (x < 1e-8)
        {
            return _length / 2;
        }

        // sin(pi x)/(1 - x^2) = sin(pi y)/(y (y + 2)) with y = x - 1, which is pi/2 at y = 0
        double ratio = Math.Abs(y) < 1e-8 ? Math.PI / 2 : Math.Sin(Math.PI * y) / (y * (y + 2));
        return _length / 2 * ratio / (Math.PI * x);
    }
}
