using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>A filter over all channels that was built for a displaced place, another head and an estimated covariance (<see cref="FilterErrors"/>): (w'b)^2/(w' C w), w = C'^-1 b'.</summary>
public sealed class RealisticFilterMeasure(Modality modality) : IMeasure
{
    /// <inheritdoc/>
    public Modality Modality => modality;

    /// <inheritdoc/>
    public string Name => Names.RealisticFilter;

    /// <inheritdoc/>
    public Vector512<double> Power(BlockSignals signals) => signals.RealisticFilter(modality);

    /// <inheritdoc/>
    public ArtefactScale InverseVariance(BlockSignals signals)
    {
        Vector512<double> unknown = Vector512.Create(double.NaN);
        return modality switch { Modality.Eeg => new(unknown, default), Modality.Meg => new(default, unknown), _ => new(unknown, unknown) };
    }
}
