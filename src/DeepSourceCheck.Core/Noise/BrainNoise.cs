namespace DeepSourceCheck.Core.Noise;

/// <summary>
/// Background activity of the brain: independent random dipoles on the cortical shell. One set of sources gives the spatial pattern in EEG and in MEG; the two tables set the powers.
/// </summary>
/// <remarks>
/// EEG and MEG are correlated only at frequencies where the brain dominates the noise of both: above some 60 to 100 Hz scalp EEG is mostly muscle and electrode noise, which must not
/// be turned into MEG brain noise.
/// Source: the random-dipole field, de Munck et al. 1992, IEEE Trans Biomed Eng 39:791 (from memory).
/// </remarks>
public sealed class BrainNoise : INoiseTerm
{
    private readonly LogLogTable _eegTable;
    private readonly LogLogTable _megTable;
    private readonly Func<double, bool> _dominatesBoth;

    /// <param name="eegFactor">Leadfields of the sources at the electrodes, rows x columns, scaled so that the tables' derivation has unit variance; null without EEG.</param>
    /// <param name="megFactor">Leadfields at the MEG channels, scaled so that the tables' magnetometers have unit mean square; null without MEG.</param>
    /// <param name="columns">Number of sources times three.</param>
    /// <param name="eegTable">Amplitude density in the tables' derivation [V/sqrt(Hz)].</param>
    /// <param name="megTable">rms amplitude density over the tables' magnetometers [T/sqrt(Hz)].</param>
    /// <param name="dominatesBoth">Whether brain noise dominates EEG and MEG at a frequency [Hz].</param>
    public BrainNoise(double[]? eegFactor, double[]? megFactor, int columns, LogLogTable eegTable, LogLogTable megTable, Func<double, bool> dominatesBoth)
    {
        Eeg = eegFactor is null ? null : new NoisePattern(null, eegFactor, columns);
        Meg = megFactor is null ? null : new NoisePattern(null, megFactor, columns);
        _eegTable = eegTable;
        _megTable = megTable;
        _dominatesBoth = dominatesBoth;
        Breakpoints = [.. eegTable.Frequencies, .. megTable.Frequencies];
    }

    /// <inheritdoc/>
    public string Name => "brain";

    /// <inheritdoc/>
    public NoisePattern? Eeg { get; }

    /// <inheritdoc/>
    public NoisePattern? Meg { get; }

    /// <inheritdoc/>
    public IReadOnlyList<double> Breakpoints { get; }

    /// <inheritdoc/>
    public (double From, double To)? Known(bool eeg) => eeg ? (_eegTable.KnownFrom, _eegTable.KnownTo) : (_megTable.KnownFrom, _megTable.KnownTo);

    /// <inheritdoc/>
    public NoisePower At(double frequency)
    {
        double e = _eegTable.DensityAt(frequency), m = _megTable.DensityAt(frequency);
        return new(e * e, m * m, Eeg is not null && Meg is not null && _dominatesBoth(frequency) ? e * m : 0);
    }
}
