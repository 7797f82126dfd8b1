using System.Globalization;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Core.Detection;

/// <summary>One-sided detection at known topography and covariance: N = ((z_(1-alpha/K) + z_power) / d)^2, rounded up, d^2 = P.</summary>
/// <remarks>
/// K looks are searched (Bonferroni): K = 1 only where channel, latency and polarity are fixed beforehand. A locked artefact of relative level sqrt(R) may mimic the response or oppose
/// it: d becomes sqrt(P) - sqrt(R), so that neither error rate grows (derived here, worst case).
/// Source: Kay 1998, Fundamentals of Statistical Signal Processing II, chapter 4 (from memory); (z_a + z_b)^2 = 13.0 for alpha .01 and power .9.
/// </remarks>
public sealed class DetectionRule : ITargetRule
{
    private readonly double _alpha, _power, _looks, _sum;

    /// <param name="alpha">False-alarm rate over all looks, 0 to 1.</param>
    /// <param name="power">Probability of detection, 0 to 1.</param>
    /// <param name="looks">Independent looks, at least 1.</param>
    public DetectionRule(double alpha, double power, double looks)
    {
        _alpha = alpha;
        _power = power;
        _looks = looks;
        ThresholdZ = Normal.InvCDF(0, 1, 1 - alpha / looks);
        _sum = ThresholdZ + Normal.InvCDF(0, 1, power);
    }

    /// <summary>z_(1-alpha/K), without unit.</summary>
    public double ThresholdZ { get; }

    /// <inheritdoc/>
    public string Name => Names.Detection;

    /// <inheritdoc/>
    public string Description => string.Create(CultureInfo.InvariantCulture,
        $"detected at alpha {_alpha:0.#####}, power {_power:0.###}, {_looks:0.#} {(_looks == 1 ? "look" : "looks")}, topography and covariance known");

    /// <summary>Probability of detecting a response of power SNR <paramref name="power"/> (one trial) in <paramref name="trials"/> trials.</summary>
    public double PowerOf(double power, double trials) => Normal.CDF(0, 1, Math.Sqrt(trials * power) - ThresholdZ);

    /// <inheritdoc/>
    public double EffectivePower(double power, double artefact, double inverseVariance = double.NaN)
    {
        if (artefact == 0)
        {
            return power;                                       // no square root on the common path: counts stay exact
        }

        double d = Math.Max(0, Math.Sqrt(power) - Math.Sqrt(artefact));
        return d * d;
    }

    /// <inheritdoc/>
    public double Trials(double effectivePower) => _sum * _sum / effectivePower;

    /// <inheritdoc/>
    public double? Probability(double power, double artefact, double trials) => PowerOf(EffectivePower(power, artefact), trials);

    /// <inheritdoc/>
    public double SmallestScale(double power, double artefact, long sessionTrials) =>
        (_sum / Math.Sqrt(sessionTrials) + Math.Sqrt(artefact)) / Math.Sqrt(power);

    /// <inheritdoc/>
    public IReadOnlyList<DerivedNumber> Chain(double power, double artefact, double inverseVariance = double.NaN)
    {
        var lines = new List<DerivedNumber>
        {
            new("alpha", "false-alarm rate over all looks", _alpha, "", "", "target.detection.alpha", null),
            new("K", "independent looks", _looks, "", "", "target.detection.looks", null),
            new("power", "probability of detection", _power, "", "", "target.detection.power", null),
            new("za", "normal quantile of 1 - alpha/K", ThresholdZ, "", "quantile(1 - alpha / K)", "standard normal distribution", Grade.Derived),
            new("zb", "normal quantile of the power", _sum - ThresholdZ, "", "quantile(power)", "standard normal distribution", Grade.Derived),
        };
        if (artefact > 0)
        {
            lines.Add(new("R", "(locked artefact / noise of one trial)^2", artefact, "", "", "responses.locked_artefact", null));
        }

        double? count = TrialCount.Ceiling(Trials(EffectivePower(power, artefact)));
        string d = artefact > 0 ? "(sqrt(P) - sqrt(R))^2" : "P";
        lines.Add(new("N", "accepted trials", count ?? double.PositiveInfinity, "", $"ceil((za + zb)^2 / {d})", "Kay 1998 II, ch. 4", Grade.Memory));
        return lines;
    }
}
