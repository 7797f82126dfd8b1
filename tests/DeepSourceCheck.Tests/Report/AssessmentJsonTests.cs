using System.Text.Json;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report.Console;
using DeepSourceCheck.Report.Tables;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Report;

public class AssessmentJsonTests
{
    private static JsonElement Parse(Assessment assessment) => JsonDocument.Parse(AssessmentJson.Bytes(assessment)).RootElement;

    private static JsonElement FirstRegion(JsonElement root) => root.GetProperty("responses")[0].GetProperty("regions")[0];

    // Key names and their order: the sample of the results contract (study-file, "Results of assess").
    [Fact]
    public void Json_HasTheContractsKeys()
    {
        JsonElement root = Parse(AssessmentFixture.Default());
        Contains(root, "program", "inputs", "assumptions", "warnings", "responses", "variants");
        Contains(root.GetProperty("program"), "name", "version");
        Contains(root.GetProperty("inputs")[0], "path", "sha256");
        Contains(root.GetProperty("assumptions")[0], "key", "value", "unit", "origin", "source", "grade");
        Contains(root.GetProperty("responses")[0], "name", "regions");
        JsonElement region = FirstRegion(root);
        Contains(region, "region", "dipoles", "dropped", "spacing_mm", "volume_mL", "split", "results", "verdicts", "captured_field_share", "warnings");
        Contains(region.GetProperty("split"), "weakest_over_strongest", "angle_to_radial_deg", "undefined_dipoles");
        Contains(region.GetProperty("split").GetProperty("angle_to_radial_deg"), "p05", "p50", "p95");
        JsonElement result = region.GetProperty("results")[0];
        Contains(result, "modality", "direction", "measure", "peak_amplitude", "snr_db", "targets");
        Contains(result.GetProperty("peak_amplitude"), "value", "unit", "channel");
        Contains(result.GetProperty("snr_db"), "p05", "p25", "p50", "p75", "p95");
        JsonElement target = result.GetProperty("targets")[0];
        Contains(target, "rule", "trials", "minutes", "smallest_nAm");
        Contains(target.GetProperty("trials"), "p05", "p25", "p50", "p75", "p95");
        Contains(target.GetProperty("minutes"), "p05", "p25", "p50", "p75", "p95");
        JsonElement verdict = region.GetProperty("verdicts")[0];
        Contains(verdict, "modality", "rule", "text", "fits_session", "assurance", "measure", "direction", "why");
        Contains(verdict.GetProperty("why")[0], "symbol", "name", "value", "unit", "formula", "source", "grade");
    }

    [Fact]
    public void Json_UnitsAreThoseOfTheKeys()
    {
        JsonElement region = FirstRegion(Parse(AssessmentFixture.Default()));
        Assert.Equal(1.0, region.GetProperty("spacing_mm").GetDouble());
        RelativeAssert.Equal(0.123, region.GetProperty("volume_mL").GetDouble(), 1e-14);
        JsonElement given = Result(region, "EEG", "given", "Cz-mastoids");
        double smallest = given.GetProperty("targets")[0].GetProperty("smallest_nAm").GetDouble();
        // 3.5 nAm sqrt(303/23976): the fixture's amplitude rule inverted.
        RelativeAssert.Equal(3.5 * Math.Sqrt(303.0 / 23976.0), smallest, 1e-12);
        Assert.Equal(303, given.GetProperty("targets")[0].GetProperty("trials").GetProperty("p50").GetInt64());
    }

    [Fact]
    public void Json_SilentDirection_IsNullWithReasonAndLeak()
    {
        JsonElement region = FirstRegion(Parse(AssessmentFixture.Silent()));
        JsonElement silent = Result(region, "MEG", "quasi-radial", "best-channel");
        Assert.Equal(JsonValueKind.Null, silent.GetProperty("snr_db").GetProperty("p50").ValueKind);
        Assert.Equal(JsonValueKind.Null, silent.GetProperty("peak_amplitude").ValueKind);
        Assert.Equal(JsonValueKind.Null, silent.GetProperty("targets")[0].GetProperty("trials").GetProperty("p50").ValueKind);
        Assert.StartsWith("silent", silent.GetProperty("reason").GetString(), StringComparison.Ordinal);
        Assert.StartsWith("silent", silent.GetProperty("targets")[0].GetProperty("reason").GetString(), StringComparison.Ordinal);
        Assert.Equal(0.06, silent.GetProperty("at_leak").GetProperty("leak").GetDouble());
        Assert.True(silent.GetProperty("at_leak").GetProperty("snr_db").GetProperty("p50").GetDouble() < 0);
    }

    [Fact]
    public void Json_WithoutProtocol_HasNullMinutesAndSession()
    {
        JsonElement root = Parse(AssessmentFixture.NoProtocol());
        Assert.Equal(JsonValueKind.Null, root.GetProperty("session_trials").ValueKind);
        JsonElement region = FirstRegion(root);
        Assert.Equal(JsonValueKind.Null, region.GetProperty("results")[0].GetProperty("targets")[0].GetProperty("minutes").ValueKind);
        Assert.Equal(JsonValueKind.Null, region.GetProperty("verdicts")[0].GetProperty("fits_session").ValueKind);
    }

