namespace DeepSourceCheck.Core.Results;

/// <summary>How the trials of a verdict average: regularly repeated trials are not independent.</summary>
/// <param name="ShareAtTrials">Effective over accepted trials at the verdict's count, without unit; null where not known.</param>
/// <param name="ShareAtSession">The same with the session's trials; null likewise.</param>
/// <param name="ShareUnjittered">The first without the stated jitter of the interval; null where none is stated.</param>
/// <param name="Reason">Why it is not known; null where it is.</param>
public sealed record AveragingResult(double? ShareAtTrials, double? ShareAtSession, double? ShareUnjittered, string? Reason);
