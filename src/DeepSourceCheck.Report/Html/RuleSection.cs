using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Html;

/// <summary>Every rule side by side: accepted and presented trials, recording time and time in the chair, by region and modality.</summary>
internal static class RuleSection
{
    public static void Write(Markup html, Assessment assessment)
    {
        if (assessment.Study.Targets.Count == 0 || assessment.Responses.All(r => r.Regions.Count == 0))
        {
            return;
        }

        HtmlReport.Section(html, "rules", "Trials and time by rule");
        html.Element("p", "Medians over the region's dipoles, of what each verdict reads. Readable, detected and quiet are different promises: their counts may differ by a factor of ten on the same data.", "class", "small");
        bool weighted = assessment.Study.Noise?.SpreadBetweenTrials is not null, protocol = assessment.Study.Protocol is not null;
        string[] planned = protocol ? ["presented", "minutes", "in the chair, min", "effective share"] : [], more = weighted ? ["weighted trials"] : [];
        foreach (ResponseResult response in assessment.Responses)
        {
            HtmlReport.Table(html, $"Rules of {response.Response.Name}",
                ["region", "rule", "", "trials", .. more, .. planned, "smallest source, nAm"],
                response.Regions.SelectMany(region => RuleRow.Of(assessment, response.Response, region)
                    .SelectMany(row => row.Answer.Answers.Select(a => Cells(region, response.Response, row, a, weighted, protocol)))),
                ["", "long", "", "n", .. more.Select(_ => "n"), .. planned.Select(_ => "n"), "n"]);
        }

        string[] notes = [.. Notes(assessment)];
        foreach (string note in notes)
        {
            html.Element("p", note, "class", "small");
        }

        html.CloseLine();
    }

    private static IReadOnlyList<string> Cells(RegionResult region, Response response, RuleRow row, ModalityAnswer answer, bool weighted, bool protocol)
    {
        TargetResult? target = answer.HasCount ? answer.Target : null;
        string[] planned = protocol
            ? [Count(target?.Presented?.P50), target?.Minutes?.P50 is { } m ? Say.Minutes(m) : "", target?.ChairMinutes?.P50 is { } h ? Say.Minutes(h) : "", Share(answer.Verdict.Averaging)]
            : [];
        return
        [
            region.Region, $"{Say.Rule(row.Target, response.Measured)} ({row.Promise})", RegionAnswer.Words(answer.Modality),
            target is null ? answer.Outcome == Outcome.Silent ? "silent" : answer.Outcome == Outcome.DoesNotApply ? $"does not apply{(answer.Reason is { } why ? $": {why}" : "")}" : answer.Reason is { } reason && answer.Trials is null ? reason : Say.OutOfReach : Say.Trials(answer.Trials),
            .. weighted ? new[] { Count(target?.Weighted?.P50) } : [], .. planned,
            answer.Target?.SmallestMoment is { } q ? Say.Two(Si.ToNanoAmpereMetres(q)) : "",
        ];
    }

    private static string Count(long? count) => count is { } n ? Say.Trials(n) : "";

    private static string Share(AveragingResult? averaging) => averaging is null ? "" : averaging.ShareAtTrials is { } share ? Say.Two(share) : "not known";

    private static IEnumerable<string> Notes(Assessment assessment)
    {
        if (assessment.Study.Protocol is { } p)
        {
            yield return $"Presented: accepted and rejected trials together. In the chair: the recording of {Rounded(p)}, {Say.SessionMinutes(p.Breaks ?? 0)} min of breaks and {Say.SessionMinutes(p.Preparation ?? 0)} min of preparation. "
                + "Effective share: what N trials at this rate count as, over N; regularly repeated trials are independent only where the noise has no more power at harmonics of the rate than between them.";
        }

        if (assessment.Study.Noise?.SpreadBetweenTrials is { } spread)
        {
            yield return $"Weighted trials: each trial weighted by 1/s² of its own noise, ln s spread by {Say.Stated(spread)} (standard deviation) from trial to trial. The limit of rejection and s belong together: a lower limit lowers both.";
        }

        AveragingResult? unknown = assessment.Responses.SelectMany(r => r.Regions).SelectMany(r => r.Verdicts).Select(v => v.Averaging).FirstOrDefault(a => a?.Reason is not null);
        if (unknown is not null)
        {
            yield return $"Not known: {unknown.Reason}.";
        }
    }

    private static string Rounded(Protocol p) => p.Conditions * p.Replications > 1
        ? $"{Say.Plural(p.Conditions, "condition")} of {Say.Plural(p.Replications, "replication")} each" : "one average";
}
