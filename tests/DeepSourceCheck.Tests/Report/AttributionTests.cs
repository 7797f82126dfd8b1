using System.Text.Json;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Console;
using DeepSourceCheck.Report.Figures;
using DeepSourceCheck.Report.Html;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Tests.Report;

/// <summary>Competitors, location and chosen electrodes say the same in JSON, `why`, page and figure.</summary>
public class AttributionTests
{
    private static JsonElement Region
    {
        get
        {
            using JsonDocument json = JsonDocument.Parse(AssessmentJson.Bytes(AssessmentFixture.WithAttribution()));
            return json.RootElement.GetProperty("responses")[0].GetProperty("regions")[0].Clone();
        }
    }

    [Fact]
    public void Json_HoldsCompetitorsInTheirUnits()
    {
        JsonElement competitors = Region.GetProperty("competitors"), source = competitors.GetProperty("sources")[0], result = competitors.GetProperty("results")[0];
        Assert.Equal("cortex", source.GetProperty("region").GetString());
        Assert.Equal(40.0, source.GetProperty("moment_nAm").GetDouble());
        Assert.Equal(4.0, source.GetProperty("overlap")[0].GetProperty("angle_deg").GetProperty("p50").GetDouble());
        Assert.Equal("uV", result.GetProperty("competitor_rms").GetProperty("unit").GetString());
        Assert.Equal(303, result.GetProperty("targets")[0].GetProperty("trials_without").GetInt64());
        Assert.Equal(450, result.GetProperty("targets")[0].GetProperty("trials").GetProperty("p50").GetInt64());
        Assert.Equal("ceil(9 / P)", result.GetProperty("targets")[0].GetProperty("why")[1].GetProperty("formula").GetString());
        Assert.Equal(JsonValueKind.Null, competitors.GetProperty("results")[1].GetProperty("power_left_db").GetProperty("p50").ValueKind);
    }

    [Fact]
    public void Json_HoldsLocationInMillimetres_AndElectrodesByNumber()
    {
        JsonElement location = Region.GetProperty("location"), chosen = Region.GetProperty("electrode_choice");
        Assert.Equal(2.0, location.GetProperty("results")[0].GetProperty("bound_mm").GetProperty("p50").GetDouble());
        Assert.Equal(8.0, location.GetProperty("results")[0].GetProperty("model_error_mm").GetDouble());
        Assert.False(location.GetProperty("results")[1].GetProperty("localisable").GetBoolean());
        Assert.Equal(92.0, location.GetProperty("head_radius_mm").GetDouble());
        Assert.Equal("E2", chosen.GetProperty("greedy")[1].GetProperty("added").GetString());
        Assert.Equal(2, chosen.GetProperty("greedy")[1].GetProperty("electrodes").GetInt32());
        Assert.Equal("E1-E2", chosen.GetProperty("derivations")[0].GetProperty("derivation").GetString());
    }

    [Fact]
    public void Why_PageAndConsole_SayWhatCompetitorsAndLocationStandOn()
    {
        Assessment a = AssessmentFixture.WithAttribution();
        string why = WhyText.Of(a, a.Responses[0], a.Responses[0].Regions[0], unicode: false).Replace('\n', ' ');
        Assert.Contains("With cortex 40 nAm active, EEG: Cz-mastoids, amplitude ratio; 303 trials without", why, StringComparison.Ordinal);
        Assert.Contains("Location by MEG, given direction: not localisable", why, StringComparison.Ordinal);
        string page = HtmlReport.Text(a, figureFiles: false);
        Assert.Contains("Nothing is projected out", page, StringComparison.Ordinal);
        Assert.Contains("not localisable", page, StringComparison.Ordinal);
        Assert.DoesNotContain("id=\"attribution\"", HtmlReport.Text(AssessmentFixture.Default(), figureFiles: false), StringComparison.Ordinal);
    }

    [Fact]
    public void Figure_ShowsTheTrialsOfEveryNumberOfElectrodes()
    {
        Figure figure = FigureSet.All(AssessmentFixture.WithAttribution()).Single(f => f.Name == "electrodes");
        Assert.Equal("Trials go from 1,200 with 2 electrodes to 200 with 12", figure.Title);
        Assert.Equal(12, figure.Table.Rows.Count);
        Assert.Equal(["12", "E12", "200"], figure.Table.Rows[^1]);
        Assert.DoesNotContain(FigureSet.All(AssessmentFixture.Default()), f => f.Name == "electrodes");
    }

    [Fact]
    public void Milestones_AreDoublingNumbersAndTheLargestSet()
    {
        SensorChoiceResult chosen = AssessmentFixture.WithAttribution().Responses[0].Regions[0].Electrodes!;
        Assert.Equal([(2, 1200L), (4, 600L), (8, 300L), (12, 200L)], AttributionWords.Milestones(chosen, Names.AmplitudeRatio));
        Assert.Empty(AttributionWords.Milestones(chosen, Names.Detection));
    }
}
