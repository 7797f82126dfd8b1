using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>The answer for one modality and rule.</summary>
public sealed record VerdictResult
{
    /// <summary>EEG, MEG or both.</summary>
    public required Modality Modality { get; init; }

    /// <summary>Rule.</summary>
    public required string Rule { get; init; }

    /// <summary>Measure that the verdict stands on.</summary>
    public required string Measure { get; init; }

    /// <summary>Direction that the verdict stands on.</summary>
    public required DirectionName Direction { get; init; }

    /// <summary>Plain words with the reason.</summary>
    public required string Text { get; init; }

    /// <summary>False where the rule says nothing of this reading: no count, and nothing to compare; <see cref="Text"/> gives the reason.</summary>
    public bool Applies { get; init; } = true;

    /// <summary>Whether the median count fits the session; null without a session.</summary>
    public bool? FitsSession { get; init; }

    /// <summary>Counts at the ends of a stated range of the moment; null where one number is stated.</summary>
    public CountRange? AtMoments { get; init; }

    /// <summary>Probability that the session misses a source of the stated strength, everything else as stated, for the median dipole and direction; null for rules without power or without a session.</summary>
    public double? Missing { get; init; }

    /// <summary>How detection grows with trials; null without a source to detect, and for rules beside a stated detection target.</summary>
    public DetectionCurve? Power { get; init; }

    /// <summary>Mean power over what is not known, as a fraction; null without unknowns.</summary>
    public double? Assurance { get; init; }

    /// <summary>How its trials average; null without a protocol or a count.</summary>
    public AveragingResult? Averaging { get; init; }

    /// <summary>People against trials; null where one person is planned for.</summary>
    public PeopleResult? People { get; init; }

    /// <summary>Analyses planned while trials come in; null where none are.</summary>
    public StoppingResult? Stopping { get; init; }

    /// <summary>What the stated rate costs against the best one; null without an amplitude-rate curve.</summary>
    public RateResult? Rate { get; init; }

    /// <summary>The chain for the dipole at the median: what `why` prints.</summary>
    public IReadOnlyList<DerivedNumber> Chain { get; init; } = [];
}

/// <summary>Trials of the median dipole at both ends of a range of the moment.</summary>
/// <param name="Low">At the low moment; null where out of reach.</param>
/// <param name="High">At the high moment; null where out of reach.</param>
public sealed record CountRange(long? Low, long? High);
