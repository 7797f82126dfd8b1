using System.Runtime.CompilerServices;
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
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public Vector512<double> Power(BlockSignals signals) => signals.ChannelMean(modality);

    /// <inheritdoc/>
    public Vector512<double> Mean(BlockSignals signals) => signals.MeanChannelMean(modality);

    /// <inheritdoc/>
    public ArtefactScale InverseVariance(BlockSignals signals) =>
        modality == Modality.Eeg ? new(Vector512.Create(_meanInverse), default) : new(default, Vector512.Create(_meanInverse));
}
