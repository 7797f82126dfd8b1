using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Detection;

/// <summary>Detection of a sinusoid: power of its bin against 120 neighbouring bins, F(2, 240) with noncentrality N P, P = A^2 T / density in one trial of T seconds; N = lambda / P, rounded up.</summary>
/// <remarks>The magnitude-squared coherence over the trials stands beside it. Source: Dobie and Wilson 1996, Journal of the Acoustical Society of America 100:2236 (from memory).</remarks>
public sealed class SteadyStateRule : DetectionTest
{
    private const double Bins = 120, Above = 2, Below = 2 * Bins;

    /// <param name="alpha">False-alarm rate over all looks, 0 to 1.</param>
    /// <param name="power">Probability of detection, 0 to 1.</param>
    /// <param name="looks">Independent looks, at least 1.</param>
    public SteadyStateRule(double alpha, double power, double looks)
        : base(alpha, power, looks)
    {
        Critical = NoncentralF.Critical(AlphaOfOne, Above, Below);
        Noncentrality = NoncentralF.Noncentrality(Critical, Above, Below, power);
    }

    /// <summary>Critical value of F(2, 240), without unit.</summary>
    public double Critical { get; }

    /// <summary>Noncentrality that exceeds it with the power asked for, without unit.</summary>
    public double Noncentrality { get; }

    /// <summary>Trials by the coherence over the trials, beside the count; null beyond counting.</summary>
    /// <param name="effectivePower">Power SNR of one trial, without unit.</param>
    public long? CoherenceTrials(double effectivePower) => TrialCount.Ceiling(Coherence.Trials(AlphaOfOne, Power, effectivePower));

    private protected override string Known => "power of the bin against 120 neighbours, F(2, 240)";

    /// <inheritdoc/>
    public override double Trials(double effectivePower) => Noncentrality / effectivePower;

    private protected override double PowerOf(double effectivePower, double trials) => NoncentralF.Survival(Critical, Above, Below, trials * effectivePower);

    private protected override double RequiredPower(double trials) => Noncentrality / trials;

    private protected override void AddLines(List<DerivedNumber> lines, double effectivePower, string symbol)
    {
        lines.Add(new("d1", "degrees of freedom of the bin", Above, "", "", "amplitude and phase", null));
        lines.Add(new("d2", "degrees of freedom of 120 neighbouring bins", Below, "", "", "Dobie and Wilson 1996", Grade.Memory));
        lines.Add(new("F", "critical value of F(d1, d2)", Critical, "", "upper_F(alpha / K, d1, d2)", "F distribution", Grade.Derived));
        lines.Add(new("lambda", "noncentrality that passes it with that power", Noncentrality, "", "noncentrality_F(F, d1, d2, power)", "noncentral F distribution", Grade.Derived));
        lines.Add(new("N", "accepted trials", Count(Trials(effectivePower)), "", $"ceil(lambda / {symbol})", "Dobie and Wilson 1996", Grade.Memory));
        double coherent = Count(Coherence.Trials(AlphaOfOne, Power, effectivePower));
        if (double.IsFinite(coherent))
        {
            lines.Add(new("Nc", "trials by coherence over the trials, beside it", coherent, "", $"coherence(alpha / K, power, {symbol})", "Dobie and Wilson 1996", Grade.Memory));
        }
    }
}
