namespace DeepSourceCheck.Core.Numerics;

// SeededStream.cs - a fixed stream of random numbers, the same on every machine.
//   Bits: splitmix64 (Steele, Lea & Flood 2014, from memory). Normal: polar method (Marsaglia & Bray 1964). Gamma: Marsaglia & Tsang 2000, ACM Trans Math Softw 26:363 (from memory).

/// <summary>Random numbers from a seed.</summary>
/// <param name="seed">Any number; equal seeds give equal streams.</param>
internal sealed class SeededStream(ulong seed)
{
    private ulong _state = seed;
    private double _spare = double.NaN;

    /// <summary>Uniform between 0 and 1, neither included.</summary>
    public double Uniform()
    {
        _state += 0x9E3779B97F4A7C15;
        ulong z = _state;
        z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9;
        z = (z ^ (z >> 27)) * 0x94D049BB133111EB;
        z ^= z >> 31;
        return ((z >> 11) + 0.5) / (1L << 53);
    }

    /// <summary>Standard normal.</summary>
    public double Normal()
    {
        if (!double.IsNaN(_spare))
        {
            (double value, _spare) = (_spare, double.NaN);
            return value;
        }

        while (true)
        {
            double x = 2 * Uniform() - 1, y = 2 * Uniform() - 1, r = x * x + y * y;
            if (r is > 0 and < 1)
            {
                double factor = Math.Sqrt(-2 * Math.Log(r) / r);
                _spare = y * factor;
                return x * factor;
            }
        }
    }

    /// <summary>Chi-square.</summary>
    /// <param name="degrees">Degrees of freedom, above 2.</param>
    public double ChiSquare(double degrees)
    {
        double d = degrees / 2 - 1.0 / 3, c = 1 / Math.Sqrt(9 * d);
        while (true)
        {
            double x = Normal(), v = 1 + c * x;
            if (v > 0 && Math.Log(Uniform()) < 0.5 * x * x + d - d * v * v * v + 3 * d * Math.Log(v))
            {
                return 2 * d * v * v * v;
            }
        }
    }
}
