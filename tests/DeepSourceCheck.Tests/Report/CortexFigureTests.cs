using System.Text.Json;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Figures;
using DeepSourceCheck.Report.Html;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Tests.Report;

/// <summary>The cortical comparison as figure, page and JSON show it.</summary>
public class CortexFigureTests
{
    private static readonly Assessment Cortex = AssessmentFixture.OverCortex();

    [Fact]
    public void Title_SaysHowMuchEachModalityFallsOnUprightCortex()
    {
        // From the second to the fifth bin of depth: EEG -11 to -14, MEG -23 to -32.
        Figure figure = CortexFigure.Make(Cortex.Responses[0], "cortex")!;
        Assert.Equal("On upright cortex EEG falls by 3.0 dB, MEG falls by 9.0 dB from 7.5 to 22.5 mm of depth", figure.Title);
        Assert.Contains("bins of fewer than 10 points stand in the table alone", figure.Conditions, StringComparison.Ordinal);
        Assert.Contains("37 more points where the cortex has no clear normal", figure.Conditions, StringComparison.Ordinal);
    }

    [Fact]
    public void Table_HoldsEveryBinModalityAndMeasure()
    {
        Figure figure = CortexFigure.Make(Cortex.Responses[0], "cortex")!;
        Assert.Equal(4 * (6 + 4 + 6), figure.Table.Rows.Count);
        Assert.Contains(figure.Table.Rows, r => r.SequenceEqual(["25 to 30 mm", "4", "MEG", "best-channel", "\u221229.0", "\u221226.0", "\u221224.0"]));
        Assert.Contains(figure.Table.Rows, r => r.SequenceEqual(["75 to 90 degrees", "250", "MEG", "channel-mean", "\u221226.0", "\u221223.0", "\u221221.0"]));
    }

    [Fact]
    public void WithoutCortex_ThereIsNoFigureAndNoSection()
    {
        Assessment plain = AssessmentFixture.Default();
        Assert.Null(CortexFigure.Make(plain.Responses[0], "cortex"));
        Assert.DoesNotContain("id=\"cortex\"", HtmlReport.Text(plain, false), StringComparison.Ordinal);
        Assert.False(FirstRegion(plain).TryGetProperty("by_depth", out _));
    }

    [Fact]
    public void Page_HasTheSectionWithItsNumbers()
    {
        string page = HtmlReport.Text(Cortex, false);
        Assert.Contains("id=\"cortex\"", page, StringComparison.Ordinal);
        Assert.Contains("<td class=\"n\">\u221220.0 (\u221223.0 to \u221218.0)</td>", page, StringComparison.Ordinal);
    }

    [Fact]
    public void Json_HasBinsWithEdgesInTheirUnits()
    {
        JsonElement region = FirstRegion(Cortex);
        JsonElement second = region.GetProperty("by_depth")[1], last = region.GetProperty("by_angle")[5];
        Assert.Equal((5.0, 10.0, 340), (second.GetProperty("from_mm").GetDouble(), second.GetProperty("to_mm").GetDouble(), second.GetProperty("points").GetInt32()));
        Assert.Equal((75.0, 90.0), (last.GetProperty("from_deg").GetDouble(), last.GetProperty("to_deg").GetDouble()));
        JsonElement meg = second.GetProperty("results").EnumerateArray().Single(r => r.GetProperty("modality").GetString() == "MEG" && r.GetProperty("measure").GetString() == "channel-mean");
        Assert.Equal((-26.0, -23.0, -21.0), (Snr(meg, "p25"), Snr(meg, "p50"), Snr(meg, "p75")));
        Assert.Equal(4, region.GetProperty("by_depth_upright").GetArrayLength());
        Assert.Equal(37, region.GetProperty("points_without_normal").GetInt32());

        static double Snr(JsonElement row, string percentile) => row.GetProperty("snr_db").GetProperty(percentile).GetDouble();
    }

    private static JsonElement FirstRegion(Assessment assessment) =>
        JsonDocument.Parse(AssessmentJson.Bytes(assessment)).RootElement.GetProperty("responses")[0].GetProperty("regions")[0];
}
