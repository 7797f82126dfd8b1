using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

// SumMeasure.cs - a filter over the channels of one modality beside a single reading of the other.
//   Where the noise of both is independent, the 2 x 2 covariance of the two readings is diagonal and their power ratios add. EEG and MEG noise correlate only where the brain dominates
//   both, and in a sphere not even there (by symmetry).

/// <summary>EEG and MEG together where one of the chosen readings is a filter over channels: the sum of both powers, their noise taken as independent; named after the single reading.</summary>
/// <param name="eeg">The chosen EEG reading.</param>
/// <param name="meg">The chosen MEG reading.</param>
public sealed class SumMeasure(IMeasure eeg, IMeasure meg) : IMeasure
{
    /// <inheritdoc/>
    public Modality Modality => Modality.Both;

    /// <inheritdoc/>
    public string Name => eeg is MatchedFilterMeasure ? meg.Name : eeg.Name;

    /// <summary>The readings, EEG first.</summary>
    public IReadOnlyList<IMeasure> Parts { get; } = [eeg, meg];

    /// <inheritdoc/>
    public Vector512<double> Power(BlockSignals signals) => eeg.Power(signals) + meg.Power(signals);

    /// <inheritdoc/>
    public ArtefactScale InverseVariance(BlockSignals signals) => new(eeg.InverseVariance(signals).Eeg, meg.InverseVariance(signals).Meg);
}
