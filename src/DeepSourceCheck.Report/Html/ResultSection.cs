using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Console;

namespace DeepSourceCheck.Report.Html;

/// <summary>All figures of every region, and every step from moment to minutes behind each verdict; folded by region.</summary>
internal static class ResultSection
{
    // So many regions stand open.
    private const int OpenRegions = 1;

    public static void Write(Markup html, Assessment assessment)
    {
        HtmlReport.Section(html, "results", "Results by region");
        html.Element("p", "Every measure, direction and rule. Channel-mean is for comparing modalities and maps; no verdict stands on it. Matched-filter is the bound that no combination of channels exceeds, not a plan. In brackets: 5 to 95 % over the region's dipoles, and over directions where the direction is tangential or isotropic.", "class", "small");
        int shown = 0;
        foreach (ResponseResult response in assessment.Responses)
        {
            foreach (RegionResult region in response.Regions)
            {
                Region(html, response, region, open: shown++ < OpenRegions);
            }
        }

        html.CloseLine();
    }

    private static void Region(Markup html, ResponseResult response, RegionResult region, bool open)
    {
        if (open)
        {
            html.Open("details", "class", "fold", "open", "open");
        }
        else
        {
            html.Open("details", "class", "fold");
        }

        html.Open("summary").Text($"{response.Response.Name}, {region.Region}").Element("span", Say.Plural(region.Dipoles, "dipole"), "class", "small").Close();
        foreach (VerdictResult verdict in region.Verdicts)
        {
            html.Element("p", verdict.Text);
        }

        // A single rule needs no column: the verdicts above name it.
        bool rules = region.Results.Any(row => row.Targets.Count > 1);
        string[] rule = rules ? ["rule"] : [], plain = rules ? [""] : [];
        HtmlReport.Table(html, $"Figures of {region.Region}",
            ["modality", "direction", "measure", "peak", "SNR of one trial, dB", .. rule, "trials", "minutes", "smallest source, nAm", "note"],
            region.Results.SelectMany(row => row.Targets.Select(t => Cells(row, t, rules))),
            ["", "", "", "n", "n", .. plain, "n", "n", "n", "long"]);
        Steps(html, region);
        html.CloseLine();
    }

    private static IReadOnlyList<string> Cells(MeasureResult row, TargetResult target, bool rules) =>
    [
        Names.Of(row.Modality), Say.Direction(row.Direction), row.Measure,
        row.Peak is { } p ? $"{Say.Two(p.Value)} {Say.Unit(p.Unit)} at {p.Channel}" : "",
        Spread(row.SnrDb, Say.Decibels), .. rules ? new[] { Say.RuleKey(target.Rule) } : [],
        target.Trials.P50 is { } n ? n > Say.MostTrials ? Say.OutOfReach : $"{Say.Count(n)} ({Say.Trials(target.Trials.P05)} to {Say.Trials(target.Trials.P95)})" : row.SnrDb.P50 is null ? "" : target.Absent ? "does not apply" : Say.OutOfReach,
        target.Trials.P50 <= Say.MostTrials && target.Minutes is { P50: { } } m ? Say.Minutes(m.P50!.Value) : "",
        target.SmallestMoment is { } q ? Say.Two(Si.ToNanoAmpereMetres(q)) : "",
        Note(row, target),
    ];

    private static string Note(MeasureResult row, TargetResult target)
    {
        string reason = string.Join("; ", new[] { row.Reason, target.Reason }.OfType<string>().Distinct());
        if (row.AtLeak is not { } leak)
        {
            return reason;
        }

        long? count = leak.Targets.FirstOrDefault(t => t.Rule == target.Rule)?.Trials.P50;
        return $"silent; at the published leak of {Say.Stated(leak.Leak)}: {(leak.SnrDb.P50 is { } db ? Say.Decibels(db) + " dB" : "no SNR")}, {(count <= Say.MostTrials ? Say.Plural(count!.Value, "trial") : Say.OutOfReach)}";
    }

    private static string Spread(Percentiles p, Func<double, string> write) =>
        p.P50 is { } median ? p is { P05: { } a, P95: { } b } ? $"{write(median)} ({write(a)} to {write(b)})" : write(median) : "";

    private static void Steps(Markup html, RegionResult region)
    {
        VerdictResult[] chains = [.. region.Verdicts.Where(v => v.Chain.Count > 0)];
        if (chains.Length == 0)
        {
            return;
        }

        html.Open("details", "class", "behind").Element("summary", "Every step from moment to minutes, for the dipole at the median");
        foreach (VerdictResult verdict in chains)
        {
            html.Element("h4", $"{RegionAnswer.Words(verdict.Modality)}, {Say.RuleKey(verdict.Rule)}, {verdict.Measure}, {Say.Direction(verdict.Direction)}");
            HtmlReport.Table(html, $"Steps for {RegionAnswer.Words(verdict.Modality)}", ["symbol", "what", "value", "unit", "formula", "source", "grade"],
                verdict.Chain.Select(s => (IReadOnlyList<string>)[s.Symbol, s.Name, WhyText.Exact(s.Value), s.Unit, s.Formula, s.Source, s.Grade is { } g ? Names.Of(g) : ""]),
                ["", "", "n", "", "", "long", ""]);
        }

        html.Close();
    }
}
