using System.Globalization;

using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>A test at false-alarm rate alpha over K looks (Bonferroni), whose power grows with trials times power SNR.</summary>
/// <remarks>A locked artefact of relative level sqrt(R) takes the place of as much response, as in <see cref="DetectionRule"/>: d becomes sqrt(P) - sqrt(R).</remarks>
public abstract class DetectionTest : ITargetRule
{
    private Tuple<long, double>? _required;

    /// <param name="alpha">False-alarm rate over all looks, 0 to 1.</param>
    /// <param name="power">Probability of detection, 0 to 1.</param>
    /// <param name="looks">Independent looks, at least 1.</param>
    private protected DetectionTest(double alpha, double power, double looks)
    {
        Alpha = alpha;
        Power = power;
        Looks = looks;
    }

    /// <inheritdoc/>
    public string Name => Names.Detection;

    /// <inheritdoc/>
    public string Description => string.Create(CultureInfo.InvariantCulture,
        $"detected at alpha {Alpha:0.#####}, power {Power:0.###}, {Looks:0.#} {(Looks == 1 ? "look" : "looks")}, {Known}");

    /// <summary>What the test knows and does not know.</summary>
    private protected abstract string Known { get; }

    /// <summary>False-alarm rate over all looks, without unit.</summary>
    private protected double Alpha { get; }

    /// <summary>Probability of detection, without unit.</summary>
    private protected double Power { get; }

    /// <summary>Number of independent looks.</summary>
    private protected double Looks { get; }

    /// <summary>False-alarm rate of one look, without unit.</summary>
    private protected double AlphaOfOne => Alpha / Looks;

    /// <inheritdoc/>
    public double EffectivePower(double power, double artefact, double inverseVariance = double.NaN)
    {
        if (artefact == 0)
        {
            return power;
        }

        double d = Math.Max(0, Math.Sqrt(power) - Math.Sqrt(artefact));
        return d * d;
    }

    /// <inheritdoc/>
    public abstract double Trials(double effectivePower);

    /// <inheritdoc/>
    public double? Probability(double power, double artefact, double trials) => PowerOf(EffectivePower(power, artefact), trials);

    /// <inheritdoc/>
    public double SmallestScale(double power, double artefact, long sessionTrials)
    {
        Tuple<long, double>? known = _required;
        if (known is null || known.Item1 != sessionTrials)
        {
            _required = known = new(sessionTrials, RequiredPower(sessionTrials));
        }

        return (Math.Sqrt(known.Item2) + Math.Sqrt(artefact)) / Math.Sqrt(power);
    }

    /// <inheritdoc/>
    public IReadOnlyList<DerivedNumber> Chain(double power, double artefact, double inverseVariance = double.NaN)
    {
        var lines = new List<DerivedNumber>
        {
            new("alpha", "false-alarm rate over all looks", Alpha, "", "", "target.detection.alpha", null),
            new("K", "independent looks", Looks, "", "", "target.detection.looks", null),
            new("power", "probability of detection", Power, "", "", "target.detection.power", null),
        };
        if (artefact > 0)
        {
            lines.Add(new("R", "(locked artefact / noise of one trial)^2", artefact, "", "", "responses.locked_artefact", null));
        }

        double effective = EffectivePower(power, artefact);
        AddLines(lines, effective, artefact > 0 ? "(sqrt(P) - sqrt(R))^2" : "P");
        return lines;
    }

    /// <summary>Power of the test at an effective power SNR of one trial, without unit.</summary>
    /// <param name="effectivePower">Effective power SNR of one trial.</param>
    /// <param name="trials">Accepted trials.</param>
    private protected abstract double PowerOf(double effectivePower, double trials);

    /// <summary>The effective power SNR of one trial that so many trials detect, without unit; infinite where the test needs more trials in any case.</summary>
    private protected abstract double RequiredPower(double trials);

    /// <summary>Adds the lines from the effective power to `N`.</summary>
    private protected abstract void AddLines(List<DerivedNumber> lines, double effectivePower, string symbol);

    /// <summary>A count as a number of the chain.</summary>
    private protected static double Count(double trials) => TrialCount.Ceiling(trials) ?? double.PositiveInfinity;
}
