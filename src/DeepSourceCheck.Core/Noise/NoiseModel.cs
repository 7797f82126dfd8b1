using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Noise;

/// <summary>All noise of a study: spectral terms, or measured or flat covariances that replace them, modality by modality.</summary>
public sealed class NoiseModel
{
    /// <summary>The cause of a reading whose noise is a flat figure or a measured covariance.</summary>
    public const string StatedPerTrial = "stated per trial";

    /// <summary>Number of electrodes; 0 without EEG.</summary>
    public required int EegRows { get; init; }

    /// <summary>Number of MEG channels; 0 without MEG.</summary>
    public required int MegRows { get; init; }

    /// <summary>Spectral terms; empty where both modalities are given per trial.</summary>
    public IReadOnlyList<INoiseTerm> Terms { get; init; } = [];

    /// <summary>Operator over the MEG channels that takes the room's spatial terms out, of leadfields (<see cref="ProjectedSource"/>) and noise alike; null for none.</summary>
    public ChannelOperator? MegOperator { get; init; }

    /// <summary>Ranges of frequency [Hz] over which the tables behind a modality's terms stand.</summary>
    /// <param name="eeg">True for EEG, false for MEG.</param>
    public IReadOnlyList<(double From, double To)> Known(bool eeg) =>
        [.. Terms.Where(t => (eeg ? t.Eeg : t.Meg) is not null).Select(t => t.Known(eeg)).OfType<(double, double)>()];

    /// <summary>EEG covariance of one trial [V^2] that replaces the terms, or null.</summary>
    public double[]? EegPerTrial { get; init; }

    /// <summary>MEG covariance of one trial [T^2 or mixed] that replaces the terms, or null.</summary>
    public double[]? MegPerTrial { get; init; }

    /// <summary>Number of independent samples of the EEG covariance; null for exact.</summary>
    public double? EegSamples { get; init; }

    /// <summary>Number of independent samples of the MEG covariance; null for exact.</summary>
    public double? MegSamples { get; init; }

    /// <summary>EEG noise from a recording, one for the band of each response, that replaces the terms; empty for none.</summary>
    public IReadOnlyList<RecordedNoise> EegRecorded { get; init; } = [];

    /// <summary>EEG noise from a recording in the band of a response [Hz]; null where there is no recording.</summary>
    public RecordedNoise? Recorded(double low, double high) => EegRecorded.Count == 0 ? null
        : EegRecorded.FirstOrDefault(r => r.Band == new Band(low, high)) ?? throw new ArgumentException($"No response has the band {low} to {high} Hz; the recording was not filtered for it.");

    /// <summary>Covariance of one trial in a band [Hz].</summary>
    public NoiseCovariance InBand(double low, double high)
    {
        RecordedNoise? recorded = Recorded(low, high);
        double[]? eeg = recorded?.Covariance ?? EegPerTrial;
        NoiseCovariance spectral = BandCovariance.Integrate(Terms, EegRows, MegRows, low, high);
        return new NoiseCovariance
        {
            EegRows = EegRows,
            MegRows = MegRows,
            Eeg = eeg ?? spectral.Eeg,
            Meg = MegPerTrial ?? (MegOperator is { } p ? p.ApplyToCovariance(spectral.Meg) : spectral.Meg),
            Cross = eeg is null && MegPerTrial is null ? Projected(spectral.Cross) : null,
            EegSamples = EegSamples,
            EegHeldOut = recorded?.HeldOutShare,
            MegSamples = MegSamples,
        };
    }

    /// <summary>The same noise at the channels as they are, with one more cause.</summary>
    /// <param name="more">The cause, or null for none.</param>
    public NoiseModel Unprojected(INoiseTerm? more) => new()
    {
        EegRows = EegRows,
        MegRows = MegRows,
        Terms = more is null ? Terms : [.. Terms, more],
        EegPerTrial = EegPerTrial,
        EegRecorded = EegRecorded,
        MegPerTrial = MegPerTrial,
        EegSamples = EegSamples,
        MegSamples = MegSamples,
    };

