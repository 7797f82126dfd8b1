namespace DeepSourceCheck.Report.Answers;

/// <summary>How a count stands against the session.</summary>
public enum Outcome
{
    /// <summary>The median count is at most the session's.</summary>
    Fits,

    /// <summary>More trials than the session affords, at most ten million.</summary>
    TooLong,

    /// <summary>Above ten million trials, or not reachable by averaging.</summary>
    OutOfReach,

    /// <summary>There is no count, and a reason: a silent direction, or a split that is not defined.</summary>
    Silent,

    /// <summary>The rule says nothing of this reading, and a reason stands beside it.</summary>
    DoesNotApply,

    /// <summary>The study states no session.</summary>
    NoSession,
}
