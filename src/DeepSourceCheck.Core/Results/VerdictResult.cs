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

    /// <summary>Whether the median count fits the session; null without a session.</summary>
    public bool? FitsSession { get; init; }

    /// <summary>Mean power over what is not known, as a fraction; null without unknowns.</summary>
    public double? Assurance { get; init; }

    /// <summary>How its trials average; null without a protocol or a count.</summary>
    public AveragingResult? Averaging { get; init; }

    /// <summary>The chain for the dipole at the median: what `why` prints.</summary>
    public IReadOnlyList<DerivedNumber> Chain { get; init; } = [];
}
