using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Report.Answers;

/// <summary>One row of the comparison of variants: the study itself, or a variant, for one region.</summary>
/// <param name="Name">`the study`, or the variant's name.</param>
/// <param name="Answer">Its answer; null where the variant has no such response or region.</param>
/// <param name="Study">The study's answer, for the change; null in the study's own row.</param>
public sealed record VariantRow(string Name, RegionAnswer? Answer, RegionAnswer? Study)
{
    /// <summary>Name of the study's own row.</summary>
    public const string StudyName = "the study";

    /// <summary>The study first, then its variants, for one region of one response.</summary>
    public static IReadOnlyList<VariantRow> Of(Assessment assessment, ResponseResult response, RegionResult region)
    {
        RegionAnswer study = new(assessment, response.Response, region);
        return
        [
            new(StudyName, study, null),
            .. assessment.Variants.Select(v => new VariantRow(v.Name, Find(v.Assessment, response.Response.Name, region.Region, study.Rule), study)),
        ];
    }

    /// <summary>Change of the median SNR of one trial against the study [dB], of what the verdict reads; null where one of the two has none.</summary>
    public double? Change(Modality modality) =>
        Answer?.Of(modality)?.Row?.SnrDb.P50 is { } here && Study?.Of(modality)?.Row?.SnrDb.P50 is { } there ? here - there : null;

    private static RegionAnswer? Find(Assessment variant, string response, string region, string rule)
    {
        ResponseResult? named = variant.Responses.FirstOrDefault(r => r.Response.Name == response);
        RegionResult? found = named?.Regions.FirstOrDefault(r => r.Region == region);
        return found is null ? null : found.Verdicts.Any(v => v.Rule == rule) ? new(variant, named!.Response, found, rule) : new(variant, named!.Response, found);
    }
}
