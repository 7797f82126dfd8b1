using DeepSourceCheck.Core.Studies;

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
    public NoiseCovariance InBand(double low, double high) => Weighted(term => BandIntegral.Nodes(low, high, term.Breakpoints));

    /// <summary>Covariance of one trial of a response: over its band, or in the bin at the frequency of a steady-state response.</summary>
    /// <param name="response">The response.</param>
    public NoiseCovariance Of(Response response) => Weighted(term => Nodes(response, term));

    /// <summary>Covariance of one term at unit power, without what is stated per trial.</summary>
    /// <param name="term">One of <see cref="Terms"/>.</param>
    internal NoiseCovariance AtUnitPower(INoiseTerm term)
    {
        NoiseCovariance unit = BandCovariance.Integrate([new UnitPower(term)], EegRows, MegRows, _ => [new BandNode(1, 1)]);
        return new NoiseCovariance
        {
            EegRows = EegRows,
            MegRows = MegRows,
            Eeg = EegPerTrial is null ? unit.Eeg : new double[unit.Eeg.Length],
            Meg = MegPerTrial is null ? unit.Meg : new double[unit.Meg.Length],
            Cross = EegPerTrial is null && MegPerTrial is null ? unit.Cross : null,
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
        Contributions(eeg, megChannel, term => Nodes(response, term));

    // A trial of T seconds resolves bins of 1/T: one at the frequency, with density / T.
    private static IReadOnlyList<BandNode> Nodes(Response response, INoiseTerm term) => response.Steady is { } steady
        ? [new BandNode(steady.Frequency, 1 / steady.Seconds)] : BandIntegral.Nodes(response.Band.Low, response.Band.High, term.Breakpoints);

    private NoiseCovariance Weighted(Func<INoiseTerm, IReadOnlyList<BandNode>> nodes)
    {
        NoiseCovariance spectral = BandCovariance.Integrate(Terms, EegRows, MegRows, nodes);
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
    public IReadOnlyList<(string Cause, double Variance)> Contributions(double[]? eeg, int megChannel, double low, double high) =>
        Contributions(eeg, megChannel, term => BandIntegral.Nodes(low, high, term.Breakpoints));

    private IReadOnlyList<(string Cause, double Variance)> Contributions(double[]? eeg, int megChannel, Func<INoiseTerm, IReadOnlyList<BandNode>> nodes)
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

            double power = nodes(term).Sum(n => n.Weight * (eeg is null ? term.At(n.Frequency).Meg : term.At(n.Frequency).Eeg));
            causes.Add((term.Name, power * UnitVariance(pattern, weights)));
        }

        return causes;
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
