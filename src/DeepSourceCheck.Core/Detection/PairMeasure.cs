using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

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
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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
