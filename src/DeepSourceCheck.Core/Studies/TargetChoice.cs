namespace DeepSourceCheck.Core.Studies;

/// <summary>One target.</summary>
public abstract record TargetChoice;

/// <summary>Amplitude against residual rms.</summary>
/// <param name="Ratio">Ratio rho, positive.</param>
public sealed record AmplitudeRatioChoice(double Ratio) : TargetChoice;

/// <summary>Detection at a false-alarm rate and power.</summary>
/// <param name="Alpha">False-alarm rate over all looks.</param>
/// <param name="Power">Probability of detecting the response.</param>
/// <param name="Looks">Number K of independent looks that are searched.</param>
/// <param name="Topography">What is known of the field's pattern.</param>
/// <param name="CovarianceEstimated">True: the noise is estimated from the same trials.</param>
public sealed record DetectionChoice(
    double Alpha, double Power, double Looks, Topography Topography = Topography.Known, bool CovarianceEstimated = false) : TargetChoice
{
    /// <summary>Analyses planned while trials come in; null: one, at the end.</summary>
    public StoppingChoice? Stopping { get; init; }
}

/// <summary>What is known beforehand of the pattern of a response over the channels.</summary>
public enum Topography
{
    /// <summary>All of it, with its sign: a one-sided test of one number.</summary>
    Known,

    /// <summary>That it lies in a plane of two patterns, such as those of two tangential dipoles.</summary>
    Plane,

    /// <summary>Nothing: any pattern over the channels counts.</summary>
    Unknown,
}

/// <summary>The F-ratio rule of averaged evoked responses: variance of the average over a window against that of the noise.</summary>
/// <param name="Critical">Critical value, without unit; null where it follows from <paramref name="Alpha"/>.</param>
/// <param name="Alpha">False-alarm rate whose exact critical value is taken; null where <paramref name="Critical"/> is stated.</param>
/// <param name="Power">Probability of passing it; null: the expected ratio equals the critical value.</param>
/// <param name="WindowRms">Rms of the response over the window [V] at the EEG reading of the verdict; null: it follows from the waveform.</param>
/// <param name="Above">Degrees of freedom of the average's variance.</param>
/// <param name="Below">Degrees of freedom of the noise's variance.</param>
public sealed record VarianceRatioChoice(double? Critical, double? Alpha, double? Power, double? WindowRms, double Above, double Below) : TargetChoice;

/// <summary>Residual noise of the EEG average.</summary>
/// <param name="Residual">Rms [V] of what is left in the average.</param>
public sealed record ResidualNoiseChoice(double Residual) : TargetChoice;
