using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>Mean over channels of the power ratio (Goldenholz et al. 2009, Hum Brain Mapp 30:1077): for maps and comparisons, never for a verdict.</summary>
public sealed class ChannelMeanMeasure(SignalSpace space, Modality modality) : IMeasure
{
    private readonly double _meanInverse = (modality == Modality.Eeg ? space.EegSd : space.MegSd).Average(s => 1 / (s * s));

    /// <inheritdoc/>
    public Modality Modality => modality;

    /// <inheritdoc/>
    public string Name => Names.ChannelMean;

    /// <inheritdoc/>
    public Vector512<double> Power(BlockSignals signals) => signals.ChannelMean(modality);

    /// <inheritdoc/>
    public Vector512<double> Mean(BlockSignals signals) => signals.MeanChannelMean(modality);

    /// <inheritdoc/>
    public ArtefactScale InverseVariance(BlockSignals signals) =>
        modality == Modality.Eeg ? new(Vector512.Create(_meanInverse), default) : new(default, Vector512.Create(_meanInverse));
}

/// <summary>Largest power ratio over channels: what is read off the best trace.</summary>
public sealed class BestChannelMeasure(SignalSpace space, Modality modality) : IMeasure
{
    private readonly double[] _inverse = [.. (modality == Modality.Eeg ? space.EegSd : space.MegSd).Select(s => 1 / (s * s))];

    /// <inheritdoc/>
    public Modality Modality => modality;

    /// <inheritdoc/>
    public string Name => Names.BestChannel;

    /// <inheritdoc/>
    public Vector512<double> Power(BlockSignals signals) => signals.BestChannel(modality, out _);

    /// <inheritdoc/>
    public Vector512<double> Mean(BlockSignals signals) => signals.MeanBestChannel(modality);

    /// <inheritdoc/>
    public ArtefactScale InverseVariance(BlockSignals signals)
    {
        signals.BestChannel(modality, out Vector512<double> index);
        Vector512<double> chosen = Pick(_inverse, index);
        return modality == Modality.Eeg ? new(chosen, default) : new(default, chosen);
    }

    internal static Vector512<double> Pick(double[] table, Vector512<double> index)
    {
        Span<double> picked = stackalloc double[8];
        for (int lane = 0; lane < picked.Length; lane++)
        {
            picked[lane] = table[(int)index[lane]];
        }

        return Vector512.Create<double>(picked);
    }
}

/// <summary>A named derivation.</summary>
public sealed class DerivationMeasure(SignalSpace space, int index) : IMeasure
{
    private readonly Vector512<double> _inverse = Vector512.Create(1 / (space.DerivationSd[index] * space.DerivationSd[index]));

    /// <summary>Index among the derivations.</summary>
    public int Index => index;

    /// <inheritdoc/>
    public Modality Modality => Modality.Eeg;

    /// <inheritdoc/>
    public string Name => space.Derivations!.Names[index];

    /// <inheritdoc/>
    public Vector512<double> Power(BlockSignals signals) => signals.Derivation(index);

    /// <inheritdoc/>
    public Vector512<double> Mean(BlockSignals signals) => signals.MeanDerivation(index);

    /// <inheritdoc/>
    public ArtefactScale InverseVariance(BlockSignals signals) => new(_inverse, default);
}

/// <summary>Matched filter b' C^-1 b: the bound that no linear combination of channels exceeds. Does not change with the reference.</summary>
public sealed class MatchedFilterMeasure(Modality modality) : IMeasure
{
    /// <inheritdoc/>
    public Modality Modality => modality;

    /// <inheritdoc/>
    public string Name => Names.MatchedFilter;

    /// <inheritdoc/>
    public Vector512<double> Power(BlockSignals signals) => signals.MatchedFilter(modality);

    /// <inheritdoc/>
    public Vector512<double> Mean(BlockSignals signals) => signals.MeanMatchedFilter(modality);

    /// <inheritdoc/>
    public ArtefactScale InverseVariance(BlockSignals signals)
    {
        Vector512<double> unknown = Vector512.Create(double.NaN);
        return modality switch { Modality.Eeg => new(unknown, default), Modality.Meg => new(default, unknown), _ => new(unknown, unknown) };
    }
}

/// <summary>The chosen EEG reading and the best MEG channel together, on their 2 x 2 covariance; named after the EEG reading.</summary>
public sealed class PairMeasure(SignalSpace space, int derivation) : IMeasure
{
    private readonly double[] _eeg = [.. (derivation >= 0 ? space.DerivationSd : space.EegSd).Select(s => 1 / (s * s))];
    private readonly double[] _meg = [.. space.MegSd.Select(s => 1 / (s * s))];

    /// <summary>Index of the derivation, or -1 for the best EEG channel.</summary>
    public int DerivationIndex => derivation;

    /// <inheritdoc/>
    public Modality Modality => Modality.Both;

    /// <inheritdoc/>
    public string Name => derivation >= 0 ? space.Derivations!.Names[derivation] : Names.BestChannel;

    /// <inheritdoc/>
    public Vector512<double> Power(BlockSignals signals) => signals.Pair(derivation);

    /// <inheritdoc/>
    public Vector512<double> Mean(BlockSignals signals) => signals.MeanPair(derivation) ?? IMeasure.MeanOfEach(this, signals);

    /// <inheritdoc/>
    public ArtefactScale InverseVariance(BlockSignals signals)
    {
        Vector512<double> eegIndex = Vector512.Create((double)Math.Max(derivation, 0));
        if (derivation < 0)
        {
            signals.BestChannel(Modality.Eeg, out eegIndex);
        }

        signals.BestChannel(Modality.Meg, out Vector512<double> megIndex);
        return new(BestChannelMeasure.Pick(_eeg, eegIndex), BestChannelMeasure.Pick(_meg, megIndex));
    }
}
