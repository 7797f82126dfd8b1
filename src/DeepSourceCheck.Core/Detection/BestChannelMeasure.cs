using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>Largest power ratio over channels: what is read off the best trace.</summary>
public sealed class BestChannelMeasure(SignalSpace space, Modality modality) : IMeasure
{
    private readonly double[] _inverse = [.. (modality == Modality.Eeg ? space.EegSd : space.MegSd).Select(s => 1 / (s * s))];

    /// <inheritdoc/>
    public Modality Modality => modality;

    /// <inheritdoc/>
    public string Name => Names.BestChannel;

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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
