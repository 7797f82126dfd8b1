using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Detection;

/// <summary>From a stated target and what is read to the rule that counts trials.</summary>
public static class RuleBinding
{
    /// <summary>Binds a target to a reading.</summary>
    /// <param name="target">As stated.</param>
    /// <param name="reading">What is read.</param>
    public static ITargetRule Of(TargetChoice target, RuleReading reading) => target switch
    {
        AmplitudeRatioChoice a => new AmplitudeRatioRule(a.Ratio),
        DetectionChoice d => new DetectionRule(d.Alpha, d.Power, d.Looks),
        _ => throw new InvalidOperationException($"no rule for {target.GetType().Name} on {reading.Measure}"),
    };
}
