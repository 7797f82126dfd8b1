using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>A smooth random-looking function of space: a sum of plane waves of even directions and similar lengths, mean 0, variance 1.</summary>
/// <remarks>
/// f(p) = sqrt(2 / n) sum sin(k_m . p + a_m). Directions lie on the golden-angle spiral; wavelengths and phases are successive hashes of a stated seed, so that nothing
/// depends on a machine. Sums of many waves of random phase are nearly Gaussian: common practice, no source. Eight waves at a time: three times as fast as one by one.
/// </remarks>
internal sealed class WaveField
{
    private const int Lanes = 8;

    private readonly Vector512<double>[] _x, _y, _z, _phase;
    private readonly double _amplitude;

    /// <param name="seed">Which field.</param>
    /// <param name="waves">Number of waves, a multiple of eight.</param>
    /// <param name="shortest">Shortest wavelength [mm].</param>
    /// <param name="longest">Longest wavelength [mm].</param>
    public WaveField(ulong seed, int waves, double shortest, double longest)
    {
        double[] x = new double[waves], y = new double[waves], z = new double[waves], phase = new double[waves];
        _amplitude = Math.Sqrt(2.0 / waves);
        ulong state = seed;
        double turn = Math.PI * (3 - Math.Sqrt(5));
        double start = 2 * Math.PI * Next(ref state);
        for (int m = 0; m < waves; m++)
        {
            double up = 1 - (m + 0.5) / waves, rho = Math.Sqrt(1 - up * up), angle = start + turn * m;
            double k = 2 * Math.PI / (shortest + (longest - shortest) * Next(ref state));
            (x[m], y[m], z[m]) = (k * rho * Math.Cos(angle), k * rho * Math.Sin(angle), k * up);
            phase[m] = 2 * Math.PI * Next(ref state);
        }

        (_x, _y, _z, _phase) = (Packed(x), Packed(y), Packed(z), Packed(phase));
    }

    /// <summary>The value at a point [mm].</summary>
    public double Value(Vec3 p)
    {
        Vector512<double> sum = Vector512<double>.Zero;
        for (int m = 0; m < _x.Length; m++)
        {
            sum += Vector512.Sin(_x[m] * p.X + _y[m] * p.Y + _z[m] * p.Z + _phase[m]);
        }

        return _amplitude * Vector512.Sum(sum);
    }

    /// <summary>The value at a point [mm] and its gradient [1/mm].</summary>
    public double Value(Vec3 p, out Vec3 gradient)
    {
        Vector512<double> sum = Vector512<double>.Zero, gx = sum, gy = sum, gz = sum;
        for (int m = 0; m < _x.Length; m++)
        {
            (Vector512<double> sin, Vector512<double> cos) = Vector512.SinCos(_x[m] * p.X + _y[m] * p.Y + _z[m] * p.Z + _phase[m]);
            sum += sin;
            gx += _x[m] * cos;
            gy += _y[m] * cos;
            gz += _z[m] * cos;
        }

        gradient = _amplitude * new Vec3(Vector512.Sum(gx), Vector512.Sum(gy), Vector512.Sum(gz));
        return _amplitude * Vector512.Sum(sum);
    }

    private static Vector512<double>[] Packed(double[] values)
    {
        var packed = new Vector512<double>[values.Length / Lanes];
        for (int n = 0; n < packed.Length; n++)
        {
            packed[n] = Vector512.Create(values, Lanes * n);
        }

        return packed;
    }

    /// <summary>The next number in [0, 1): a 64-bit counter through the multiply-and-shift mixer of Steele, Lea and Flood 2014 (from memory).</summary>
    private static double Next(ref ulong state)
    {
        state = unchecked(state + 0x9e3779b97f4a7c15UL);
        ulong z = state;
        z = unchecked((z ^ z >> 30) * 0xbf58476d1ce4e5b9UL);
        z = unchecked((z ^ z >> 27) * 0x94d049bb133111ebUL);
        return ((z ^ z >> 31) >> 11) * (1.0 / (1UL << 53));
    }
}
