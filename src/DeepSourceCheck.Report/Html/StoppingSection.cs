using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Html;

/// <summary>When to stop and how fast to stimulate: planned analyses with their bounds, and the best rate of an amplitude-rate curve.</summary>
internal static class StoppingSection
{
    public static void Write(Markup html, Assessment assessment)
    {
        Stopping(html, assessment);
        Rate(html, assessment);
    }

    private static void Stopping(Markup html, Assessment assessment)
    {
        if (!Verdicts(assessment).Any(v => v.Verdict.Stopping is not null))
        {
            return;
        }

        HtmlReport.Section(html, "stopping", "When to stop");
        html.Element("p", "The average is tested at each planned analysis and the recording may end where it passes the bound, in standard deviations of the average at that point; the bounds keep the stated rate of false alarms over all analyses. "
            + "Unplanned looks do not: four at 0.05 each raise it to 0.13. Where no bound is passed by the last analysis, nothing was detected, and that is no evidence of absence.", "class", "small");
        foreach ((ResponseResult response, RegionResult region, VerdictResult verdict) in Verdicts(assessment))
        {
            if (verdict.Stopping is not { } plan)
            {
                continue;
            }

            html.Element("h3", $"{response.Response.Name}, {region.Region}, {RegionAnswer.Words(verdict.Modality)}", "class", "ruled");
            string fits = plan.FitsSession switch { true => "; the most fit the session", false => "; the most do not fit the session", null => "" };
            html.Element("p", $"{Names.Of(plan.Spending)} spending: trials {ProtocolWords.Planned(plan)}; without a response {Say.Count((long)Math.Ceiling(plan.ExpectedWithout))} expected{fits}.");
            HtmlReport.Table(html, $"Planned analyses, {region.Region}, {RegionAnswer.Words(verdict.Modality)}",
                ["analysis", "trials", "bound", "false alarms spent", "stops here", "stops here without a response"],
                plan.Rows.Select((row, k) => (IReadOnlyList<string>)
                [
                    Say.Count(k + 1), Say.Trials(row.Trials), Say.Significant(row.Bound, 4), Say.Two(row.Spent), Say.Chance(row.Stops), Say.Chance(row.StopsWithout),
                ]),
                ["n", "n", "n", "n", "n", "n"]);
        }

        html.CloseLine();
    }

    private static void Rate(Markup html, Assessment assessment)
    {
        (ResponseResult Response, RegionResult Region, VerdictResult Verdict)[] rates = [.. Verdicts(assessment).Where(v => v.Verdict.Rate is not null)];
        if (rates.Length == 0)
        {
            return;
        }

        HtmlReport.Section(html, "rate", "How fast to stimulate");
        html.Element("p", "Recording is shortest where amplitude squared times rate is largest on the stated curve. Comfort, adaptation and local limits of exposure decide beside it, and neighbours of the best rate cost little.", "class", "small");
        HtmlReport.Table(html, "Stated and best rate",
            ["response", "region", "", "rule", "stated, 1/s", "best, 1/s", "amplitude at best over stated", "trials at best", "minutes at best", "minutes saved"],
            rates.Select(v => (IReadOnlyList<string>)
            [
                v.Response.Response.Name, v.Region.Region, RegionAnswer.Words(v.Verdict.Modality), Say.RuleKey(v.Verdict.Rule), Say.Stated(v.Verdict.Rate!.Stated), Say.Significant(v.Verdict.Rate.Best, 3),
                Say.Two(v.Verdict.Rate.Amplitude), Say.Trials(v.Verdict.Rate.Trials), v.Verdict.Rate.Minutes is { } m ? Say.Minutes(m) : "", v.Verdict.Rate.Saved is { } s ? Say.Minutes(s) : "",
            ]),
            ["", "", "", "", "n", "n", "n", "n", "n", "n"]);
        foreach (string name in rates.Where(v => v.Verdict.Rate!.Overlaps).Select(v => v.Response.Response.Name).Distinct())
        {
            html.Element("p", $"{name}: at the best rate the analysis window is longer than the interval between stimuli, and responses overlap in it.");
        }

        html.CloseLine();
    }

    private static IEnumerable<(ResponseResult Response, RegionResult Region, VerdictResult Verdict)> Verdicts(Assessment assessment) =>
        from response in assessment.Responses
        from region in response.Regions
        from verdict in region.Verdicts
        select (response, region, verdict);
}
