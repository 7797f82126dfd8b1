using System.Globalization;
using System.Text;

using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>The assumptions are the study: written back they read as the same study.</summary>
public class AssumptionTests
{
    public static TheoryData<string> Studies() => [DefaultStudy.Text, ExampleStudy.Text, StudyText.Small, StudyText.Tables, StudyText.Imported];

    [Theory]
    [MemberData(nameof(Studies))]
    public void StatedAssumptions_WrittenBack_ReadAsTheSameStudy(string text)
    {
        StudyReading first = StudyText.Read(text);
        StudyReading second = StudyText.Read(Write(first.Assumptions.Where(a => a.FromStudy)));
        Assert.Equal(Line(first.Assumptions), Line(second.Assumptions));
        Assert.Equal(first.Study.Responses.Select(r => r with { Regions = [], Competitors = [], RateCurve = [] }), second.Study.Responses.Select(r => r with { Regions = [], Competitors = [], RateCurve = [] }));
        Assert.Equal(first.Study.Responses.SelectMany(r => r.Competitors), second.Study.Responses.SelectMany(r => r.Competitors));
        Assert.Equal(first.Study.Responses.SelectMany(r => r.RateCurve), second.Study.Responses.SelectMany(r => r.RateCurve));
        Assert.Equal(first.Study.Noise, second.Study.Noise);
        Assert.Equal(first.Study.Targets, second.Study.Targets);
        Assert.Equal(first.Study.Protocol, second.Study.Protocol);
        Assert.Equal(first.Study.Meg, second.Study.Meg);
    }

    [Theory]
    [MemberData(nameof(Studies))]
    public void Defaults_WrittenOut_DoNotChangeTheStudy(string text)
    {
        StudyReading first = StudyText.Read(text);
        IEnumerable<Assumption> all = first.Assumptions.Where(a => !a.Key.StartsWith("head.spheres.layers", StringComparison.Ordinal) || a.FromStudy);
        StudyReading second = StudyText.Read(Write(all));
        Assert.Equal(first.Study.Responses.Select(r => r with { Regions = [], Competitors = [], RateCurve = [], EegMeasure = null, MegMeasure = null }), second.Study.Responses.Select(r => r with { Regions = [], Competitors = [], RateCurve = [], EegMeasure = null, MegMeasure = null }));
        Assert.Equal(first.Study.Responses.SelectMany(r => r.Competitors), second.Study.Responses.SelectMany(r => r.Competitors));
        Assert.Equal(first.Study.Responses.SelectMany(r => r.RateCurve), second.Study.Responses.SelectMany(r => r.RateCurve));
        Assert.Equal(first.Study.Noise! with { Brain = null }, second.Study.Noise! with { Brain = null });
        Assert.Equal(first.Study.Targets, second.Study.Targets);
        Assert.Equal(first.Study.Protocol, second.Study.Protocol);
        Assert.Equal(first.Study.Meg, second.Study.Meg);
        Assert.Equal(first.Warnings, second.Warnings);
    }

    [Theory]
    [MemberData(nameof(Studies))]
    public void Assumptions_HoldEveryStatedValueOnce_InTheKeysUnit(string text)
    {
        StudyReading reading = StudyText.Read(text);
        Assert.Equal(reading.Assumptions.Count, reading.Assumptions.Select(a => a.Key).Distinct().Count());
        Assert.All(reading.Assumptions, a => Assert.True(a.Value is double or string or double[], a.Key));
        Assert.All(reading.Assumptions.Where(a => !a.FromStudy), a => Assert.True(a.Source.Length > 0 && a.Grade is not null, a.Key));
        Assert.All(reading.Assumptions.Where(a => a.FromStudy), a => Assert.True(a.Grade is null && reading.Places.ContainsKey(a.Key), a.Key));
    }

    [Fact]
    public void DefaultStudy_ListsWhatItLeavesOut()
    {
        IReadOnlyList<Assumption> assumptions = DefaultStudy.Read(Purpose.Assess, StudyText.Library).Assumptions;
        Assumption skull = assumptions.Single(a => a.Key == "head.spheres.layers[2].conductivity_S_per_m");
        Assert.Equal((0.0132, "S/m", false, Grade.Derived), ((double)skull.Value, skull.Unit, skull.FromStudy, skull.Grade));
        Assert.Contains("ratio of 25", skull.Source, StringComparison.Ordinal);
        Assumption edge = assumptions.Single(a => a.Key == "sensors.meg_edge_deg.back");
        Assert.Equal((-35.0, "deg", Grade.Memory), ((double)edge.Value, edge.Unit, edge.Grade));
        Assert.Equal("Cz-mastoids", assumptions.Single(a => a.Key == "responses.wave V.measure.eeg").Value);
        Assert.Equal("default", assumptions.Single(a => a.Key == "noise.brain").Value);
        Assumption moment = assumptions.Single(a => a.Key == "responses.wave V.moment_nAm");
        Assert.Equal((3.5, "nAm", true), ((double)moment.Value, moment.Unit, moment.FromStudy));
    }

    private static string Line(IEnumerable<Assumption> assumptions) =>
        string.Join('\n', assumptions.OrderBy(a => a.Key, StringComparer.Ordinal).Select(a => $"{a.Key} {Yaml(a)} {a.Unit} {a.FromStudy} {a.Source} {a.Grade}"));

    private static string Yaml(Assumption a) => a.Value switch
    {
        double number => number.ToString("R", CultureInfo.InvariantCulture),
        double[] numbers => "[" + string.Join(", ", numbers.Select(n => n.ToString("R", CultureInfo.InvariantCulture))) + "]",
        string list when a.Key.EndsWith(".regions", StringComparison.Ordinal) || a.Key.EndsWith("eeg_derivations", StringComparison.Ordinal) || list.Contains(", ", StringComparison.Ordinal) => $"[{list}]",
        _ => (string)a.Value,
    };

    /// <summary>Keys with values as a YAML text: dots nest, numbers in brackets and names of responses are entries of lists.</summary>
    private static string Write(IEnumerable<Assumption> assumptions)
    {
        var root = new SortedDictionary<string, object>(StringComparer.Ordinal);
        foreach (Assumption a in assumptions)
        {
            SortedDictionary<string, object> at = root;
            string[] parts = a.Key.Replace("[", ".[", StringComparison.Ordinal).Split('.');
            foreach (string part in parts[..^1])
            {
                at = (SortedDictionary<string, object>)(at.TryGetValue(part, out object? below) ? below : at[part] = new SortedDictionary<string, object>(StringComparer.Ordinal));
            }

            at[parts[^1]] = Yaml(a);
        }

        var text = new StringBuilder();
        foreach ((string key, object value) in root)
        {
            text.Append(CultureInfo.InvariantCulture, $"{key}: {Flow(value, key == "responses")}\n");
        }

        return text.ToString();
    }

    private static string Flow(object value, bool named) => value switch
    {
        SortedDictionary<string, object> map when named =>
            "[" + string.Join(", ", map.Select(e => "{name: " + e.Key + ", " + Flow(e.Value, false)[1..])) + "]",
        SortedDictionary<string, object> map when map.Keys.First().StartsWith('[') => "[" + string.Join(", ", map.Values.Select(v => Flow(v, false))) + "]",
        SortedDictionary<string, object> map => "{" + string.Join(", ", map.Select(e => $"{e.Key}: {Flow(e.Value, false)}")) + "}",
        _ => (string)value,
    };
}