    /// <summary>Variance that each cause adds to one reading in a band.</summary>
    /// <param name="eeg">Weights over the electrodes, or null for a MEG channel.</param>
    /// <param name="megChannel">Index of the MEG channel, used where <paramref name="eeg"/> is null.</param>
    /// <param name="low">Lower edge [Hz].</param>
    /// <param name="high">Upper edge [Hz].</param>
    /// <returns>(cause, variance [V^2, T^2 or (T/m)^2]); a single `stated` one where a per-trial covariance replaces the terms.</returns>
    public IReadOnlyList<(string Cause, double Variance)> Contributions(double[]? eeg, int megChannel, double low, double high)
    {
        double[] weights = eeg ?? MegWeights(megChannel);
        if ((eeg is null ? MegPerTrial : Recorded(low, high)?.Covariance ?? EegPerTrial) is { } stated)
        {
            return [(StatedPerTrial, Quadratic(stated, weights))];
        }

        return [.. Present(eeg is null, weights).Select(t =>
            (t.Term.Name, t.Variance * BandIntegral.Of(f => eeg is null ? t.Term.At(f).Meg : t.Term.At(f).Eeg, low, high, t.Term.Breakpoints)))];
    }

    /// <summary>Power density that each cause adds to one reading at single frequencies.</summary>
    /// <param name="eeg">As for <see cref="Contributions"/>.</param>
    /// <param name="megChannel">As for <see cref="Contributions"/>.</param>
    /// <param name="frequencies">Frequencies [Hz].</param>
    /// <returns>
    /// (cause, power densities [V^2/Hz, T^2/Hz or (T/m)^2/Hz]), in the order of <see cref="Contributions"/>; a remainder may be negative where tables cross.
    /// Empty where a per-trial covariance replaces the terms: its spectrum is not known.
    /// </returns>
    public IReadOnlyList<(string Cause, double[] Power)> Spectra(double[]? eeg, int megChannel, IReadOnlyList<double> frequencies)
    {
        if (eeg is null ? MegPerTrial is not null : EegPerTrial is not null || EegRecorded.Count > 0)
        {
            return [];
        }

        return [.. Present(eeg is null, eeg ?? MegWeights(megChannel)).Select(t =>
            (t.Term.Name, (double[])[.. frequencies.Select(f => t.Variance * (eeg is null ? t.Term.At(f).Meg : t.Term.At(f).Eeg))]))];
    }

    // The terms that a modality has, each with the variance of the reading at unit power.
    private IEnumerable<(INoiseTerm Term, double Variance)> Present(bool meg, double[] weights) =>
        from term in Terms
        let pattern = meg ? term.Meg : term.Eeg
        where pattern is not null
        select (term, UnitVariance(pattern, weights));

    private double[] MegWeights(int channel)
    {
        if (MegOperator is { } p)
        {
            return p.Weights(channel);
        }

        var weights = new double[MegRows];
        weights[channel] = 1;
        return weights;
    }

    // C P', electrodes x channels.
    private double[]? Projected(double[]? cross)
    {
        if (cross is null || MegOperator is not { } p)
        {
            return cross;
        }

        double[] turned = p.ApplyToRows(Turned(cross, EegRows, MegRows), EegRows);
        return Turned(turned, MegRows, EegRows);
    }

    private static double[] Turned(double[] matrix, int rows, int columns)
    {
        var result = new double[matrix.Length];
        for (int i = 0; i < rows; i++)
        {
            for (int k = 0; k < columns; k++)
            {
                result[k * rows + i] = matrix[i * columns + k];
            }
        }

        return result;
    }

    /// <summary>w' (D + F F') w, in the unit of the pattern.</summary>
    /// <param name="pattern">Pattern at unit power.</param>
    /// <param name="weights">w, one a row.</param>
    public static double UnitVariance(NoisePattern pattern, double[] weights)
    {
        double sum = 0;
        for (int k = 0; pattern.Diagonal is not null && k < weights.Length; k++)
        {
            sum += weights[k] * weights[k] * pattern.Diagonal[k];
        }

        for (int c = 0; pattern.Factor is not null && c < pattern.Columns; c++)
        {
            double projected = 0;
            for (int k = 0; k < weights.Length; k++)
            {
                projected += weights[k] * pattern.Factor[k * pattern.Columns + c];
            }

            sum += projected * projected;
        }

        return sum;
    }

    private static double Quadratic(double[] covariance, double[] weights)
    {
        int n = weights.Length;
        double sum = 0;
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                sum += weights[i] * weights[j] * covariance[i * n + j];
            }
        }

        return sum;
    }
}
