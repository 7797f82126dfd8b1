namespace DeepSourceCheck.Core.Noise;

/// <summary>All noise of a study: spectral terms, or measured or flat covariances that replace them, modality by modality.</summary>
public sealed class NoiseModel
{
    /// <summary>Number of electrodes; 0 without EEG.</summary>
    public required int EegRows { get; init; }

    /// <summary>Number of MEG channels; 0 without MEG.</summary>
    public required int MegRows { get; init; }

    /// <summary>Spectral terms; empty where both modalities are given per trial.</summary>
    public IReadOnlyList<INoiseTerm> Terms { get; init; } = [];

    /// <summary>EEG covariance of one trial [V^2] that replaces the terms, or null.</summary>
    public double[]? EegPerTrial { get; init; }

    /// <summary>MEG covariance of one trial [T^2 or mixed] that replaces the terms, or null.</summary>
    public double[]? MegPerTrial { get; init; }

    /// <summary>Number of independent samples of the EEG covariance; null for exact.</summary>
    public double? EegSamples { get; init; }

    /// <summary>Number of independent samples of the MEG covariance; null for exact.</summary>
    public double? MegSamples { get; init; }

    /// <summary>Covariance of one trial in a band [Hz].</summary>
    public NoiseCovariance InBand(double low, double high)
    {
        NoiseCovariance spectral = BandCovariance.Integrate(Terms, EegRows, MegRows, low, high);
        return new NoiseCovariance
        {
            EegRows = EegRows,
            MegRows = MegRows,
            Eeg = EegPerTrial ?? spectral.Eeg,
            Meg = MegPerTrial ?? spectral.Meg,
            Cross = EegPerTrial is null && MegPerTrial is null ? spectral.Cross : null,
            EegSamples = EegSamples,
            MegSamples = MegSamples,
        };
    }

    /// <summary>Variance that each cause adds to one reading in a band.</summary>
    /// <param name="eeg">Weights over the electrodes, or null for a MEG channel.</param>
    /// <param name="megChannel">Index of the MEG channel, used where <paramref name="eeg"/> is null.</param>
    /// <param name="low">Lower edge [Hz].</param>
    /// <param name="high">Upper edge [Hz].</param>
    /// <returns>(cause, variance [V^2, T^2 or (T/m)^2]); a single `stated` one where a per-trial covariance replaces the terms.</returns>
    public IReadOnlyList<(string Cause, double Variance)> Contributions(double[]? eeg, int megChannel, double low, double high)
    {
        double[] weights = eeg ?? new double[MegRows];
        if (eeg is null)
        {
            weights[megChannel] = 1;
        }

        if ((eeg is null ? MegPerTrial : EegPerTrial) is { } stated)
        {
            return [("stated per trial", Quadratic(stated, weights))];
        }

        var causes = new List<(string, double)>();
        foreach (INoiseTerm term in Terms)
        {
            NoisePattern? pattern = eeg is null ? term.Meg : term.Eeg;
            if (pattern is null)
            {
                continue;
            }

            double power = BandIntegral.Of(f => eeg is null ? term.At(f).Meg : term.At(f).Eeg, low, high, term.Breakpoints);
            causes.Add((term.Name, power * UnitVariance(pattern, weights)));
        }

        return causes;
    }

    /// <summary>Power density [V^2/Hz, T^2/Hz or (T/m)^2/Hz] of one reading; null where it is stated per trial, without a spectrum.</summary>
    /// <param name="eeg">Weights over the electrodes, or null for a MEG channel.</param>
    /// <param name="megChannel">Index of the MEG channel, used where <paramref name="eeg"/> is null.</param>
    public Func<double, double>? Density(double[]? eeg, int megChannel)
    {
        if ((eeg is null ? MegPerTrial : EegPerTrial) is not null)
        {
            return null;
        }

        double[] weights = eeg ?? new double[MegRows];
        if (eeg is null)
        {
            weights[megChannel] = 1;
        }

        (INoiseTerm Term, double Variance)[] parts =
            [.. Terms.Where(t => (eeg is null ? t.Meg : t.Eeg) is not null).Select(t => (t, UnitVariance((eeg is null ? t.Meg : t.Eeg)!, weights)))];
        return f =>
        {
            double sum = 0;
            foreach ((INoiseTerm term, double variance) in parts)
            {
                NoisePower power = term.At(f);
                sum += variance * (eeg is null ? power.Meg : power.Eeg);
            }

            return sum;
        };
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
