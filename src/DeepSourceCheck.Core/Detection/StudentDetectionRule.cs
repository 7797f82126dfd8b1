using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Core.Detection;

/// <summary>One-sided detection at known topography with the noise of the reading estimated from the same N trials: t with N - 1 degrees of freedom and noncentrality sqrt(N P).</summary>
/// <remarks>The smallest N of at least 2 with the power asked for. Source: Johnson, Kotz and Balakrishnan 1995, Continuous Univariate Distributions II, ch. 31 (from memory).</remarks>
public sealed class StudentDetectionRule : DetectionTest
{
    private readonly double _known;

    /// <param name="alpha">False-alarm rate over all looks, 0 to 1/2.</param>
    /// <param name="power">Probability of detection, 0 to 1.</param>
    /// <param name="looks">Independent looks, at least 1.</param>
    public StudentDetectionRule(double alpha, double power, double looks)
        : base(alpha, power, looks)
    {
        double sum = Normal.InvCDF(0, 1, power) - Normal.InvCDF(0, 1, AlphaOfOne);
        _known = sum * sum;
    }

    private protected override string Known => "topography known, noise estimated from the same trials";

    /// <inheritdoc/>
    public override double Trials(double effectivePower) =>
        effectivePower > 0 ? CountSearch.Smallest(n => PowerOf(effectivePower, n), Power, 2, _known / effectivePower) : double.PositiveInfinity;

    private protected override double PowerOf(double effectivePower, double trials) =>
        trials >= 2 ? NoncentralT.Survival(NoncentralT.Critical(AlphaOfOne, trials - 1), trials - 1, Math.Sqrt(trials * effectivePower)) : 0;

    private protected override double RequiredPower(double trials)
    {
        if (trials <= 1)
        {
            return double.PositiveInfinity;
        }

        double delta = NoncentralT.Noncentrality(NoncentralT.Critical(AlphaOfOne, trials - 1), trials - 1, Power);
        return delta * delta / trials;
    }

    private protected override void AddLines(List<DerivedNumber> lines, double effectivePower, string symbol)
    {
        double count = Count(Trials(effectivePower));
        lines.Add(new("N", "accepted trials: the smallest N at which t with N - 1 degrees of freedom and noncentrality sqrt(N P) passes its critical value with that power", count, "",
            $"student(alpha / K, power, {symbol})", "Johnson, Kotz and Balakrishnan 1995 II, ch. 31", Grade.Memory));
        if (double.IsFinite(count))
        {
            lines.Add(new("tc", "critical value of t at that N", NoncentralT.Critical(AlphaOfOne, count - 1), "", "upper_t(alpha / K, N - 1)", "t distribution", Grade.Derived));
            lines.Add(new("delta", "noncentrality at that N", Math.Sqrt(count * effectivePower), "", $"sqrt(N {symbol})", "definition", Grade.Derived));
            lines.Add(new("reached", "power at that N", PowerOf(effectivePower, count), "", "power_t(tc, N - 1, delta)", "noncentral t distribution", Grade.Derived));
        }
    }
}
