using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>
/// A rule by which a response counts as reached, bound to what is read (<see cref="RuleBinding"/>). It sees one trial's power SNR and, where the study states one, the power of a
/// locked artefact in the same units. More power never needs more trials.
/// </summary>
public interface ITargetRule
{
    /// <summary>Name in results, for instance `amplitude_ratio`.</summary>
    string Name { get; }

    /// <summary>What is asked for, in words with its numbers.</summary>
    string Description { get; }

    /// <summary>Why the rule says nothing of this reading: every figure is null with this reason. Null where it applies.</summary>
    string? Absent => null;

    /// <summary>Why the rule gives no smallest moment although it gives trials; null where it does.</summary>
    string? NoSmallest => null;

    /// <summary>True where <see cref="EffectivePower"/> depends on the noise of the channel that was read, not on powers alone.</summary>
    bool StandsOnNoise => false;

    /// <summary>The artefact-free power SNR of one trial that needs as many trials; 0 when averaging never reaches the target.</summary>
    /// <param name="power">Power SNR of one trial.</param>
    /// <param name="artefact">Artefact power over noise power of the same channel; 0 for none.</param>
    /// <param name="inverseVariance">1/s^2 of the channel that was read [1/V^2]; asked only where <see cref="StandsOnNoise"/>.</param>
    double EffectivePower(double power, double artefact, double inverseVariance = double.NaN);

    /// <summary>Number of trials for an effective power, not rounded where the rule has a closed form; infinite at 0.</summary>
    double Trials(double effectivePower);

    /// <summary>The same where noise varies from trial to trial and the trials are weighted for it, so that the noise power falls by a gain of at least 1, without unit.</summary>
    double WeightedTrials(double effectivePower, double gain) => Trials(gain * effectivePower);

    /// <summary>Probability that so many trials reach the target at a power SNR of one trial; null for rules that know none.</summary>
    /// <param name="power">Power SNR of one trial.</param>
    /// <param name="artefact">Artefact power over noise power of the same channel; 0 for none.</param>
    /// <param name="trials">Accepted trials.</param>
    double? Probability(double power, double artefact, double trials);

    /// <summary>Factor on the moment at which <paramref name="sessionTrials"/> trials reach the target; infinite for a silent direction, NaN where there is none.</summary>
    double SmallestScale(double power, double artefact, long sessionTrials);

    /// <summary>The lines that lead from the power SNR `P` to the trials `N`, for `why`; `N` is among them.</summary>
    /// <param name="power">Power SNR of one trial.</param>
    /// <param name="artefact">Artefact power over noise power; 0 for none.</param>
    /// <param name="inverseVariance">1/s^2 of the channel that was read [1/V^2].</param>
    IReadOnlyList<DerivedNumber> Chain(double power, double artefact, double inverseVariance = double.NaN);
}
