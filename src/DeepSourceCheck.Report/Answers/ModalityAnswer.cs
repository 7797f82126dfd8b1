using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Report.Answers;

/// <summary>One verdict with the figures that it stands on.</summary>
public sealed class ModalityAnswer
{
    private readonly double? _sessionMinutes;

    internal ModalityAnswer(RegionResult region, VerdictResult verdict, double? sessionMinutes = null)
    {
        _sessionMinutes = sessionMinutes;
        Verdict = verdict;
        Row = region.Find(verdict.Modality, verdict.Direction, verdict.Measure);
        Target = Row?.Targets.FirstOrDefault(t => t.Rule == verdict.Rule);
        Trials = Target?.Trials.P50;
        Minutes = Target?.Minutes?.P50;
        bool silent = Trials is null && Row is { SnrDb.P50: null };
        Outcome = !verdict.Applies ? Outcome.DoesNotApply
            : silent ? Outcome.Silent
            : Trials is null or > Say.MostTrials ? Outcome.OutOfReach
            : verdict.FitsSession switch { true => Outcome.Fits, false => Outcome.TooLong, null => Outcome.NoSession };
    }

    /// <summary>The verdict.</summary>
    public VerdictResult Verdict { get; }

    /// <summary>EEG, MEG or both.</summary>
    public Modality Modality => Verdict.Modality;

    /// <summary>The row of results, or null where there is none.</summary>
    public MeasureResult? Row { get; }

    /// <summary>The rule's figures, or null.</summary>
    public TargetResult? Target { get; }

    /// <summary>Median count.</summary>
    public long? Trials { get; }

    /// <summary>Median recording minutes; null without a protocol.</summary>
    public double? Minutes { get; }

    /// <summary>Against the session.</summary>
    public Outcome Outcome { get; }

    /// <summary>Why figures are missing, or null.</summary>
    public string? Reason => Target?.Reason ?? Row?.Reason;

    /// <summary>True where a count within reach exists.</summary>
    public bool HasCount => Outcome is Outcome.Fits or Outcome.TooLong or Outcome.NoSession;

    /// <summary>`303 trials, 0.5 min: fits`.</summary>
    public string Line()
    {
        string count = Trials is { } n && HasCount ? Say.Plural(n, "trial") : "";
        string minutes = Minutes is not null ? $", {MinutesWords()} min" : "";
        return Outcome switch
        {
            Outcome.Fits => $"{count}{minutes}: fits",
            Outcome.TooLong => $"{count}{minutes}: does not fit",
            Outcome.NoSession => $"{count}{minutes}",
            Outcome.Silent => "no count: silent in this direction",
            Outcome.DoesNotApply => "does not apply",
            _ => Say.OutOfReach,
        };
    }

    /// <summary>The minutes in words; too many for the session by a digit more where they would read as the session's own.</summary>
    public string MinutesWords() => Minutes is not { } m ? "" : Outcome == Outcome.TooLong && _sessionMinutes is { } session ? Say.MinutesBeyond(m, session) : Say.Minutes(m);

    /// <summary>Why there is no count, in a few words: `silent in this direction`, `does not apply`, `out of reach`.</summary>
    public string NoCount => Outcome switch
    {
        Outcome.Silent => "silent in this direction",
        Outcome.DoesNotApply => "does not apply",
        _ => Say.OutOfReach,
    };

    /// <summary>What is read: the measure; for both together the two readings that are combined.</summary>
    public string Reading() => Modality == Modality.Both && Verdict.Measure != Names.MatchedFilter ? $"{Verdict.Measure} and best MEG channel" : Verdict.Measure;

    /// <summary>`252 to 371 in 5 to 95 % of places`, or empty.</summary>
    public string Range() => HasCount && Target?.Trials is { P05: { } low, P95: var high } && low != high
        ? $"{Say.Count(low)} to {Say.Trials(high)} in 5 to 95 % of {Say.Spread(Verdict)}"
        : "";
}
