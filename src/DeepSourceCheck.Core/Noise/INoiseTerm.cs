namespace DeepSourceCheck.Core.Noise;

/// <summary>
/// One cause of noise: a fixed pattern over the rows, with a power that depends on frequency. Rows are the unreferenced electrodes, then the MEG channels.
/// Noise is spectral from the first day, never one scalar a band.
/// </summary>
public interface INoiseTerm
{
    /// <summary>What causes it.</summary>
    string Name { get; }

    /// <summary>Pattern of the EEG rows, or null where the term is absent from EEG.</summary>
    NoisePattern? Eeg { get; }

    /// <summary>Pattern of the MEG rows, or null where the term is absent from MEG.</summary>
    NoisePattern? Meg { get; }

    /// <summary>Power density by which the patterns are multiplied.</summary>
    /// <param name="frequency">Frequency [Hz].</param>
    NoisePower At(double frequency);

    /// <summary>Frequencies [Hz] between which the table behind the term stands; null where it needs none.</summary>
    /// <param name="eeg">True for EEG, false for MEG.</param>
    (double From, double To)? Known(bool eeg) => null;

    /// <summary>Frequencies [Hz] at which the power has kinks.</summary>
    IReadOnlyList<double> Breakpoints { get; }
}

/// <summary>Power density of a term at one frequency.</summary>
/// <param name="Eeg">Factor of the EEG pattern's covariance [1/Hz]; may be negative for a remainder.</param>
/// <param name="Meg">Factor of the MEG pattern's covariance [1/Hz].</param>
/// <param name="Cross">Factor of the covariance between EEG and MEG [1/Hz]; 0 where the modalities are independent.</param>
public readonly record struct NoisePower(double Eeg, double Meg, double Cross);

/// <summary>Diagonal plus low rank: the covariance of a term at unit power.</summary>
/// <param name="Diagonal">Variance of each row [V^2, T^2 or (T/m)^2 at unit power], or null.</param>
/// <param name="Factor">rows x columns, row by row: covariance Factor Factor'; or null. EEG and MEG factors of one term share their columns.</param>
/// <param name="Columns">Columns of the factor.</param>
public sealed record NoisePattern(double[]? Diagonal, double[]? Factor, int Columns);
