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
        DetectionChoice d when reading.SteadyState => new SteadyStateRule(d.Alpha, d.Power, d.Looks),
        DetectionChoice { Topography: Topography.Known, CovarianceEstimated: false } d => new DetectionRule(d.Alpha, d.Power, d.Looks),
        DetectionChoice { Topography: Topography.Known } d => new StudentDetectionRule(d.Alpha, d.Power, d.Looks),
        DetectionChoice { CovarianceEstimated: false } d => new SubspaceDetectionRule(d.Alpha, d.Power, d.Looks, Dimensions(d, reading)),
        DetectionChoice d => new HotellingRule(d.Alpha, d.Power, d.Looks, Dimensions(d, reading), d.Topography == Topography.Unknown ? reading.KeptByFilter : 1),
        VarianceRatioChoice v => new VarianceRatioRule(v, reading),
        ResidualNoiseChoice r => new ResidualNoiseRule(r.Residual, reading),
        _ => throw new InvalidOperationException($"no rule for {target.GetType().Name} on {reading.Measure}"),
    };

    // A plane is a plane whatever is read; where nothing is known, every independent row is a dimension.
    private static int Dimensions(DetectionChoice choice, RuleReading reading) => choice.Topography == Topography.Plane ? 2 : reading.Rows;
}
