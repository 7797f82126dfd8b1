using System.Globalization;

using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Html;

/// <summary>What the model leaves out, then a row a region: dipoles, coverage, split, what to know.</summary>
internal static class LimitSection
{
    public static void Write(Markup html, Assessment assessment)
    {
        HtmlReport.Section(html, "limits", "Limits");
        List<string> texts = [.. assessment.Limits];
        if (assessment.Leadfields?.Details is { } details)
        {
            texts.Insert(0, $"Leadfields: {details}.");
        }

        texts.Add("Ranges cover place in the region and direction only. What is not known (moment, conductivity, noise, position of head and sensors) and differences between people are not in them.");
        HtmlReport.List(html, texts);
        HtmlReport.Table(html, "Limits by region",
            ["region", "dipoles", "refused by the head", "spacing, mm", "volume, mL", "field captured by the array", "weakest over strongest direction", "weakest direction to outward direction, degrees", "undefined or degenerate", "what to know"],
            assessment.Responses.SelectMany(r => r.Regions).DistinctBy(r => r.Region).Select(Cells),
            ["", "n", "n", "n", "n", "n", "n", "n", "n", "long"]);
        RealisticHeads(html, assessment);
        html.CloseLine();
    }

    private static void RealisticHeads(Markup html, Assessment assessment)
    {
        RealisticHeadEffect[] effects = [.. assessment.Responses.SelectMany(r => r.Regions).SelectMany(r => r.RealisticHeads).Distinct()];
        if (effects.Length == 0)
        {
            return;
        }

        html.Element("h3", "What a realistic head changes").Raw("\n");
        html.Element("p", $"{RealisticHead.Meaning}. {RealisticHead.Caution(assessment, effects)} {string.Concat(RealisticHead.Own(assessment).Take(1))}".TrimEnd()).Raw("\n");
        if (RealisticHead.Own(assessment).Count > 1)
        {
            HtmlReport.List(html, [.. RealisticHead.Own(assessment).Skip(1)]);
        }

        IReadOnlyList<string> measures = [.. RealisticHead.Changes(effects[0]).Select(RealisticHead.Words)];
        HtmlReport.Table(html, "What a realistic head changes, by region",
            ["region", .. measures.Select(m => $"{m}, invented head"), .. measures.Select(m => $"{m}, one real head"), "MEG: weakest over strongest direction", "weakest direction to outward direction, degrees"],
            effects.Select(e => (IReadOnlyList<string>)
            [
                e.Region, .. RealisticHead.Changes(e).Select(c => RealisticHead.Change(c.Phantom)), .. RealisticHead.Changes(e).Select(c => RealisticHead.Change(c.RealHead)),
                Say.Two(e.WeakestOverStrongest), Say.Stated(e.WeakestToOutwardDeg),
            ]),
            ["", "n", "n", "n", "n", "n", "n", "n", "n"]);
    }

    private static IReadOnlyList<string> Cells(RegionResult region) =>
    [
        region.Region, Say.Count(region.Dipoles), Say.Count(region.Dropped),
        region.Spacing is { } h ? Say.Stated(Math.Round(Si.ToMm(h), 4)) : "points",
        region.Volume is { } v ? Say.Two(Si.ToMillilitres(v)) : "",
        region.FieldCaptured is { } share ? Say.Percent(share) : "",
        region.Split?.WeakestOverStrongest.P50 is { } w ? Say.Two(w) : "",
        region.Split?.AngleToRadialDeg.P50 is { } angle ? Say.Two(angle) : "",
        region.Split is { } s ? (s.UndefinedDipoles + s.DegenerateDipoles).ToString(CultureInfo.InvariantCulture) : "",
        WarningText.InRow(region.Region, region.Warnings),
    ];
}
