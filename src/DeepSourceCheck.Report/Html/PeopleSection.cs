using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Html;

/// <summary>How many people: participants against the trials of each, by region and modality.</summary>
internal static class PeopleSection
{
    public static void Write(Markup html, Assessment assessment)
    {
        if (assessment.Study.Protocol?.People is not { } people || !assessment.Responses.SelectMany(r => r.Regions).SelectMany(r => r.Verdicts).Any(v => v.People is not null))
        {
            return;
        }

        HtmlReport.Section(html, "people", "How many people");
        html.Element("p", $"{char.ToUpperInvariant(ProtocolWords.Test(people)[0])}{ProtocolWords.Test(people)[1..]}; the moment differs between people by {Say.Stated(people.Spread)} of its mean (standard deviation). "
            + "A person's average of N trials then varies by sb² + sw²/N in units of the moment, sb the spread between people and sw the noise of one trial over the response at the median place: beyond some trials only more people help. "
            + (people.DropOut > 0 ? $"In brackets: how many to invite where {Say.Percent(people.DropOut)} are lost. " : "") + "Differences between people are in no other table.", "class", "small");
        foreach (ResponseResult response in assessment.Responses)
        {
            foreach (RegionResult region in response.Regions.Where(r => r.Verdicts.Any(v => v.People is not null)))
            {
                Region(html, people, response, region);
            }
        }

        html.CloseLine();
    }

    // A column a verdict; rules that read the same noise have the same people and share one.
    private static void Region(Markup html, PeopleChoice people, ResponseResult response, RegionResult region)
    {
        VerdictResult[] verdicts = [.. region.Verdicts.Where(v => v.People is not null).DistinctBy(v => (v.Modality, v.Measure, string.Join(' ', v.People!.Rows.Select(r => r.EffectSize))))];
        bool Alone(VerdictResult v) => verdicts.Count(o => o.Modality == v.Modality) == 1;
        html.Element("h3", $"{response.Response.Name}, {region.Region}", "class", "ruled");
        IReadOnlyList<PeopleRow> rows = verdicts[0].People!.Rows;
        HtmlReport.Table(html, $"People against trials, {region.Region}",
            ["trials of each", .. verdicts.Select(v => $"{ProtocolWords.Counted(people)}, {Names.Of(v.Modality)}{(Alone(v) ? "" : $" ({Say.RuleKey(v.Rule)})")}")],
            [
                .. rows.Select((row, k) => (IReadOnlyList<string>)
                    [row.Trials == verdicts[0].People!.SessionTrials ? $"{Say.Count(row.Trials)} (session)" : Say.Count(row.Trials), .. verdicts.Select(v => Cell(people, v.People!.Rows[k]))]),
                (IReadOnlyList<string>)["without limit", .. verdicts.Select(v => ProtocolWords.Count(v.People!.Unlimited))],
            ],
            ["n", .. verdicts.Select(_ => "n")]);
        if (people.Participants is { } stated && verdicts.Any(v => v.People!.PowerOfStated is not null))
        {
            html.Element("p", $"With {Say.Count(stated)} {ProtocolWords.Counted(people)} at the session's trials the effect is found with power "
                + string.Join(", ", verdicts.Where(v => v.People!.PowerOfStated is not null).Select(v => $"{Say.Chance(v.People!.PowerOfStated!.Value)} ({Names.Of(v.Modality)}{(Alone(v) ? "" : $", {Say.RuleKey(v.Rule)}")})")) + ".");
        }
    }

    private static string Cell(PeopleChoice people, PeopleRow row) =>
        ProtocolWords.Count(row.Participants) + (people.DropOut > 0 && row.Invited is { } invited && invited <= Say.MostTrials ? $" ({Say.Count(invited)})" : "");
}
