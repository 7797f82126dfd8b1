using System.Globalization;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Detection;

/// <summary>Residual noise of the EEG average at most r: N = (s/r)^2, rounded up, s the noise of one trial at one point.</summary>
/// <remarks>
/// Says how quiet the average is, nothing of the response: it has neither a probability nor a smallest moment. s is that of the channel that was read.
/// Source: Don and Elberling 1994, Journal of the Acoustical Society of America 96:2746 (from memory).
/// </remarks>
public sealed class ResidualNoiseRule(double residual, RuleReading reading) : ITargetRule
{
    /// <inheritdoc/>
    public string Name => Names.ResidualNoise;

    /// <inheritdoc/>
    public string Description => string.Create(CultureInfo.InvariantCulture, $"residual noise {Si.ToMicrovolts(residual) * 1000:0.###} nV");

    /// <inheritdoc/>
    public string? Absent => reading.OnePoint ? null
        : reading.Modality == Modality.Eeg ? "residual_nV is the noise left in one voltage: it holds for derivations and the best EEG channel"
        : "residual_nV is a voltage: it holds for EEG alone";

    /// <inheritdoc/>
    public string? NoSmallest => "the rule asks how quiet the average is: it knows no moment";

    /// <inheritdoc/>
    public bool StandsOnNoise => reading.OnePoint;

    /// <inheritdoc/>
    /// <remarks>(r/s)^2, whatever the response's power, unless it is silent.</remarks>
    public double EffectivePower(double power, double artefact, double inverseVariance = double.NaN) => power > 0 ? residual * residual * inverseVariance : 0;

    /// <inheritdoc/>
    public double Trials(double effectivePower) => 1 / effectivePower;

    /// <inheritdoc/>
    public double? Probability(double power, double artefact, double trials) => null;

    /// <inheritdoc/>
    public double SmallestScale(double power, double artefact, long sessionTrials) => double.NaN;

    /// <inheritdoc/>
    public IReadOnlyList<DerivedNumber> Chain(double power, double artefact, double inverseVariance = double.NaN) =>
    [
        new("res", "residual noise asked for", Si.ToMicrovolts(residual) * 1000, "nV", "", "target.residual_nV", null),
        new("N", "accepted trials", TrialCount.Ceiling(Trials(EffectivePower(power, artefact, inverseVariance))) ?? double.PositiveInfinity, "",
            "ceil((1000 s / res)^2)", "Don and Elberling 1994", Grade.Memory),
    ];
}
