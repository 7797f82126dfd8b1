using System.Numerics;

using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.IntegralTransforms;

namespace DeepSourceCheck.Core.Noise.Recordings;

/// <summary>
/// A zero-phase band-pass: a symmetric windowed-sinc filter, applied by convolution. h = lowpass(high) - lowpass(low), lowpass(f)[n] = 2 f/fs sinc(2 f n/fs) w[n], w the Blackman window
/// of 5.5 fs over the transition width (stop band below -74 dB). Source: Oppenheim and Schafer, Discrete-Time Signal Processing, section 7.5 (from memory).
/// </summary>
/// <remarks>
/// A transition lies around the edge, a quarter of it wide, but not below 2 Hz (or the edge itself) and at most half of the band. The filter is scaled so that white noise comes out with
/// the power of its density over the band: the band that the rest of the program means has vertical edges. Samples within half the filter of either end of a stretch are given up.
/// </remarks>
public sealed class BandPass
{
    private const double BlackmanLength = 5.5, TransitionShare = 0.25, NarrowestTransition = 2;

    private readonly double[] _taps;

    /// <param name="band">Band [Hz]; a lower edge of 0 passes slow potentials.</param>
    /// <param name="samplingRate">Sampling rate [Hz], above twice the upper edge.</param>
    public BandPass(Band band, double samplingRate)
    {
        if (!(band.High > band.Low && band.Low >= 0 && samplingRate > 2 * band.High))
        {
            throw new ArgumentException($"A band from {band.Low} to {band.High} Hz has no filter at {samplingRate} Hz.", nameof(band));
        }

        double[] upper = LowPass(band.High, Transition(band.High, band, (samplingRate / 2 - band.High) * 2), samplingRate);
        double[] lower = band.Low > 0 ? LowPass(band.Low, Transition(band.Low, band, double.PositiveInfinity), samplingRate) : [];
        _taps = new double[Math.Max(upper.Length, lower.Length)];
        Add(upper, 1);
        Add(lower, -1);
        double scale = Math.Sqrt(2 * band.Width / samplingRate / _taps.Sum(h => h * h));
        for (int n = 0; n < _taps.Length; n++)
        {
            _taps[n] *= scale;
        }
    }

    /// <summary>The filter's taps, an odd number of factors, symmetric about the middle one.</summary>
    public IReadOnlyList<double> Taps => _taps;

    /// <summary>Number of samples that are given up at either end of a stretch.</summary>
    public int Margin => _taps.Length / 2;

    /// <summary>Filters a stretch.</summary>
    /// <param name="values">Channels of equal length, in any unit.</param>
    /// <returns>Channels without <see cref="Margin"/> samples at either end, in the unit of the values; empty ones where the stretch is too short.</returns>
    public double[][] Apply(double[][] values)
    {
        int length = values[0].Length - 2 * Margin;
        double[][] result = [.. values.Select(_ => new double[Math.Max(0, length)])];
        if (length <= 0)
        {
            return result;
        }

        int block = 4096;
        while (block < 4 * _taps.Length)
        {
            block *= 2;
        }

        var response = new Complex[block];
        for (int n = 0; n < _taps.Length; n++)
        {
            response[n] = _taps[n];
        }

        Fourier.Forward(response, FourierOptions.NoScaling);
        Parallel.For(0, (values.Length + 1) / 2, pair => Convolve(values, 2 * pair, response, result));
        return result;
    }

    // Overlap-save, two real channels as one complex one: the taps are real, so the parts stay apart.
    private void Convolve(double[][] values, int channel, Complex[] response, double[][] result)
    {
        int block = response.Length, lead = _taps.Length - 1, fresh = block - lead, length = result[channel].Length;
        bool two = channel + 1 < values.Length;
        double meanA = values[channel].Average(), meanB = two ? values[channel + 1].Average() : 0;
        var work = new Complex[block];
        for (int start = 0; start < length; start += fresh)
        {
            for (int n = 0; n < block; n++)
            {
                int at = start + n;
                work[n] = at < values[channel].Length ? new Complex(values[channel][at] - meanA, two ? values[channel + 1][at] - meanB : 0) : Complex.Zero;
            }

            Fourier.Forward(work, FourierOptions.NoScaling);
            for (int n = 0; n < block; n++)
            {
                work[n] *= response[n] / block;
            }

            Fourier.Inverse(work, FourierOptions.NoScaling);
            for (int n = 0; n < fresh && start + n < length; n++)
            {
                result[channel][start + n] = work[lead + n].Real;
                if (two)
                {
                    result[channel + 1][start + n] = work[lead + n].Imaginary;
                }
            }
        }
    }

    private static double Transition(double edge, Band band, double most) =>
        Math.Min(Math.Min(Math.Max(TransitionShare * edge, Math.Min(edge, NarrowestTransition)), band.Width / 2), most);

    private static double[] LowPass(double edge, double transition, double rate)
    {
        int half = (int)Math.Ceiling(BlackmanLength * rate / transition / 2);
        var taps = new double[2 * half + 1];
        double sum = 0;
        for (int n = -half; n <= half; n++)
        {
            double x = 2 * Math.PI * edge / rate * n, turn = Math.PI * n / (half + 1);
            double window = 0.42 + 0.5 * Math.Cos(turn) + 0.08 * Math.Cos(2 * turn);
            sum += taps[half + n] = (n == 0 ? 1 : Math.Sin(x) / x) * window;
        }

        for (int n = 0; n < taps.Length; n++)
        {
            taps[n] /= sum;
        }

        return taps;
    }

    private void Add(double[] taps, double sign)
    {
        int shift = (_taps.Length - taps.Length) / 2;
        for (int n = 0; n < taps.Length; n++)
        {
            _taps[shift + n] += sign * taps[n];
        }
    }
}
