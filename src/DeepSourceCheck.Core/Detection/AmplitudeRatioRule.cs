using System.Globalization;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Detection;

/// <summary>Amplitude of the average at least rho times its residual rms: N = rho^2 / (P - rho^2 R), rounded up.</summary>
/// <remarks>
/// P is the power SNR of one trial in the response's convention, R the power of a locked artefact over the noise power: averaging does not reduce it, so the target is
/// out of reach where P is at most rho^2 R. Common practice for reading evoked responses (rho = 3), no source.
/// </remarks>
public sealed class AmplitudeRatioRule(double ratio) : ITargetRule
{
    /// <inheritdoc/>
    public string Name => Names.AmplitudeRatio;

    /// <inheritdoc/>
    public string Description => string.Create(CultureInfo.InvariantCulture, $"peak = {ratio:0.###} x residual rms");

    /// <inheritdoc/>
    public double EffectivePower(double power, double artefact, double inverseVariance = double.NaN) => Math.Max(0, power - ratio * ratio * artefact);

    /// <inheritdoc/>
    public double Trials(double effectivePower) => ratio * ratio / effectivePower;

    /// <inheritdoc/>
    /// <remarks>Null: an amplitude that is large enough on average says nothing of how often.</remarks>
    public double? Probability(double power, double artefact, double trials) => null;

    /// <inheritdoc/>
    public double SmallestScale(double power, double artefact, long sessionTrials) =>
        Math.Sqrt((ratio * ratio / sessionTrials + ratio * ratio * artefact) / power);

    /// <inheritdoc/>
    public IReadOnlyList<DerivedNumber> Chain(double power, double artefact, double inverseVariance = double.NaN)
    {
        var lines = new List<DerivedNumber>
        {
            new("rho", "amplitude ratio asked for", ratio, "", "", "target.amplitude_ratio", null),
        };
        if (artefact > 0)
        {
            lines.Add(new("R", "(locked artefact / noise of one trial)^2", artefact, "", "", "responses.locked_artefact", null));
        }

        double effective = EffectivePower(power, artefact);
        string formula = artefact > 0 ? "ceil(rho^2 / (P - rho^2 R))" : "ceil(rho^2 / P)";
        double? count = TrialCount.Ceiling(Trials(effective));
        lines.Add(new("N", "accepted trials", count ?? double.PositiveInfinity, "", formula, "residual rms of N trials is s / sqrt(N)", Grade.Derived));
        return lines;
    }
}
