using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Report.Answers;

/// <summary>The answer of one region under one response and one rule, in words that report, figures and console share.</summary>
public sealed class RegionAnswer
{
    private readonly Assessment _assessment;

    /// <summary>The answer by the study's first target.</summary>
    public RegionAnswer(Assessment assessment, Response response, RegionResult region)
        : this(assessment, response, region, FirstRule(assessment, region))
    {
    }

    /// <summary>The answer by one rule.</summary>
    public RegionAnswer(Assessment assessment, Response response, RegionResult region, string rule)
    {
        _assessment = assessment;
        Response = response;
        Region = region;
        Rule = rule;
        Answers = [.. region.Verdicts.Where(v => v.Rule == rule).Select(v => new ModalityAnswer(region, v, Averages == 1 ? assessment.Study.Protocol?.Session / 60 : null)).OrderBy(a => a.Modality)];
        Winner = Choose();
    }

    /// <summary>The response.</summary>
    public Response Response { get; }

    /// <summary>The region.</summary>
    public RegionResult Region { get; }

    /// <summary>Key of the rule.</summary>
    public string Rule { get; }

    /// <summary>EEG, MEG, both: those that the study has.</summary>
    public IReadOnlyList<ModalityAnswer> Answers { get; }

    /// <summary>What to record with; null where nothing fits the session.</summary>
    public ModalityAnswer? Winner { get; }

    /// <summary>The answer on which the number of people stands: the recommended one, else the one with the fewest trials, else the first that has people; null where one person is planned for.</summary>
    public ModalityAnswer? ForPeople => Winner is { Verdict.People: not null } ? Winner
        : Answers.Where(a => a.Verdict.People is not null).OrderBy(a => a.Modality == Modality.Both).ThenBy(a => a.Trials ?? long.MaxValue).FirstOrDefault();

    /// <summary>The answer of one modality, or null.</summary>
    public ModalityAnswer? Of(Modality modality) => Answers.FirstOrDefault(a => a.Modality == modality);

    /// <summary>Session length in words: `40 minutes`, or `the session`.</summary>
    public string SessionWords => _assessment.Study.Protocol?.Session is { } s
        ? $"{Say.SessionMinutes(s)} minutes{(Averages > 1 ? $" shared by {Averages} averages" : "")}"
        : "the session";

    // Conditions times replications: so many averages share the session.
    private int Averages => _assessment.Study.Protocol is { } p ? p.Conditions * p.Replications : 1;

    /// <summary>The finding in one sentence, without a final stop.</summary>
    public string Headline()
    {
        ModalityAnswer? eeg = Of(Modality.Eeg);
        ModalityAnswer? meg = Of(Modality.Meg);
        ModalityAnswer[] single = [.. new[] { eeg, meg }.OfType<ModalityAnswer>()];
        if (single.Length == 0)
        {
            return "No verdict: the study has no sensors for this response";
        }

        ModalityAnswer[] reach = [.. single.Where(Reaches).OrderBy(a => a.Trials)];
        ModalityAnswer[] rest = [.. single.Where(a => !Reaches(a))];
        if (reach.Length == 0)
        {
            if (Of(Modality.Both) is { } both && Reaches(both))
            {
                return $"Neither EEG nor MEG alone: together they reach the target {In(both)}";
            }

            return single.Length == 2 && eeg!.Outcome == Outcome.TooLong && meg!.Outcome == Outcome.TooLong
                ? $"Neither EEG nor MEG reaches the target within {SessionWords}"
                : string.Join("; ", single.Select(a => Fails(a, alone: true)));
        }

        string first = $"{Names.Of(reach[0].Modality)} reaches the target {In(reach[0])}";
        return reach.Length == 2 ? $"{first}, {Names.Of(reach[1].Modality)} {In(reach[1])}"
            : rest.Length == 1 ? $"{first}; {Fails(rest[0], alone: false)}"
            : first;
    }

