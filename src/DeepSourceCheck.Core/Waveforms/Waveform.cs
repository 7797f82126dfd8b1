using System.Numerics;

namespace DeepSourceCheck.Core.Waveforms;

/// <summary>A course of the moment in time, in any scale: zero outside its support, time 0 wherever it likes.</summary>
public abstract class Waveform
{
    /// <summary>What it is, in words with its numbers.</summary>
    public abstract string Description { get; }

    /// <summary>Begin of the support [s].</summary>
    public abstract double FirstTime { get; }

    /// <summary>End of the support [s].</summary>
    public abstract double LastTime { get; }

    /// <summary>Value at a time [s], without unit.</summary>
    public abstract double At(double time);

    /// <summary>W(f) = integral of w(t) exp(-2 pi i f t) [s].</summary>
    /// <param name="frequency">f [Hz].</param>
    public abstract Complex Spectrum(double frequency);

    /// <summary>Times [s] between which the waveform has at most one extremum.</summary>
    public abstract IReadOnlyList<double> Knots { get; }

    /// <summary>Smallest and largest value, without unit.</summary>
    public (double Low, double High) Range()
    {
        (double low, double high) = (Math.Min(0, At(FirstTime)), Math.Max(0, At(FirstTime)));
        foreach (double t in Extrema.Of(At, Knots))
        {
            low = Math.Min(low, At(t));
            high = Math.Max(high, At(t));
        }

        return (low, high);
    }
}
