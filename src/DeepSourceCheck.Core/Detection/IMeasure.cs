using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>A way to read one number from all channels. Percentiles, rules and reports never know which.</summary>
public interface IMeasure
{
    /// <summary>EEG, MEG or both.</summary>
    Modality Modality { get; }

    /// <summary>Name in results.</summary>
    string Name { get; }

    /// <summary>Power per squared moment [1/(A m)^2] of eight dipoles in the direction that was asked last.</summary>
    /// <param name="signals">Channels of the block.</param>
    Vector512<double> Power(BlockSignals signals);

    /// <summary>Mean of <see cref="Power"/> over the set that was asked with <see cref="BlockSignals.AskSet"/>; may leave another direction asked.</summary>
    /// <param name="signals">Channels of the block.</param>
    Vector512<double> Mean(BlockSignals signals) => MeanOfEach(this, signals);

    /// <summary>The same, direction by direction.</summary>
    /// <param name="measure">Measure.</param>
    /// <param name="signals">Channels of the block.</param>
    static Vector512<double> MeanOfEach(IMeasure measure, BlockSignals signals)
    {
        Vector512<double> sum = default;
        foreach (LaneDirection u in signals.Set)
        {
            signals.Ask(DirectionMode.OfSet, u);
            sum += measure.Power(signals);
        }

        return sum / Vector512.Create((double)signals.Set.Length);
    }

    /// <summary>1/s^2 of what was read in that direction [1/V^2, 1/T^2 or 1/(T/m)^2]; NaN where not defined. By it a locked artefact is scaled.</summary>
    ArtefactScale InverseVariance(BlockSignals signals);
}

/// <summary>1/s^2 of the EEG and the MEG reading of eight dipoles; zero for a modality that is not read.</summary>
public readonly record struct ArtefactScale(Vector512<double> Eeg, Vector512<double> Meg);
