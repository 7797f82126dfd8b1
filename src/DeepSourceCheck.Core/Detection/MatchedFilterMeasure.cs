using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>Matched filter b' C^-1 b: the bound that no linear combination of channels exceeds. Does not change with the reference.</summary>
public sealed class MatchedFilterMeasure(Modality modality) : IMeasure
{
    /// <inheritdoc/>
    public Modality Modality => modality;

    /// <inheritdoc/>
    public string Name => Names.MatchedFilter;

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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
