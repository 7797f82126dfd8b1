namespace DeepSourceCheck.Core.Results;

/// <summary>What the stated stimulus rate costs against the best one of an amplitude-rate curve.</summary>
/// <param name="Stated">Stimuli per second as stated [1/s].</param>
/// <param name="Best">Rate within the curve at which recording is shortest [1/s].</param>
/// <param name="Amplitude">Amplitude at the best rate over that at the stated one, without unit.</param>
/// <param name="Trials">Accepted trials at the best rate; null where out of reach.</param>
/// <param name="Minutes">Recording at the best rate [min]; null likewise.</param>
/// <param name="Saved">Minutes that the best rate saves against the stated one; null where either is out of reach.</param>
/// <param name="Overlaps">True where the analysis window is longer than the interval at the best rate.</param>
public sealed record RateResult(double Stated, double Best, double Amplitude, long? Trials, double? Minutes, double? Saved, bool Overlaps);
