namespace DeepSourceCheck.Core.Studies;

/// <summary>What the session affords.</summary>
public sealed record Protocol
{
    /// <summary>Stimuli per second [1/s].</summary>
    public required double Rate { get; init; }

    /// <summary>Share of trials that are rejected.</summary>
    public double RejectedFraction { get; init; }

    /// <summary>Recording time [s].</summary>
    public double? Session { get; init; }

    /// <summary>Preparation [s].</summary>
    public double? Preparation { get; init; }

    /// <summary>Breaks [s].</summary>
    public double? Breaks { get; init; }

    /// <summary>Width [s] over which each stimulus is moved at random about its regular time, or null.</summary>
    public double? IntervalJitter { get; init; }

    /// <summary>Conditions that share the session.</summary>
    public int Conditions { get; init; } = 1;

    /// <summary>Replications of each condition.</summary>
    public int Replications { get; init; } = 1;

    /// <summary>What a study of several people asks; null where one person is planned for.</summary>
    public PeopleChoice? People { get; init; }
}
