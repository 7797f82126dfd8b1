using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Noise;

/// <summary>All noise of a study: spectral terms, or measured or flat covariances that replace them, modality by modality.</summary>
public sealed class NoiseModel
{
    /// <summary>The cause of a reading whose noise is a flat figure or a measured covariance.</summary>
    public const string StatedPerTrial = "stated per trial";

    /// <summary>The cause of a reading whose noise is a recording.</summary>
    public const string FromRecording = "recorded";

    /// <summary>True for a cause that is all of the noise over the response's band and has no spectrum.</summary>
    /// <param name="cause">Name of a cause.</param>
    public static bool IsWhole(string cause) => cause is StatedPerTrial or FromRecording;

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

    /// <summary>EEG noise from a recording in the band of a response; null where there is no recording.</summary>
    /// <param name="band">The band.</param>
    public RecordedNoise? Recorded(Band band) => EegRecorded.Count == 0 ? null
        : EegRecorded.FirstOrDefault(r => r.Band == band) ?? throw new ArgumentException($"No response has the band {band.Low} to {band.High} Hz; the recording was not filtered for it.", nameof(band));

    /// <summary>True where the EEG noise is stated per trial or recorded: no term has a share in it.</summary>
    public bool EegIsStated => EegPerTrial is not null || EegRecorded.Count > 0;

    /// <summary>EEG covariance of one trial [V^2] that replaces the terms: a stated one whatever the response, a recorded one in the response's band; null where there is none.</summary>
    /// <param name="band">Band of the response.</param>
    public double[]? EegStated(Band band) => Recorded(band)?.Covariance ?? EegPerTrial;

    /// <summary>Covariance of one trial in a band [Hz].</summary>
    public NoiseCovariance InBand(double low, double high) => Weighted(term => BandIntegral.Nodes(low, high, term.Breakpoints), new Band(low, high));

    /// <summary>Covariance of one trial of a response: over its band, or in the bin at the frequency of a steady-state response.</summary>
    /// <param name="response">The response.</param>
    public NoiseCovariance Of(Response response) => Weighted(term => Nodes(response, term), response.Band);

    /// <summary>Covariance of one term at unit power, without what is stated per trial.</summary>
    /// <param name="term">One of <see cref="Terms"/>.</param>
    internal NoiseCovariance AtUnitPower(INoiseTerm term)
    {
        NoiseCovariance unit = BandCovariance.Integrate([new UnitPower(term)], EegRows, MegRows, _ => [new BandNode(1, 1)]);
        return new NoiseCovariance
        {
            EegRows = EegRows,
            MegRows = MegRows,
            Eeg = !EegIsStated ? unit.Eeg : new double[unit.Eeg.Length],
            Meg = MegPerTrial is not null ? new double[unit.Meg.Length] : MegOperator is { } p ? p.ApplyToCovariance(unit.Meg) : unit.Meg,
            Cross = !EegIsStated && MegPerTrial is null ? Projected(unit.Cross) : null,
        };
    }

    private sealed record UnitPower(INoiseTerm Term) : INoiseTerm
    {
        public string Name => Term.Name;

        public NoisePattern? Eeg => Term.Eeg;

        public NoisePattern? Meg => Term.Meg;

        public IReadOnlyList<double> Breakpoints => [];

        public NoisePower At(double frequency) => new(1, 1, 1);
    }

    /// <summary>Variance that each cause adds to one reading in one trial of a response; see the other form.</summary>
    /// <param name="eeg">Weights over the electrodes, or null for a MEG channel.</param>
    /// <param name="megChannel">Index of the MEG channel, used where <paramref name="eeg"/> is null.</param>
    /// <param name="response">The response.</param>
    public IReadOnlyList<(string Cause, double Variance)> Contributions(double[]? eeg, int megChannel, Response response) =>
        Contributions(eeg, megChannel, term => Nodes(response, term), response.Band);

    // A trial of T seconds resolves bins of 1/T: one at the frequency, with density / T.
    private static IReadOnlyList<BandNode> Nodes(Response response, INoiseTerm term) => response.Steady is { } steady
        ? [new BandNode(steady.Frequency, 1 / steady.Seconds)] : BandIntegral.Nodes(response.Band.Low, response.Band.High, term.Breakpoints);

    private NoiseCovariance Weighted(Func<INoiseTerm, IReadOnlyList<BandNode>> nodes, Band band)
    {
        double[]? eeg = EegStated(band);
        NoiseCovariance spectral = BandCovariance.Integrate(Terms, EegRows, MegRows, nodes);
        return new NoiseCovariance
        {
            EegRows = EegRows,
            MegRows = MegRows,
            Eeg = eeg ?? spectral.Eeg,
            Meg = MegPerTrial ?? (MegOperator is { } p ? p.ApplyToCovariance(spectral.Meg) : spectral.Meg),
            Cross = eeg is null && MegPerTrial is null ? Projected(spectral.Cross) : null,
            EegSamples = EegSamples,
            EegHeldOut = Recorded(band)?.HeldOutShare,
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
    /// <returns>(cause, variance [V^2, T^2 or (T/m)^2]); a single one, for which <see cref="IsWhole"/> holds, where a per-trial covariance replaces the terms.</returns>
    public IReadOnlyList<(string Cause, double Variance)> Contributions(double[]? eeg, int megChannel, double low, double high) =>
        Contributions(eeg, megChannel, term => BandIntegral.Nodes(low, high, term.Breakpoints), new Band(low, high));

    private IReadOnlyList<(string Cause, double Variance)> Contributions(double[]? eeg, int megChannel, Func<INoiseTerm, IReadOnlyList<BandNode>> nodes, Band band)
    {
        double[] weights = eeg ?? MegWeights(megChannel);
        if ((eeg is null ? MegPerTrial : EegStated(band)) is { } stated)
        {
            return [(eeg is not null && EegRecorded.Count > 0 ? FromRecording : StatedPerTrial, Quadratic(stated, weights))];
        }

        return [.. Present(eeg is null, weights).Select(t =>
            (t.Term.Name, t.Variance * nodes(t.Term).Sum(n => n.Weight * (eeg is null ? t.Term.At(n.Frequency).Meg : t.Term.At(n.Frequency).Eeg))))];
    }

    /// <summary>Power density that each cause adds to one reading at single frequencies.</summary>
    /// <param name="eeg">As for <see cref="Contributions(double[], int, double, double)"/>.</param>
    /// <param name="megChannel">As for <see cref="Contributions(double[], int, double, double)"/>.</param>
    /// <param name="frequencies">Frequencies [Hz].</param>
    /// <returns>
    /// (cause, power densities [V^2/Hz, T^2/Hz or (T/m)^2/Hz]), in the order of <see cref="Contributions(double[], int, double, double)"/>; a remainder may be negative where tables cross.
    /// Empty where a per-trial covariance replaces the terms: its spectrum is not known.
    /// </returns>
    public IReadOnlyList<(string Cause, double[] Power)> Spectra(double[]? eeg, int megChannel, IReadOnlyList<double> frequencies)
    {
        if (eeg is null ? MegPerTrial is not null : EegIsStated)
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

    /// <summary>Power density [V^2/Hz, T^2/Hz or (T/m)^2/Hz] of one reading; null where it is stated per trial, without a spectrum.</summary>
    /// <param name="eeg">Weights over the electrodes, or null for a MEG channel.</param>
    /// <param name="megChannel">Index of the MEG channel, used where <paramref name="eeg"/> is null.</param>
    public Func<double, double>? Density(double[]? eeg, int megChannel)
    {
        if (eeg is null ? MegPerTrial is not null : EegIsStated)
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
