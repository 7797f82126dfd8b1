using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Html;

/// <summary>How sure the answers are: assurance, spread over the unknowns, which of them matters, what would turn the advice round.</summary>
internal static class UnknownsSection
{
    public static void Write(Markup html, Assessment assessment)
    {
        if (!assessment.Responses.SelectMany(r => r.Regions).Any(r => r.Unknowns is not null))
        {
            return;
        }

        HtmlReport.Section(html, "unknowns", "How sure");
        html.Element("p", "Each draw takes every unknown from its range; its count is the median over places and directions, so that the spread below is that of ignorance alone. "
            + "Assurance: the mean over the draws of the chance that the session suffices; for a rule without power, the share of draws that fit. Ranges are 5 to 95 %. "
            + "Differences between people are not in it.", "class", "small");
        foreach (ResponseResult response in assessment.Responses)
        {
            foreach (RegionResult region in response.Regions.Where(r => r.Unknowns is not null))
            {
                Region(html, assessment, response, region, region.Unknowns!);
            }
        }

        html.CloseLine();
    }

    private static void Region(Markup html, Assessment assessment, ResponseResult response, RegionResult region, UnknownsResult unknowns)
    {
        html.Element("h3", $"{response.Response.Name}, {region.Region}", "class", "ruled");
        foreach (IGrouping<(string Flip, double Share, bool Known), FirstModality> same in unknowns.First.Where(f => f.Flip.Length > 0).GroupBy(f => (f.Flip, f.Share, f.Modality is not null)))
        {
            string share = same.Key.Known ? $" ({string.Join(" and ", same.Select(f => Say.RuleKey(f.Rule)))}; first in {Say.Percent(Math.Round(same.Key.Share, 2))} of {Say.Count(unknowns.Samples)} draws)" : "";
            html.Element("p", $"{char.ToUpperInvariant(same.Key.Flip[0])}{same.Key.Flip[1..]}{share}.");
        }

        HtmlReport.Table(html, $"Spread over the unknowns, {region.Region}",
            ["modality", "target", "measure", "trials, 5 %", "median", "95 %", "assured"],
            unknowns.Verdicts.Select(v => (IReadOnlyList<string>)
            [
                RegionAnswer.Words(v.Modality), Say.RuleKey(v.Rule), v.Measure, Say.Trials(v.Trials.P05), Say.Trials(v.Trials.P50), Say.Trials(v.Trials.P95),
                v.Assurance is { } a ? Say.Assurance(a) : "",
            ]),
            ["", "", "", "n", "n", "n", "n"]);
        HtmlReport.Table(html, $"Each unknown alone, {region.Region}",
            ["modality", "target", "unknown", "range", "trials"],
            unknowns.Verdicts.Where(v => v.Modality != Modality.Both).SelectMany(v => v.Ranking.Select(e => (IReadOnlyList<string>)
            [
                RegionAnswer.Words(v.Modality), Say.RuleKey(v.Rule), UnknownWords.Name(e.Unknown), UnknownWords.Range(e.Unknown, assessment.Study, response.Response), UnknownWords.Trials(e.Fewest, e.Most),
            ])),
            ["", "", "", "", "n"]);
        foreach (VerdictSpread spread in unknowns.Verdicts.Where(v => v.Modality != Modality.Both && v.Rule == unknowns.Verdicts[0].Rule && UnknownWords.Interaction(v).Length > 0))
        {
            html.Element("p", $"{Names.Of(spread.Modality)}: {UnknownWords.Interaction(spread)}", "class", "small");
        }
    }
}
