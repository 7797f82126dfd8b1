using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Detection;

/// <summary>
/// How raw leadfield rows become the channels and filters of one response: referencing, derivations, standard deviations, whiteners. Immutable; shared by all threads.
/// </summary>
public sealed class SignalSpace
{
    /// <summary>A channel whose variance after referencing is below this share of the largest is the reference itself: it carries nothing.</summary>
    private const double ZeroVariance = 1e-24;

    private readonly double _eegKept = 1, _megKept = 1;
    private double[]? _splitSd;

    /// <param name="noise">Noise of one trial in the response's band.</param>
    /// <param name="reference">Referencing of the electrodes; null without EEG.</param>
    /// <param name="derivations">Derivations from the unreferenced electrodes; null without.</param>
    /// <param name="channels">MEG channels; empty without MEG.</param>
    public SignalSpace(NoiseCovariance noise, ChannelOperator? reference, ChannelOperator? derivations, IReadOnlyList<MegChannel> channels)
        : this(noise, reference, derivations, [.. channels.Select(c => c.Name)], [.. channels.Select(c => c.Kind)])
    {
    }

    /// <param name="noise">Noise of one trial in the response's band.</param>
    /// <param name="reference">Referencing of the electrodes; null without EEG.</param>
    /// <param name="derivations">Derivations from the unreferenced electrodes; null without.</param>
    /// <param name="megNames">Names of the MEG channels.</param>
    /// <param name="megKinds">Kinds of the MEG channels.</param>
    public SignalSpace(
        NoiseCovariance noise, ChannelOperator? reference, ChannelOperator? derivations, IReadOnlyList<string> megNames, IReadOnlyList<CoilKind> megKinds)
    {
        MegNames = megNames;
        MegKinds = megKinds;
        if (reference is not null)
        {
            Reference = reference;
            Derivations = derivations;
            int n = reference.Outputs;
            double[] covariance = reference.ApplyToCovariance(noise.Eeg);
            double top = Enumerable.Range(0, n).Max(k => covariance[k * n + k]);
            EegChannels = [.. Enumerable.Range(0, n).Where(k => covariance[k * n + k] > ZeroVariance * top)];
            EegSd = [.. EegChannels.Select(k => Math.Sqrt(covariance[k * n + k]))];
            EegNames = [.. EegChannels.Select(k => reference.Names[k])];
            EegWhitener = Whitener.Of(covariance, n);
            EegCorrection = noise.EegHeldOut ?? Correction(noise.EegSamples, EegWhitener.Rank);
            _eegKept = noise.EegHeldOut ?? Kept(noise.EegSamples, EegWhitener.Rank);
            if (derivations is not null)
            {
                double[] d = derivations.ApplyToCovariance(noise.Eeg);
                DerivationSd = [.. Enumerable.Range(0, derivations.Outputs).Select(k => Math.Sqrt(Math.Max(0, d[k * derivations.Outputs + k])))];
            }
        }

        int m = noise.MegRows;
        if (m > 0)
        {
            MegSd = [.. Enumerable.Range(0, m).Select(k => Math.Sqrt(noise.Meg[k * m + k]))];
            MegWhitener = Whitener.Of(noise.Meg, m);
            MegCorrection = Correction(noise.MegSamples, MegWhitener.Rank);
            _megKept = Kept(noise.MegSamples, MegWhitener.Rank);
        }

        if (noise.Cross is { } cross && reference is not null && m > 0)
        {
            int n = reference.Outputs;
            double[] eeg = reference.ApplyToCovariance(noise.Eeg);
            double[] between = reference.ApplyToRows(cross, m);
            var joint = new double[(n + m) * (n + m)];
            for (int i = 0; i < n; i++)
            {
                Array.Copy(eeg, i * n, joint, i * (n + m), n);
                for (int k = 0; k < m; k++)
                {
                    joint[i * (n + m) + n + k] = joint[(n + k) * (n + m) + i] = between[i * m + k];
                }
            }

            for (int k = 0; k < m; k++)
            {
                Array.Copy(noise.Meg, k * m, joint, (n + k) * (n + m) + n, m);
            }

            JointWhitener = Whitener.Of(joint, n + m);
            ChannelCorrelation = Correlation([.. EegChannels.Select(k => between.AsSpan(k * m, m).ToArray())], EegSd, MegSd);
            if (derivations is not null)
            {
                double[] d = derivations.ApplyToRows(cross, m);
                DerivationCorrelation = Correlation([.. Enumerable.Range(0, derivations.Outputs).Select(k => d.AsSpan(k * m, m).ToArray())], DerivationSd, MegSd);
            }
        }
    }

    /// <summary>Referencing; null without EEG.</summary>
    public ChannelOperator? Reference { get; }

    /// <summary>Derivations; null without.</summary>
    public ChannelOperator? Derivations { get; }

    /// <summary>Referenced channels that carry something: their indices among the electrodes.</summary>
    public int[] EegChannels { get; } = [];

    /// <summary>Names of <see cref="EegChannels"/>.</summary>
    public IReadOnlyList<string> EegNames { get; } = [];

    /// <summary>Noise standard deviation of <see cref="EegChannels"/> after referencing [V].</summary>
    public double[] EegSd { get; private set; } = [];

