using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

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
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public Vector512<double> Power(BlockSignals signals) => signals.Derivation(index);

    /// <inheritdoc/>
    public Vector512<double> Mean(BlockSignals signals) => signals.MeanDerivation(index);

    /// <inheritdoc/>
    public ArtefactScale InverseVariance(BlockSignals signals) => new(_inverse, default);
}
