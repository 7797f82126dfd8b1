using System.Globalization;
using System.Net;
using System.Text.Json;
using System.Text.RegularExpressions;

using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Console;
using DeepSourceCheck.Report.Html;
using DeepSourceCheck.Report.Tables;
using DeepSourceCheck.Tests.Cli;

namespace DeepSourceCheck.Tests.Report;

/// <summary>What is said about a realistic head, by kind of head and region.</summary>
public partial class RealisticHeadTextTests
{
    private static readonly RegionLibrary Library = RegionLibrary.Load();

    public static TheoryData<string> Cases => new(Assessments.Keys);

    private static Dictionary<string, Func<Assessment>> Assessments { get; } = new()
    {
        ["spheres"] = () => With(AssessmentFixture.Default(), "inferior-colliculus-left"),
        ["right-side"] = () => With(AssessmentFixture.Default(), "medulla", "thalamus-right"),
        ["voxels"] = () => With(AssessmentFixture.Voxels(), "thalamus-left"),
        ["both-heads"] = () => Beside(With(AssessmentFixture.Voxels(), "thalamus-left"), AssessmentFixture.Default()),
        ["neonate"] = () => Neonate(With(AssessmentFixture.Default(), "pons")),
        ["own-region"] = () => With(AssessmentFixture.Default()),
    };

    [Theory]
    [MemberData(nameof(Cases))]
    public void Text_IsTheRecordedOne(string name)
    {
        string text = Text(Assessments[name]());
        Assert.All(text.Split('\n'), line => Assert.True(line.Length <= 79 && line == line.TrimEnd(), $"{line.Length}: '{line}'"));
        GoldenText.Matches($"why/realistic-head-{name}.txt", text);
    }

    [Fact]
    public void RegionOfOnesOwn_OnAHeadOfVoxels_HasNoText() => Assert.Equal("", Text(AssessmentFixture.Voxels()));

    [Fact]
    public void RegionOfOnesOwn_OnImportedLeadfields_HasNoText() => Assert.Equal("", Text(AssessmentFixture.Imported()));

    [Fact]
    public void HeadsOfBothKinds_NeedNoAdvice()
    {
        Assessment voxels = AssessmentFixture.Voxels(), spheres = AssessmentFixture.Default();
        Assert.Empty(RealisticHead.Own(Beside(voxels, spheres)));
        Assert.Empty(RealisticHead.Own(Beside(spheres, voxels)));
        Assert.NotEmpty(RealisticHead.Own(Beside(spheres, spheres)));
        Assert.NotEmpty(RealisticHead.Own(voxels));
    }

    // Trials go with the inverse of the power SNR; two digits leave 5 % at 1.0.
    [Fact]
    public void PrintedTrials_FollowFromThePrintedDecibels()
    {
        const double HalfDigit = 0.05;
        string text = Text(With(AssessmentFixture.Default(), [.. Library.Regions.Where(r => r.RealisticHead is not null).Select(r => r.Name)]));
        MatchCollection pairs = Pair().Matches(text);
        Assert.Equal(6 * Library.Regions.Count(r => r.RealisticHead is not null), pairs.Count);
        Assert.All(pairs, pair =>
        {
            double db = double.Parse(pair.Groups[1].Value, CultureInfo.InvariantCulture), factor = double.Parse(pair.Groups[2].Value, CultureInfo.InvariantCulture);
            Assert.InRange(factor / Math.Pow(10, -db / 10), 1 - HalfDigit, 1 + HalfDigit);
        });
    }

    [Fact]
    public void Json_HasEachRegionOnce_WithItsFigures()
    {
        Assessment a = With(AssessmentFixture.Default(), "medulla", "thalamus-right");
        using JsonDocument document = JsonDocument.Parse(AssessmentJson.Bytes(a));
        JsonElement[] entries = [.. document.RootElement.GetProperty("responses")[0].GetProperty("regions")[0].GetProperty("realistic_head").EnumerateArray()];
        Assert.Equal(["medulla", "thalamus-right"], entries.Select(e => e.GetProperty("region").GetString()));
        Assert.Equal([null, "left"], entries.Select(e => e.GetProperty("measured_side").GetString()));
        HeadChange medulla = Library.Find("medulla")!.RealisticHead!.Phantom;
        JsonElement meg = entries[0].GetProperty("changes").EnumerateArray().Single(c => c.GetProperty("modality").GetString() == "MEG");
        Assert.Equal(medulla.MegBestChannel, meg.GetProperty("phantom_db").GetDouble());
        Assert.Equal(HeadChange.TrialsFactor(medulla.MegBestChannel), meg.GetProperty("phantom_trials_factor").GetDouble());
        Assert.Empty(document.RootElement.GetProperty("responses")[0].GetProperty("regions")[1].GetProperty("realistic_head").EnumerateArray());
    }

    [Fact]
    public void Page_ShowsTheFiguresOfEveryLibraryRegion_AndNoTableWithoutOne()
    {
        const string Heading = "What a realistic head changes";
        string page = WebUtility.HtmlDecode(HtmlReport.Text(With(AssessmentFixture.Default(), "pons"), false));
        Assert.Contains(Heading, page, StringComparison.Ordinal);
        Assert.Contains($"<td>pons</td><td class=\"n\">{RealisticHead.Change(Library.Find("pons")!.RealisticHead!.Phantom.EegCzMastoids)}</td>", page, StringComparison.Ordinal);
        Assert.Contains("--head phantom", page, StringComparison.Ordinal);
        Assert.DoesNotContain(Heading, HtmlReport.Text(AssessmentFixture.Default(), false), StringComparison.Ordinal);
    }

    private static string Text(Assessment a) => RealisticHeadText.Of(a, a.Responses[0].Regions[0], unicode: false);

    /// <summary>The assessment with the figures of library regions at its first region.</summary>
    private static Assessment With(Assessment a, params string[] regions)
    {
        RegionResult region = a.Responses[0].Regions[0] with { RealisticHeads = [.. regions.Select(r => Library.Find(r)!.RealisticHead!)] };
        return a with { Responses = [a.Responses[0] with { Regions = [region, .. a.Responses[0].Regions.Skip(1)] }] };
    }

    private static Assessment Beside(Assessment study, Assessment variant) => study with { Variants = [new("beside", variant)] };

    private static Assessment Neonate(Assessment a) =>
        a with { Study = a.Study with { Head = ((SphereHeadChoice)a.Study.Head) with { Preset = "neonate", LibraryScale = 0.63 } } };

    [GeneratedRegex(@"([+-]?\d+\.\d) dB, (\d[\d.]*) x the trials")]
    private static partial Regex Pair();
}
