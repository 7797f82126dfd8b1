namespace DeepSourceCheck.Core.Results;

/// <summary>How many people a study needs, against the trials of each.</summary>
/// <param name="Rows">One a number of trials, rising; the session's among them.</param>
/// <param name="SessionTrials">Trials that the session affords each person; null without a session.</param>
/// <param name="Unlimited">People (of two groups, in each) however many trials each gives; null beyond what can be counted, as where people are alike and need no more than chance asks.</param>
/// <param name="PowerOfStated">Probability that the stated participants find the effect at the session's trials; null without either.</param>
public sealed record PeopleResult(IReadOnlyList<PeopleRow> Rows, long? SessionTrials, long? Unlimited, double? PowerOfStated)
{
    /// <summary>The row of the session's trials, or null.</summary>
    public PeopleRow? AtSession => Rows.FirstOrDefault(row => row.Trials == SessionTrials);
}

/// <summary>People for one number of trials.</summary>
/// <param name="Trials">Accepted trials of each person.</param>
/// <param name="EffectSize">Mean, or difference of means, over the standard deviation of one person's average, without unit.</param>
/// <param name="Participants">People whose recordings are analysed (of two groups, in each); null beyond what can be counted.</param>
/// <param name="Invited">People to invite so that as many are left after drop-out; null likewise.</param>
public sealed record PeopleRow(long Trials, double EffectSize, long? Participants, long? Invited);
