using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Figures;

namespace DeepSourceCheck.Report.Html;

/// <summary>The cortical comparison: SNR by depth and by source angle, a table each.</summary>
internal static class CortexSection
{
    private static readonly string[] CellClasses = ["n", "n"];

    public static void Write(Markup html, Assessment assessment)
    {
        (ResponseResult Response, RegionResult Region)[] shown =
            [.. assessment.Responses.SelectMany(r => r.Regions.Where(region => region.Profile is not null).Select(region => (r, region)))];
        if (shown.Length == 0)
        {
            return;
        }

        HtmlReport.Section(html, "cortex", "Over the cortex");
        html.Element("p",
            "SNR of one trial in dB, median and in brackets the quartiles over the points of a bin. Each point is a source along the cortex's own normal with the response's moment. Depth: to the nearest bone; "
            + "angle: between the normals of cortex and nearest inner skull, 0 where the cortex lies flat under the skull. Shallow cortex is mostly flat, deep cortex upright: depth alone shows on upright cortex. Normals come from a label volume, smoothed to 1.5 mm or a voxel: single points are rough, medians are not. "
            + "A source of some square centimetres cancels part of itself, which single dipoles do not show.", "class", "small");
        foreach ((ResponseResult response, RegionResult region) in shown)
        {
            Table(html, $"{response.Response.Name}, {region.Region}: depth below the inner skull", "depth, mm", region.Profile!.ByDepth, Si.ToMm);
            Table(html, $"{response.Response.Name}, {region.Region}: depth below the inner skull, upright cortex alone (60 degrees and more)", "depth, mm", region.Profile.UprightByDepth, Si.ToMm);
            Table(html, $"{response.Response.Name}, {region.Region}: angle of the source", "angle, degrees", region.Profile.ByAngle, Si.ToDegrees);
            if (region.Profile.WithoutNormal > 0)
            {
                html.Element("p", $"{Say.Plural(region.Profile.WithoutNormal, "point")} of {region.Region} where the cortex has no clear normal are left out.", "class", "small");
            }
        }

        html.CloseLine();
    }

    private static void Table(Markup html, string label, string bin, IReadOnlyList<ProfileBin> bins, Func<double, double> unit)
    {
        if (bins.Count == 0)
        {
            return;
        }

        html.Element("h3", label);
        HtmlReport.Table(html, label,
            [bin, "points", .. bins[0].Figures.Select(f => $"{Names.Of(f.Modality)} {f.Measure}")],
            bins.Select(b => (IReadOnlyList<string>)[CortexFigure.Edges(b, unit), Say.Count(b.Points), .. b.Figures.Select(f => Cell(f.SnrDb))]),
            [.. CellClasses, .. bins[0].Figures.Select(_ => "n")]);
    }

    private static string Cell(Percentiles p) => p is { P25: { } low, P50: { } median, P75: { } high } ? $"{Say.Decibels(median)} ({Say.Decibels(low)} to {Say.Decibels(high)})" : "silent";
}
