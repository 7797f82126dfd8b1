namespace DeepSourceCheck.Core.Results;

/// <summary>What ignorance of the inputs does to one region's answers.</summary>
/// <param name="Samples">Draws over the unknowns.</param>
/// <param name="Verdicts">One a verdict, in their order.</param>
/// <param name="First">One a rule, in the study's order: which modality comes first.</param>
public sealed record UnknownsResult(int Samples, IReadOnlyList<VerdictSpread> Verdicts, IReadOnlyList<FirstModality> First);

/// <summary>Spread of one verdict over the unknowns: of the median over places and directions, draw by draw.</summary>
/// <param name="Modality">EEG, MEG or both.</param>
/// <param name="Rule">Rule.</param>
/// <param name="Measure">Measure.</param>
/// <param name="Trials">5, 50 and 95 % of trials; null where a percentile is out of reach.</param>
/// <param name="Minutes">The same in minutes of recording; null without a protocol.</param>
/// <param name="Assurance">Mean over the draws of the probability that the session suffices; null without a session.</param>
/// <param name="Ranking">One an unknown, the one that moves trials most first.</param>
/// <param name="Interaction">Share of the variance of log trials that single unknowns do not explain, 0 to 1; null where it is not defined.</param>
public sealed record VerdictSpread(
    Modality Modality, string Rule, string Measure, Percentiles3<long?> Trials, Percentiles3<double?>? Minutes, double? Assurance,
    IReadOnlyList<UnknownEffect> Ranking, double? Interaction);

/// <summary>5, 50 and 95 %.</summary>
public sealed record Percentiles3<T>(T P05, T P50, T P95);

/// <summary>What one unknown does on its own.</summary>
/// <param name="Unknown">Key of the unknown.</param>
/// <param name="Fewest">Trials at the 5 % point of the counts.</param>
/// <param name="Most">Trials at the 95 % point of the counts; null where out of reach.</param>
/// <param name="AtFewest">Value of the unknown, in the unit of its key, that gives the fewest; null for shifts, whose direction counts.</param>
/// <param name="AtMost">Value that gives the most, in the same unit; null likewise.</param>
/// <param name="LogVariance">Variance of ln trials, without unit.</param>
public sealed record UnknownEffect(string Unknown, long? Fewest, long? Most, double? AtFewest, double? AtMost, double LogVariance);

/// <summary>Which modality needs fewer trials, and what would change that.</summary>
/// <param name="Rule">Rule.</param>
/// <param name="Modality">EEG or MEG; null where neither is reached, or only one modality is in the study.</param>
/// <param name="Share">Share of the draws in which it stays first.</param>
/// <param name="Flip">What would have to change, one sentence.</param>
public sealed record FirstModality(string Rule, Modality? Modality, double Share, string Flip);
