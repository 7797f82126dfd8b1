namespace DeepSourceCheck.Core.Noise;

/// <summary>Muscle and electrode noise: what the stated total leaves after instrument and brain, equal and independent in every electrode before referencing.</summary>
/// <remarks>
/// The remainder may be negative at single frequencies, where the default tables cross; over a response's band it must not be: whoever builds the noise refuses that.
/// </remarks>
public sealed class MuscleElectrodeNoise : INoiseTerm
{
    private readonly Func<double, double> _remainder;
    private readonly (double From, double To) _known;

    /// <param name="electrodes">Number of electrodes.</param>
    /// <param name="remainder">Power density of one electrode at a frequency [V^2/Hz].</param>
    /// <param name="breakpoints">Kinks [Hz].</param>
    /// <param name="known">Frequencies [Hz] between which the table of the total stands.</param>
    public MuscleElectrodeNoise(int electrodes, Func<double, double> remainder, IReadOnlyList<double> breakpoints, (double From, double To) known)
    {
        _known = known;
        Eeg = new NoisePattern([.. Enumerable.Repeat(1.0, electrodes)], null, 0);
        _remainder = remainder;
        Breakpoints = breakpoints;
    }

    /// <inheritdoc/>
    public string Name => "muscle and electrode";

    /// <inheritdoc/>
    public NoisePattern? Eeg { get; }

    /// <inheritdoc/>
    public NoisePattern? Meg => null;

    /// <inheritdoc/>
    public IReadOnlyList<double> Breakpoints { get; }

    /// <inheritdoc/>
    public (double From, double To)? Known(bool eeg) => _known;

    /// <inheritdoc/>
    public NoisePower At(double frequency) => new(_remainder(frequency), 0, 0);
}
