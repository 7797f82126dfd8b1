using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>One cause of noise over frequency.</summary>
/// <param name="Cause">`instrument`, `brain`, `environment`, `muscle and electrode`, `stated per trial` or `recorded`.</param>
/// <param name="Share">Its share of the variance over the response's band.</param>
/// <param name="Densities">Amplitude density at each frequency, in the unit of the spectrum; null where it is not known (outside a table) or where what a total leaves is negative.</param>
public sealed record NoiseCurve(string Cause, double Share, IReadOnlyList<double?> Densities);

/// <summary>Noise of one reading over frequency, by cause, with the response beside it.</summary>
public sealed record ReadingSpectrum
{
    /// <summary>EEG or MEG.</summary>
    public required Modality Modality { get; init; }

    /// <summary>Derivation or channel.</summary>
    public required string Channel { get; init; }

    /// <summary>Unit of the densities: `uV/sqrt(Hz)`, `fT/sqrt(Hz)`, `fT/cm/sqrt(Hz)`.</summary>
    public required string Unit { get; init; }

    /// <summary>Frequencies [Hz], evenly spaced in their logarithm; over the response's band alone where the noise is stated per trial or recorded.</summary>
    public required IReadOnlyList<double> Frequencies { get; init; }

    /// <summary>Causes, in the order of the derivation chain.</summary>
    public required IReadOnlyList<NoiseCurve> Noise { get; init; }

    /// <summary>All causes together, in the unit of the spectrum; null likewise.</summary>
    public required IReadOnlyList<double?> Total { get; init; }

    /// <summary>Response's band [Hz].</summary>
    public required Band Band { get; init; }

    /// <summary>Band that the sensors pass [Hz], where stated.</summary>
    public Band? Bandwidth { get; init; }

    /// <summary>
    /// The response spread over its band: predicted peak amplitude over the noise's convention factor and the root of the bandwidth, so that its height over a flat noise is the
    /// amplitude SNR of one trial; null where the reading is silent.
    /// </summary>
    public double? SignalLevel { get; init; }

    /// <summary>Amplitude spectral density of a response whose waveform is known, at <see cref="Frequencies"/>, in the unit of the spectrum; null where it is not.</summary>
    public IReadOnlyList<double>? SignalDensities { get; init; }
}
