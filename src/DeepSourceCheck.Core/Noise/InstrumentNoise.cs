namespace DeepSourceCheck.Core.Noise;

/// <summary>Amplifier and sensor noise: white, independent in every electrode (before referencing) and every MEG channel.</summary>
public sealed class InstrumentNoise : INoiseTerm
{
    /// <param name="eegDensities">Amplitude density of each electrode [V/sqrt(Hz)], or null.</param>
    /// <param name="megDensities">Amplitude density of each MEG channel [T/sqrt(Hz) or T/m/sqrt(Hz)], or null.</param>
    public InstrumentNoise(double[]? eegDensities, double[]? megDensities)
    {
        Eeg = Pattern(eegDensities);
        Meg = Pattern(megDensities);
    }

    /// <inheritdoc/>
    public string Name => "instrument";

    /// <inheritdoc/>
    public NoisePattern? Eeg { get; }

    /// <inheritdoc/>
    public NoisePattern? Meg { get; }

    /// <inheritdoc/>
    public IReadOnlyList<double> Breakpoints => [];

    /// <inheritdoc/>
    public NoisePower At(double frequency) => new(1, 1, 0);

    private static NoisePattern? Pattern(double[]? densities) =>
        densities is null ? null : new NoisePattern([.. densities.Select(d => d * d)], null, 0);
}
