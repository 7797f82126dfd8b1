using System.Globalization;
using System.Text;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Report.Answers;

namespace DeepSourceCheck.Report.Tables;

/// <summary>regions.csv: a row per response, region, modality, direction, measure and rule.</summary>
/// <remarks>UTF-8, LF, RFC 4180. Empty cells are figures that do not exist; `reason` says why. Leak columns stand for silent directions.</remarks>
public static class RegionsCsv
{
    /// <summary>The header row.</summary>
    public const string Header =
        "response,region,dipoles,dropped,modality,direction,measure,rule,peak_amplitude,peak_unit,peak_channel,"
        + "snr_db_p05,snr_db_p25,snr_db_p50,snr_db_p75,snr_db_p95,trials_p05,trials_p25,trials_p50,trials_p75,trials_p95,"
        + "minutes_p05,minutes_p25,minutes_p50,minutes_p75,minutes_p95,smallest_nAm,smallest_amplitude,leak,leak_snr_db_p50,leak_trials_p50,presented_p50,chair_minutes_p50,weighted_trials_p50,reason";

    /// <summary>The whole table.</summary>
    public static string Text(Assessment assessment)
    {
        StringBuilder text = new(Header + "\n");
        Rows(text, assessment, "");
        return text.ToString();
    }

    /// <summary>variants.csv: the same table with a first column `variant`; the study itself comes first.</summary>
    public static string Variants(Assessment assessment)
    {
        StringBuilder text = new("variant," + Header + "\n");
        Rows(text, assessment, CsvField.Quote(VariantRow.StudyName) + ",");
        foreach (VariantResult variant in assessment.Variants)
        {
            Rows(text, variant.Assessment, CsvField.Quote(variant.Name) + ",");
        }

        return text.ToString();
    }

    private static void Rows(StringBuilder text, Assessment assessment, string before)
    {
        foreach (ResponseResult response in assessment.Responses)
        {
            foreach (RegionResult region in response.Regions)
            {
                foreach (MeasureResult row in region.Results)
                {
                    foreach (TargetResult target in row.Targets)
                    {
                        text.Append(before).AppendJoin(',', Fields(response.Response.Name, region, row, target)).Append('\n');
                    }
                }
            }
        }
    }

    private static IEnumerable<string> Fields(string response, RegionResult region, MeasureResult row, TargetResult target)
    {
        LeakResult? leak = row.AtLeak;
        TargetResult? leakTarget = leak?.Targets.FirstOrDefault(t => t.Rule == target.Rule);
        CountPercentiles n = target.Trials;
        return
        [
            CsvField.Quote(response), CsvField.Quote(region.Region), Cell(region.Dipoles), Cell(region.Dropped),
            Names.Of(row.Modality), Names.Of(row.Direction), CsvField.Quote(row.Measure), CsvField.Quote(target.Rule),
            Cell(row.Peak?.Value), row.Peak?.Unit ?? "", CsvField.Quote(row.Peak?.Channel ?? ""),
            .. Cells(row.SnrDb), Cell(n.P05), Cell(n.P25), Cell(n.P50), Cell(n.P75), Cell(n.P95), .. Cells(target.Minutes),
            Cell(target.SmallestMoment is { } q ? Si.ToNanoAmpereMetres(q) : null), Cell(target.SmallestAmplitude),
            Cell(leak?.Leak), Cell(leak?.SnrDb.P50), Cell(leakTarget?.Trials.P50),
            Cell(target.Presented?.P50), Cell(target.ChairMinutes?.P50), Cell(target.Weighted?.P50),
            CsvField.Quote(string.Join("; ", new[] { row.Reason, target.Reason }.OfType<string>().Distinct())),
        ];
    }

    private static IEnumerable<string> Cells(Percentiles? p) =>
        p is null ? ["", "", "", "", ""] : [Cell(p.P05), Cell(p.P25), Cell(p.P50), Cell(p.P75), Cell(p.P95)];

    private static string Cell(double? value) =>
        value is { } v && double.IsFinite(v) ? (v + 0.0).ToString(CultureInfo.InvariantCulture) : "";

    private static string Cell(long? value) => value?.ToString(CultureInfo.InvariantCulture) ?? "";
}
