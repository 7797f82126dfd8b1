using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Html;

/// <summary>What else could be active, where the response could be placed, which electrodes carry it: tables by region.</summary>
internal static class AttributionSection
{
    private static readonly string[] Percent = ["5 %", "median", "95 %"];

    /// <summary>The section; nothing where no region has any of the three.</summary>
    public static void Write(Markup html, Assessment assessment)
    {
        (ResponseResult Response, RegionResult Region)[] all = [.. assessment.Responses.SelectMany(r => r.Regions.Select(region => (r, region)))];
        (ResponseResult Response, RegionResult Region)[] shown = [.. all.Where(s => s.Region.Competitors is not null || s.Region.Location is { Bounds.Count: > 0 } || s.Region.Electrodes is not null)];
        if (shown.Length == 0)
        {
            return;
        }

        HtmlReport.Section(html, "attribution", "Could it be something else, and where is it");
        if (shown.Any(s => s.Region.Location is { Bounds.Count: > 0 }))
        {
            html.Element("p", AttributionWords.Located, "class", "small");
            HtmlReport.Table(html, "Location error with the session's trials",
                ["response", "region", "modality", "trials", "direction", "bound, mm", "error, mm", "5 to 95 % of places"],
                shown.SelectMany(s => (s.Region.Location?.Bounds ?? []).Select(b => (IReadOnlyList<string>)
                [
                    s.Response.Response.Name, s.Region.Region, RegionAnswer.Words(b.Modality), Say.Trials(s.Region.Location!.Trials), Say.Direction(s.Region.Location.Direction),
                    b.Bound.P50 is { } bound ? Say.Two(Si.ToMm(bound)) : "unbounded", AttributionWords.Error(b).Replace(" mm", "", StringComparison.Ordinal), AttributionWords.Spread(b),
                ])),
                ["", "", "", "n", "", "n", "n", "n"]);
        }

        if (shown.Any(s => s.Region.Competitors is not null))
        {
            html.Element("p", AttributionWords.Assumed, "class", "small");
        }

        foreach ((ResponseResult response, RegionResult region) in shown)
        {
            if (region.Competitors is { } competitors)
            {
                Competitors(html, $"{response.Response.Name}, {region.Region}", competitors);
            }

            if (region.Electrodes is { } electrodes)
            {
                Electrodes(html, $"{response.Response.Name}, {region.Region}", electrodes);
            }
        }

        html.CloseLine();
    }

    private static void Competitors(Markup html, string what, CompetitorsResult competitors)
    {
        html.Element("h3", $"{what}: with {AttributionWords.Sources(competitors)} active");
        HtmlReport.Table(html, $"Detection that is left, {what}",
            ["modality", "measure", "power left, dB", "competitors' rms", "target", "trials without", .. Percent.Select(p => $"trials, {p}")],
            competitors.Readings.SelectMany(r => r.Counts.Select(c => (IReadOnlyList<string>)
            [
                RegionAnswer.Words(r.Modality), r.Measure + (r.IsVerdict ? " (verdict)" : ""), r.PowerLeftDb.P50 is { } db ? Say.SignedDecibels(db) : "nothing",
                r.Rms is { } rms ? $"{Say.Two(rms.Value)} {Say.Unit(rms.Unit)} ({rms.Channel})" : "", Say.RuleKey(c.Rule), Say.Trials(c.Without), Say.Trials(c.Trials.P05), Say.Trials(c.Trials.P50), Say.Trials(c.Trials.P95),
            ])),
            ["", "", "n", "n", "", "n", "n", "n", "n"]);
        HtmlReport.Table(html, $"How alike the fields are, {what}",
            ["competitor", "moment", "modality", "angle, degrees (median)", "5 to 95 %", "smallest principal angles", "filter's power left with it alone, dB"],
            competitors.Sources.SelectMany(s => s.Overlaps.Select(o => (IReadOnlyList<string>)
            [
                s.Region, Say.Moment(s.Moment), RegionAnswer.Words(o.Modality), Degrees(o.AngleDeg.P50), $"{Degrees(o.AngleDeg.P05)} to {Degrees(o.AngleDeg.P95)}",
                string.Join(", ", o.PrincipalAnglesDeg.Take(3).Select(a => Degrees(a))), o.PowerLeftDb.P50 is { } db ? Say.SignedDecibels(db) : "nothing",
            ])),
            ["", "n", "", "n", "n", "n", "n"]);
        html.Element("p", "Angle: between the response's field and the patterns that hold 99 % of the competitor's power, in units of the noise; 0 is the same topography, 90 one that a filter tells apart without loss.", "class", "small");
    }

    private static void Electrodes(Markup html, string what, SensorChoiceResult chosen)
    {
        html.Element("h3", $"{what}: which electrodes");
        html.Element("p", "Chosen one by one, each the one that adds most to the mean power of the matched filter over dipoles and directions; none leaves again, so that a set may fall short of the best of its size. Differences between electrodes alone count: the choice does not depend on the reference. Counts are medians.", "class", "small");
        string[] rules = [.. chosen.Steps[0].Trials.Select(t => t.Rule)];
        HtmlReport.Table(html, $"Electrodes in the order of the choice, {what}",
            ["electrodes", "added", "SNR, dB", .. rules.Select(r => $"trials, {Say.RuleKey(r)}")],
            chosen.Steps.Select((s, k) => (IReadOnlyList<string>)[Say.Count(k + 1), s.Electrode, s.SnrDb is { } db ? Say.Decibels(db) : "", .. s.Trials.Select(t => k == 0 ? "" : Say.Trials(t.Trials))]),
            ["n", "", "n", .. rules.Select(_ => "n")]);
        HtmlReport.Table(html, $"Best differences of two electrodes, {what}",
            ["derivation", "SNR, dB", .. rules.Select(r => $"trials, {Say.RuleKey(r)}")],
            chosen.Derivations.Select(p => (IReadOnlyList<string>)[p.Name, p.SnrDb is { } db ? Say.Decibels(db) : "", .. p.Trials.Select(t => Say.Trials(t.Trials))]),
            ["", "n", .. rules.Select(_ => "n")]);
    }

    private static string Degrees(double? angle) => angle is { } a ? Say.Stated(Math.Round(a)) : "-";
}
