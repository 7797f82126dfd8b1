using System.Text.Json;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report.Console;
using DeepSourceCheck.Report.Html;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Tests.Report;

/// <summary>People, planned analyses and rate in JSON, console and page. The figures are invented and consistent in themselves.</summary>
public class ProtocolReportTests
{
    private const int Columns = 79;

    private static readonly PeopleChoice People = new() { Spread = 0.4, Participants = 12, DropOut = 0.1, Alpha = 0.05, Power = 0.8 };

    private static Assessment Planned()
    {
        Assessment a = AssessmentFixture.Default();
        VerdictResult With(VerdictResult v)
        {
            long factor = v.Modality == Modality.Meg ? 10 : 1;
            return v with
            {
                People = new([new(10, 0.5, 34 * factor, 38 * factor), new(23_976, 2.4, 4 * factor, 5 * factor)], 23_976, 4, 0.93),
                Stopping = new(Spending.PocockType, [new(400 * factor, 2.4, 0.006, 0.6, 0.006), new(800 * factor, 2.3, 0.01, 0.3, 0.004)], 800 * factor, 560 * factor, 797 * factor, 1.3, 0.93, true),
                Rate = new(11.1, 48.09, 0.7352, 1294, 0.5, 0.67, v.Modality == Modality.Meg),
            };
        }

        return a with
        {
            Study = a.Study with { Protocol = a.Study.Protocol! with { People = People } },
            Responses = [a.Responses[0] with { Regions = [.. a.Responses[0].Regions.Select(r => r with { Verdicts = [.. r.Verdicts.Select(With)] })] }],
        };
    }

    private static JsonElement Json(Assessment a) => JsonDocument.Parse(AssessmentJson.Bytes(a)).RootElement;

    [Fact]
    public void Json_HasPeopleOfTheRecommendedModalityAtTheTop()
    {
        JsonElement[] people = [.. Json(Planned()).GetProperty("people").EnumerateArray()];
        Assert.Equal([(10, 34), (23_976, 4)], people.Select(p => (p.GetProperty("trials").GetInt32(), p.GetProperty("participants").GetInt32())));
        Assert.Equal(0, Json(AssessmentFixture.Default()).GetProperty("people").GetArrayLength());
    }

    [Fact]
    public void Json_HasEveryFigureBesideItsVerdict()
    {
        JsonElement meg = Json(Planned()).GetProperty("responses")[0].GetProperty("regions")[0].GetProperty("verdicts").EnumerateArray().Single(v => v.GetProperty("modality").GetString() == "MEG");
        JsonElement people = meg.GetProperty("people"), stopping = meg.GetProperty("stopping"), rate = meg.GetProperty("rate");
        Assert.Equal((340, 380, 0.5), (people.GetProperty("table")[0].GetProperty("participants").GetInt32(), people.GetProperty("table")[0].GetProperty("invited").GetInt32(), people.GetProperty("table")[0].GetProperty("effect_size").GetDouble()));
        Assert.Equal((23_976, 4, 0.93), (people.GetProperty("session_trials").GetInt32(), people.GetProperty("participants_at_unlimited_trials").GetInt32(), people.GetProperty("power_of_stated_participants").GetDouble()));
        Assert.Equal(("pocock-type", 8000, 5600.0, 7970.0), (stopping.GetProperty("spending").GetString(), stopping.GetProperty("maximum_trials").GetInt32(), stopping.GetProperty("expected_trials").GetDouble(), stopping.GetProperty("expected_trials_without_response").GetDouble()));
        Assert.Equal([4000, 8000], stopping.GetProperty("analyses").EnumerateArray().Select(r => r.GetProperty("trials").GetInt32()));
        Assert.Equal(2.4, stopping.GetProperty("analyses")[0].GetProperty("bound").GetDouble());
        Assert.Equal((48.09, 1294, 0.67, true), (rate.GetProperty("best_per_s").GetDouble(), rate.GetProperty("trials_at_best").GetInt32(), rate.GetProperty("minutes_saved").GetDouble(), rate.GetProperty("responses_overlap_at_best").GetBoolean()));
        JsonElement plain = Json(AssessmentFixture.Default()).GetProperty("responses")[0].GetProperty("regions")[0].GetProperty("verdicts")[0];
        Assert.All(new[] { "people", "stopping", "rate" }, name => Assert.False(plain.TryGetProperty(name, out _)));
    }

    [Fact]
    public void Console_SaysPeopleAnalysesAndRate_WithinItsColumns()
    {
        string text = ConsoleSummary.Of(Planned(), "out", terminal: false, unicode: false, color: false);
        Assert.Contains("EEG people                      4 (5 invited), 23,976 trials each\n", text, StringComparison.Ordinal);
        Assert.Contains("power of 12 people              EEG 93 %, MEG 93 %\n", text, StringComparison.Ordinal);
        Assert.Contains("EEG trials in 2 analyses        800 at most, 560 expected (1.3, 0.9 min)\n", text, StringComparison.Ordinal);
        Assert.Contains("EEG at the best rate            48.1/s would take 0.5 min, 0.7 min less\n", text, StringComparison.Ordinal);
        Assert.Contains("overlap in the window", string.Join(' ', text.Split((char[])[' ', '\n'], StringSplitOptions.RemoveEmptyEntries)), StringComparison.Ordinal);
        Assert.All(text.Split('\n'), line => Assert.True(line.Length <= Columns, line));
        Assert.DoesNotContain("analyses", ConsoleSummary.Of(AssessmentFixture.Default(), "out", terminal: false, unicode: false, color: false), StringComparison.Ordinal);
    }

    [Fact]
    public void Page_HasASectionForEach_AndNoneUnasked()
    {
        string page = HtmlReport.Text(Planned(), figureFiles: false), plain = HtmlReport.Text(AssessmentFixture.Default(), figureFiles: false);
        Assert.All(new[] { "people", "stopping", "rate" }, id =>
        {
            Assert.Contains($"<section id=\"{id}\">", page, StringComparison.Ordinal);
            Assert.DoesNotContain($"<section id=\"{id}\">", plain, StringComparison.Ordinal);
        });
        Assert.Contains("<td class=\"n\">23,976 (session)</td><td class=\"n\">4 (5)</td><td class=\"n\">40 (50)</td>", page, StringComparison.Ordinal);
        Assert.Contains("With 12 people at the session&#39;s trials the effect is found with power 93 % (EEG), 93 % (MEG)", page, StringComparison.Ordinal);
        Assert.Contains("pocock-type spending: trials 8,000 at most, 5,600 expected", page, StringComparison.Ordinal);
        Assert.Contains("no evidence of absence", page, StringComparison.Ordinal);
        Assert.Contains("responses overlap in it", page, StringComparison.Ordinal);
    }
}
