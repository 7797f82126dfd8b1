using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Html;

/// <summary>The study and its variants side by side: a row each, for every region.</summary>
internal static class VariantSection
{
    private static readonly string[] CellClasses = ["verdict-cell", "n"];

    public static void Write(Markup html, Assessment assessment)
    {
        if (assessment.Variants.Count == 0)
        {
            return;
        }

        HtmlReport.Section(html, "variants", "Variants");
        html.Element("p", "The study with some of its keys changed, everything else alike. Change: SNR of one trial against the study, in dB, of what each verdict reads; 3 dB more halve the trials. Medians over the region's dipoles.", "class", "small");
        foreach (ResponseResult response in assessment.Responses)
        {
            IReadOnlyList<Modality> modalities = [.. response.Regions.SelectMany(r => r.Verdicts).Select(v => v.Modality).Distinct().Order()];
            HtmlReport.Table(html, $"Variants of {response.Response.Name}",
                ["region", "variant", .. modalities.SelectMany(Headings)],
                response.Regions.SelectMany(region => VariantRow.Of(assessment, response, region).Select((row, k) => Cells(region, row, k, modalities))),
                ["", "long", .. modalities.SelectMany(_ => CellClasses)]);
        }

        string[] own = [.. assessment.Variants.SelectMany(v => WarningText.Grouped([.. v.Assessment.Warnings.Except(assessment.Warnings)]).Select(w => $"{v.Name}: {w}"))];
        if (own.Length > 0)
        {
            html.Open("details", "class", "behind").Element("summary", "What to know about the variants");
            HtmlReport.List(html, own);
            html.Close();
        }

        html.CloseLine();
    }

    private static string[] Headings(Modality modality) => [RegionAnswer.Words(modality), "change, dB"];

    private static IReadOnlyList<string> Cells(RegionResult region, VariantRow row, int index, IReadOnlyList<Modality> modalities) =>
    [
        index == 0 ? region.Region : "", row.Name,
        .. modalities.SelectMany(m => new[]
        {
            row.Answer is null ? "not in this variant" : row.Answer.Of(m)?.Line() ?? "not in this variant",
            row.Study is null ? "" : row.Change(m) is { } db ? Say.SignedDecibels(db) : "",
        }),
    ];
}
