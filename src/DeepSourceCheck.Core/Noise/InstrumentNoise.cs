namespace DeepSourceCheck.Core.Noise;

// InstrumentNoise.cs - amplifiers and sensors.
//   density^2(f) = d^2 (1 + fc/f): white above the corner fc, at which both parts are equal, one over f below it.
//   Over a band: d^2 (b - a + fc ln(b/a)).
// Source: common practice, no source (data sheets give a white density and a corner).

/// <summary>Amplifier and sensor noise, independent in every electrode (before referencing) and every MEG channel; white, or rising below a corner.</summary>
public sealed class InstrumentNoise : INoiseTerm
{
    private readonly double _eegCorner;
    private readonly double _megCorner;

    /// <param name="eegDensities">Amplitude density of each electrode well above the corner [V/sqrt(Hz)], or null.</param>
    /// <param name="megDensities">Amplitude density of each MEG channel, likewise [T/sqrt(Hz) or T/m/sqrt(Hz)], or null.</param>
    /// <param name="eegCorner">Corner of the amplifiers [Hz]; 0 for white.</param>
    /// <param name="megCorner">Corner of the MEG sensors [Hz]; 0 for white.</param>
    public InstrumentNoise(double[]? eegDensities, double[]? megDensities, double eegCorner = 0, double megCorner = 0)
    {
        Eeg = Pattern(eegDensities);
        Meg = Pattern(megDensities);
        _eegCorner = eegCorner;
        _megCorner = megCorner;
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
    public NoisePower At(double frequency) => new(Power(_eegCorner, frequency), Power(_megCorner, frequency), 0);

    /// <summary>Power density relative to the white one.</summary>
    /// <param name="corner">fc [Hz]; 0 for white.</param>
    /// <param name="frequency">f [Hz], positive.</param>
    internal static double Power(double corner, double frequency) => 1 + corner / frequency;

    private static NoisePattern? Pattern(double[]? densities) =>
        densities is null ? null : new NoisePattern([.. densities.Select(d => d * d)], null, 0);
}
