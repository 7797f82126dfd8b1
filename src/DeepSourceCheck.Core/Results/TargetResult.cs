namespace DeepSourceCheck.Core.Results;

/// <summary>What one rule asks of one measure.</summary>
/// <param name="Rule">`amplitude_ratio`, `detection`.</param>
/// <param name="Trials">Accepted trials.</param>
/// <param name="Minutes">Recording minutes; null without a protocol.</param>
/// <param name="SmallestMoment">Moment [A m] that the session's trials reach, p50 over dipoles; null without a session or where silent.</param>
/// <param name="SmallestAmplitude">The peak amplitude at that moment, in the unit of the peak; null likewise.</param>
/// <param name="Reason">Why a figure is null; null where none is.</param>
public sealed record TargetResult(
    string Rule, CountPercentiles Trials, Percentiles? Minutes, double? SmallestMoment, double? SmallestAmplitude, string? Reason)
{
    /// <summary>True where the rule says nothing of this reading, for which <see cref="Reason"/> gives the reason.</summary>
    public bool Absent { get; init; }

    /// <summary>Accepted trials where each is weighted by its own noise; null where the study states no spread between trials.</summary>
    public CountPercentiles? Weighted { get; init; }

    /// <summary>Presented trials, accepted and rejected together; null without a protocol.</summary>
    public CountPercentiles? Presented { get; init; }

    /// <summary>Time in the chair [min]: recording of every condition and replication, breaks and preparation; null without a protocol.</summary>
    public Percentiles? ChairMinutes { get; init; }
}
