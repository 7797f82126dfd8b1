using DeepSourceCheck.Core.Waveforms;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.References;

/// <summary>4 integral |A(f)|^2 b' C(f)^-1 b df by trapezoids with dense inverses: the slow twin of detection by a filter that knows the waveform. Never to be made fast.</summary>
internal static class PlainKnownWaveform
{
    /// <summary>d^2 per squared moment.</summary>
    /// <param name="w">Waveform of peak 1.</param>
    /// <param name="low">Lower edge of the band [Hz].</param>
    /// <param name="high">Upper edge [Hz].</param>
    /// <param name="sigma">Jitter [s].</param>
    /// <param name="density">C(f), one-sided, of the rows that are read; regular.</param>
    /// <param name="b">Field at those rows.</param>
    public static double SquaredDistance(Waveform w, double low, double high, double sigma, Func<double, Matrix<double>> density, Vector<double> b)
    {
        const int steps = 4000;
        double sum = 0, df = (high - low) / steps;
        for (int k = 0; k <= steps; k++)
        {
            double f = low + k * df, x = 2 * Math.PI * f * sigma, a = w.Spectrum(f).Magnitude * Math.Exp(-x * x / 2);
            sum += (k is 0 or steps ? 0.5 : 1) * 4 * df * a * a * b.DotProduct(density(f).Solve(b));
        }

        return sum;
    }
}
