namespace DeepSourceCheck.Core.Studies;

/// <summary>One target.</summary>
public abstract record TargetChoice;

/// <summary>Amplitude against residual rms.</summary>
/// <param name="Ratio">Ratio rho, positive.</param>
public sealed record AmplitudeRatioChoice(double Ratio) : TargetChoice;

/// <summary>Detection at known topography and covariance, one-sided.</summary>
/// <param name="Alpha">False-alarm rate over all looks.</param>
/// <param name="Power">Probability of detecting the response.</param>
/// <param name="Looks">Number K of independent looks that are searched.</param>
public sealed record DetectionChoice(double Alpha, double Power, double Looks) : TargetChoice;
