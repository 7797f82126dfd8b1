using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>
/// A rule by which a response counts as reached. It sees one trial's power SNR and, where the study states one, the power of a locked artefact in the same units.
/// </summary>
public interface ITargetRule
{
    /// <summary>Name in results, for instance `amplitude_ratio`.</summary>
    string Name { get; }

    /// <summary>What is asked for, in words with its numbers.</summary>
    string Description { get; }

    /// <summary>The artefact-free power SNR of one trial that needs as many trials; 0 when averaging never reaches the target.</summary>
    /// <param name="power">Power SNR of one trial.</param>
    /// <param name="artefact">Artefact power over noise power of the same channel; 0 for none.</param>
    double EffectivePower(double power, double artefact);

    /// <summary>Number of trials for an effective power, not rounded; infinite at 0.</summary>
    double Trials(double effectivePower);

    /// <summary>Factor on the moment at which <paramref name="sessionTrials"/> trials reach the target; infinite for a silent direction.</summary>
    double SmallestScale(double power, double artefact, long sessionTrials);

    /// <summary>The lines that lead from the power SNR `P` to the trials `N`, for `why`.</summary>
    /// <param name="power">Power SNR of one trial.</param>
    /// <param name="artefact">Artefact power over noise power; 0 for none.</param>
    IReadOnlyList<DerivedNumber> Chain(double power, double artefact);
}