    [Fact]
    public void Json_SessionTrialsOfASteadyStateResponse_StandOnceOrWithEach()
    {
        Assessment a = AssessmentFixture.Default();
        ResponseResult steady = a.Responses[0] with { Response = a.Responses[0].Response with { Steady = new SteadyState(85, 2) }, SessionTrials = 1_080 };
        JsonElement one = Parse(a with { Responses = [steady] }), mixed = Parse(a with { Responses = [steady, a.Responses[0]] });
        Assert.Equal(1_080, one.GetProperty("session_trials").GetInt64());
        Assert.Equal(JsonValueKind.Null, mixed.GetProperty("session_trials").ValueKind);
        Assert.Equal([1_080, 23_976], mixed.GetProperty("responses").EnumerateArray().Select(r => r.GetProperty("session_trials").GetInt64()));
    }

    [Fact]
    public void Json_NonFiniteFigures_AreNull()
    {
        Assessment a = AssessmentFixture.Default();
        RegionResult region = a.Responses[0].Regions[0];
        MeasureResult odd = region.Results[0] with { SnrDb = new(double.NegativeInfinity, double.NaN, -1.5, null, double.PositiveInfinity) };
        JsonElement snr = FirstRegion(Parse(With(a, region with { Results = [odd] }))).GetProperty("results")[0].GetProperty("snr_db");
        Assert.All(new[] { "p05", "p25", "p75", "p95" }, key => Assert.Equal(JsonValueKind.Null, snr.GetProperty(key).ValueKind));
        Assert.Equal(-1.5, snr.GetProperty("p50").GetDouble());
    }

    // Heads that carry every dipole alike leave it out.
    [Fact]
    public void WhatCarriesTheDipoles_StandsInJsonAndWhy_WhereTheHeadTells()
    {
        Assessment a = AssessmentFixture.Default();
        RegionResult plain = a.Responses[0].Regions[0], counted = plain with { Supports = new(1200, 30, 4, 1) };
        JsonElement carried = FirstRegion(Parse(With(a, counted))).GetProperty("dipoles_carried_by");
        Assert.Equal([1200, 30, 4, 1], new[] { "all_nodes", "fewer_nodes", "border_nodes", "element_gradient" }.Select(key => carried.GetProperty(key).GetInt32()));
        Assert.False(FirstRegion(Parse(With(a, plain))).TryGetProperty("dipoles_carried_by", out _));
        string why = WhyText.Of(a, a.Responses[0], counted, unicode: false).ReplaceLineEndings(" ");
        Assert.Contains("1,200 of 1,235 on all nodes around them, 30 on fewer nodes within source tissue (near its border), 4 on nodes of the border itself, 1 on the gradient of their voxel", why, StringComparison.Ordinal);
    }

    [Fact]
    public void Json_Doubles_ReadBackToTheSameBits()
    {
        Assessment a = AssessmentFixture.Default();
        double[] values = [0.1 + 0.2, Math.PI * 1e-28, 1.0 / 3, 5e-324, 1.7976931348623157e308];
        Assessment odd = a with { Assumptions = [new("k", values, "", true, "test", Grade.Seen)] };
        double[] read = [.. Parse(odd).GetProperty("assumptions")[0].GetProperty("value").EnumerateArray().Select(v => v.GetDouble())];
        Assert.Equal(values, read);
    }

    [Theory]
    [InlineData("text", "\"text\"")]
    [InlineData(true, "true")]
    [InlineData(200, "200")]
    [InlineData(5.0, "5")]
    public void Json_AssumptionValue_KeepsItsKind(object value, string raw)
    {
        Assessment a = AssessmentFixture.Default() with { Assumptions = [new("k", value, "", true, "test", null)] };
        Assert.Equal(raw, Parse(a).GetProperty("assumptions")[0].GetProperty("value").GetRawText());
    }

    [Fact]
    public void Json_SameAssessment_SameBytes() =>
        Assert.Equal(AssessmentJson.Bytes(AssessmentFixture.TwelveRegions()), AssessmentJson.Bytes(AssessmentFixture.TwelveRegions()));

    internal static Assessment With(Assessment a, RegionResult region) => a with { Responses = [a.Responses[0] with { Regions = [region] }] };

    private static JsonElement Result(JsonElement region, string modality, string direction, string measure) => region.GetProperty("results").EnumerateArray()
        .Single(r => r.GetProperty("modality").GetString() == modality && r.GetProperty("direction").GetString() == direction && r.GetProperty("measure").GetString() == measure);

    private static void Contains(JsonElement element, params string[] keys) =>
        Assert.All(keys, key => Assert.True(element.TryGetProperty(key, out _), $"`{key}` is missing"));
}