    /// <summary>What to do: `Recommended: EEG.`</summary>
    public string Recommendation()
    {
        if (Winner is { } winner)
        {
            return _assessment.SessionTrials is null ? $"Fewest trials: {Words(winner.Modality)}." : $"Recommended: {Words(winner.Modality)}.";
        }

        return _assessment.SessionTrials is null ? "Recommended: none of these." : "Recommended: none within this session.";
    }

    /// <summary>The reason from the numbers: noise over response in one trial; empty where there is no SNR.</summary>
    public string Reason()
    {
        List<string> parts = [];
        foreach (ModalityAnswer a in Answers.Where(a => a.Modality != Modality.Both))
        {
            if (a.Row?.SnrDb.P50 is { } db)
            {
                double ratio = Math.Pow(10, -db / 20);
                parts.Add(ratio >= 1 ? $"{Say.Two(ratio)} times the response in {Names.Of(a.Modality)}" : $"1/{Say.Two(1 / ratio)} of the response in {Names.Of(a.Modality)}");
            }
        }

        return parts.Count > 0 ? $"In one trial the noise is {string.Join(" and ", parts)}." : "";
    }

    /// <summary>What adding the other modality buys, or empty.</summary>
    public string Joint()
    {
        if (Of(Modality.Both) is not { HasCount: true, Trials: { } both } || Of(Modality.Eeg) is not { } eeg || Of(Modality.Meg) is not { } meg)
        {
            return "";
        }

        ModalityAnswer? best = new[] { eeg, meg }.Where(a => a.HasCount).MinBy(a => a.Trials);
        if (best?.Trials is not { } alone)
        {
            return "";
        }

        string other = best.Modality == Modality.Eeg ? "MEG" : "EEG";
        long saved = alone - both;
        string sure = Of(Modality.Both)?.Verdict.Assurance is { } together && best.Verdict.Assurance is { } single && together > single
            ? $" It raises the assurance from {Say.Assurance(single)} to {Say.Assurance(together)}." : "";
        return (saved > 0 ? $"Adding {other} saves {Say.Count(saved)} of {Say.Plural(alone, "trial")}." : $"Adding {other} saves no trial.") + sure;
    }

    /// <summary>Trials that both modalities together save against the better one alone; null where either count is missing.</summary>
    public long? SavedByBoth => Of(Modality.Both) is { HasCount: true, Trials: { } both }
        && Answers.Where(a => a.Modality != Modality.Both && a.HasCount).Select(a => a.Trials).Min() is { } alone ? Math.Max(0, alone - both) : null;

    /// <summary>EEG, MEG, EEG and MEG together.</summary>
    public static string Words(Modality modality) => modality == Modality.Both ? "EEG and MEG together" : Names.Of(modality);

    private static string FirstRule(Assessment assessment, RegionResult region)
    {
        string wanted = assessment.Study.Targets.Count > 0 ? Names.Of(assessment.Study.Targets[0]) : "";
        return region.Verdicts.Any(v => v.Rule == wanted) ? wanted : region.Verdicts.Count > 0 ? region.Verdicts[0].Rule : wanted;
    }

    private static bool Reaches(ModalityAnswer answer) => answer.Outcome is Outcome.Fits or Outcome.NoSession;

    private string In(ModalityAnswer answer) =>
        answer.Minutes is { } m ? $"in {Say.Minutes(m)} min{(Averages > 1 ? " per average" : "")}" : $"in {Say.Plural(answer.Trials!.Value, "trial")}";

    private string Fails(ModalityAnswer answer, bool alone) => answer.Outcome switch
    {
        Outcome.TooLong => $"{Names.Of(answer.Modality)} does not{(alone ? " reach the target" : "")} within {SessionWords}",
        Outcome.Silent => $"{Names.Of(answer.Modality)} is silent in this direction",
        Outcome.DoesNotApply => $"the rule does not apply to {Names.Of(answer.Modality)}",
        _ => $"{Names.Of(answer.Modality)} is out of reach",
    };

    private ModalityAnswer? Choose()
    {
        ModalityAnswer[] reach = [.. Answers.Where(Reaches)];
        return reach.Where(a => a.Modality != Modality.Both).MinBy(a => a.Trials) ?? reach.FirstOrDefault();
    }
}