    /// <summary>Noise standard deviation of each derivation [V].</summary>
    public double[] DerivationSd { get; private set; } = [];

    /// <summary>Whitener of all referenced electrodes; null without EEG.</summary>
    public Whitener? EegWhitener { get; private set; }

    /// <summary>Factor on the EEG filter's power for a covariance from finitely many samples: of the formula below, or held out where it was shrunk; 1 for an exact one.</summary>
    public double EegCorrection { get; } = 1;

    /// <summary>Noise standard deviation of each MEG channel [T or T/m].</summary>
    public double[] MegSd { get; private set; } = [];

    /// <summary>Names of the MEG channels.</summary>
    public IReadOnlyList<string> MegNames { get; }

    /// <summary>Kinds of the MEG channels.</summary>
    public IReadOnlyList<CoilKind> MegKinds { get; }

    /// <summary>Whitener of the MEG channels; null without MEG.</summary>
    public Whitener? MegWhitener { get; private set; }

    /// <summary>Factor on the MEG filter's power for a covariance from finitely many samples.</summary>
    public double MegCorrection { get; } = 1;

    /// <summary>Whitener of electrodes and MEG channels together; null where their noise is independent.</summary>
    public Whitener? JointWhitener { get; private set; }

    /// <summary>Correlation of noise between <see cref="EegChannels"/> and MEG channels, row by row; null where independent.</summary>
    public double[]? ChannelCorrelation { get; private set; }

    /// <summary>Correlation of noise between derivations and MEG channels, row by row; null where independent.</summary>
    public double[]? DerivationCorrelation { get; private set; }

    /// <summary>Number of independent rows of a modality: the rank of its covariance.</summary>
    public int Rank(Modality modality) => modality switch
    {
        Modality.Eeg => EegWhitener?.Rank ?? 0,
        Modality.Meg => MegWhitener?.Rank ?? 0,
        _ => JointWhitener?.Rank ?? (EegWhitener?.Rank ?? 0) + (MegWhitener?.Rank ?? 0),
    };

    /// <summary>Share of the ideal power that a filter keeps which was built from finitely many samples: the second factor of the corrections; of both, the larger.</summary>
    public double KeptByFilter(Modality modality) => modality switch
    {
        Modality.Eeg => _eegKept,
        Modality.Meg => _megKept,
        _ => Math.Max(_eegKept, _megKept),
    };

    /// <summary>Standard deviations [T or T/m] by which MEG rows are scaled before directions are split; those of <see cref="MegSd"/> but in a space that stands on a spectrum: what is read must not turn the directions.</summary>
    public double[] SplitSd => _splitSd ?? MegSd;

    /// <summary>True where signals are measured against the noise as a filter in time sees it that is matched to a known waveform.</summary>
    public bool IsSpectral => _splitSd is not null;

    /// <summary>
    /// Weights of the pair of an EEG channel (or derivation) and a MEG channel: of its quadratic form (u x)^2 + (w (y - r x))^2 in readings x, y over their noise, r the correlation
    /// table's entry. Row by row as the correlations; null where u = 1 and w = 1/sqrt(1 - r^2).
    /// </summary>
    public (double U, double W)[]? ChannelPairs { get; private set; }

    /// <summary>The same for derivations.</summary>
    public (double U, double W)[]? DerivationPairs { get; private set; }

    /// <summary>The same channels against other noise.</summary>
    /// <param name="seen">The noise.</param>
    internal SignalSpace Against(SpectralNoise seen)
    {
        var copy = (SignalSpace)MemberwiseClone();
        copy._splitSd = MegSd;
        copy.EegSd = seen.EegSd;
        copy.DerivationSd = seen.DerivationSd;
        copy.MegSd = seen.MegSd;
        copy.EegWhitener = seen.EegWhitener;
        copy.MegWhitener = seen.MegWhitener;
        copy.JointWhitener = seen.JointWhitener;
        copy.ChannelCorrelation = seen.ChannelPairs?.Correlation;
        copy.ChannelPairs = seen.ChannelPairs?.Weights;
        copy.DerivationCorrelation = seen.DerivationPairs?.Correlation;
        copy.DerivationPairs = seen.DerivationPairs?.Weights;
        return copy;
    }

    /// <summary>
    /// What remains of the filter's power [share, without unit] when the covariance came from nu independent samples of p channels: the inverse is too large by nu/(nu-p-1), and a filter made from it keeps
    /// (nu-p+2)/(nu+1) of the ideal power. Source: Reed, Mallett and Brennan 1974, IEEE Trans Aerosp Electron Syst 10:853 (from memory).
    /// </summary>
    /// <param name="samples">nu, or null for an exact covariance.</param>
    /// <param name="rank">p.</param>
    public static double Correction(double? samples, int rank) =>
        samples is { } nu ? (nu - rank - 1) / nu * Kept(nu, rank) : 1;

    private static double Kept(double? samples, int rank) => samples is { } nu ? (nu - rank + 2) / (nu + 1) : 1;

    private static double[] Correlation(IReadOnlyList<double[]> rows, double[] rowSd, double[] columnSd) =>
        [.. rows.SelectMany((row, i) => row.Select((c, k) => c / (rowSd[i] * columnSd[k])))];
}
