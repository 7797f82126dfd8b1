using System.Globalization;
using System.Numerics;

namespace DeepSourceCheck.Core.Waveforms;

// GaussianPulse.cs - w(t) = exp(-t^2/(2 tau^2)), tau = width/(2 sqrt(2 ln 2)); W(f) = tau sqrt(2 pi) exp(-2 (pi f tau)^2). Textbook transform pair.

/// <summary>A single deflection.</summary>
/// <param name="width">Full width at half of the peak [s].</param>
public sealed class GaussianPulse(double width) : Waveform
{
    // Beyond six standard deviations less than 2e-8 of the peak is left.
    private const double Reach = 6;

    /// <summary>Standard deviation tau [s].</summary>
    public double Deviation { get; } = width / (2 * Math.Sqrt(2 * Math.Log(2)));

    /// <inheritdoc/>
    public override string Description => string.Create(CultureInfo.InvariantCulture, $"a Gaussian of {width * 1000:0.######} ms at half of its peak");

    /// <inheritdoc/>
    public override double FirstTime => -Reach * Deviation;

    /// <inheritdoc/>
    public override double LastTime => Reach * Deviation;

    /// <inheritdoc/>
    public override IReadOnlyList<double> Knots => [FirstTime, 0, LastTime];

    /// <inheritdoc/>
    public override double At(double time) => Math.Exp(-time * time / (2 * Deviation * Deviation));

    /// <inheritdoc/>
    public override Complex Spectrum(double frequency)
    {
        double x = Math.PI * frequency * Deviation;
        return Deviation * Math.Sqrt(2 * Math.PI) * Math.Exp(-2 * x * x);
    }
}
