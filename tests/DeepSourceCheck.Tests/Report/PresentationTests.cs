using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Console;

namespace DeepSourceCheck.Tests.Report;

public class PresentationTests
{
    public static TheoryData<string> All => [.. AllFixtures.Keys];

    internal static IReadOnlyDictionary<string, Func<Assessment>> AllFixtures { get; } = new Dictionary<string, Func<Assessment>>
    {
        ["default"] = AssessmentFixture.Default,
        ["silent"] = AssessmentFixture.Silent,
        ["no protocol"] = AssessmentFixture.NoProtocol,
        ["EEG only"] = AssessmentFixture.EegOnly,
        ["MEG only"] = AssessmentFixture.MegOnly,
        ["twelve regions"] = AssessmentFixture.TwelveRegions,
        ["neither fits"] = AssessmentFixture.NeitherFits,
        ["out of reach"] = AssessmentFixture.OutOfReach,
        ["both fit"] = AssessmentFixture.BothFit,
        ["imported"] = AssessmentFixture.Imported,
        ["voxels"] = AssessmentFixture.Voxels,
        ["detection"] = AssessmentFixture.WithDetection,
        ["two responses"] = AssessmentFixture.TwoResponses,
        ["cortex"] = AssessmentFixture.OverCortex,
        ["spectra"] = AssessmentFixture.WithSpectra,
        ["attribution"] = AssessmentFixture.WithAttribution,
    };

    [Theory]
    [InlineData(303.0, "300")]
    [InlineData(0.0999, "0.10")]
    [InlineData(12345.0, "12,000")]
    [InlineData(-4.75, "−4.8")]
    [InlineData(0.0282, "0.028")]
    [InlineData(1e-17, "1.0e−17")]
    [InlineData(0.0, "0")]
    public void Two_WritesTwoSignificantDigits(double value, string text) => Assert.Equal(text, Say.Two(value));

    [Theory]
    [InlineData(303L, "303")]
    [InlineData(45103L, "45,103")]
    [InlineData(10_000_000L, "10,000,000")]
    [InlineData(10_000_001L, "out of reach")]
    [InlineData(null, "out of reach")]
    public void Trials_AreExactUpToTenMillion(long? count, string text) => Assert.Equal(text, Say.Trials(count));

    [Theory]
    [InlineData(1.0, "at least 95 %")]
    [InlineData(0.93, "at least 95 %")]
    [InlineData(0.92, "90 %")]
    [InlineData(0.25, "25 %")]
    [InlineData(0.0, "at most 5 %")]
    public void Assurance_IsRoundedToFivePercent(double share, string text) => Assert.Equal(text, Say.Assurance(share));

    [Theory]
    [InlineData(0.03, "under 0.1")]
    [InlineData(0.5055, "0.5")]
    [InlineData(7.46, "7.5")]
    [InlineData(75.2, "75")]
    [InlineData(667.3, "670")]
    public void Minutes_AreReadable(double minutes, string text) => Assert.Equal(text, Say.Minutes(minutes));

    [Theory]
    [InlineData("default", "EEG reaches the target in 0.5 min; MEG does not within 40 minutes", Modality.Eeg)]
    [InlineData("silent", "EEG reaches the target in 0.7 min; MEG is silent in this direction", Modality.Eeg)]
    [InlineData("no protocol", "EEG reaches the target in 303 trials, MEG in 45,103 trials", Modality.Eeg)]
    [InlineData("EEG only", "EEG reaches the target in 0.5 min", Modality.Eeg)]
    [InlineData("MEG only", "MEG does not reach the target within 40 minutes", null)]
    [InlineData("neither fits", "Neither EEG nor MEG reaches the target within 40 minutes", null)]
    [InlineData("out of reach", "EEG does not reach the target within 40 minutes; MEG is out of reach", null)]
    [InlineData("both fit", "MEG reaches the target in 0.8 min, EEG in 1.5 min", Modality.Meg)]
    public void Headline_SaysTheFindingAndTheWinner(string fixture, string headline, Modality? winner)
    {
        Assessment a = AllFixtures[fixture]();
        RegionAnswer answer = new(a, a.Responses[0].Response, a.Responses[0].Regions[0]);
        Assert.Equal(headline, answer.Headline());
        Assert.Equal(winner, answer.Winner?.Modality);
    }

    [Fact]
    public void Headline_WhereOnlyBothTogetherFit_RecommendsBoth()
    {
        Assessment a = AssessmentFixture.Build(new() { EegTrials = 30_000, MegTrials = 28_000, JointTrials = 20_000 });
        RegionAnswer answer = new(a, a.Responses[0].Response, a.Responses[0].Regions[0]);
        Assert.Equal("Neither EEG nor MEG alone: together they reach the target in 33 min", answer.Headline());
        Assert.Equal("Recommended: EEG and MEG together.", answer.Recommendation());
    }

    [Fact]
    public void Summary_OfTheDefaultStudy_ReadsAsDesigned()
    {
        const string Expected = """
            Click response of the brainstem, adult volunteers
            wave V, inferior-colliculus-left: 123 dipoles, 3.5 nAm along [0, 0, 1]
            peak = 3 x residual rms; 11.1/s, 10 % rejected; session 40 min = 23,976 trials

            EEG reaches the target in 0.5 min. MEG needs 75 min: too long by 35 min.

                    measure          trials           5 to 95 %  minutes      peak session
            EEG     Cz-mastoids         303          252 to 370      0.5   0.25 uV fits
            MEG     best-channel     45,103    37,436 to 55,026       75    2.6 fT too long
            EEG+MEG both                301          250 to 368      0.5         - fits
            trials: median and 5 to 95 % over places, not over unknowns

            """;
        string text = ConsoleSummary.Of(AssessmentFixture.Default(), "deepsourcecheck-results", terminal: false, unicode: true, color: true, files: 14);
        Assert.StartsWith(Expected, text, StringComparison.Ordinal);
        Assert.Contains("smallest source in the session  EEG 0.39 nAm (0.028 uV)   MEG 4.8 nAm (3.6 fT)\n", text, StringComparison.Ordinal);
        Assert.Contains("MEG would fit                   from 4.8 nAm\n", text, StringComparison.Ordinal);
        Assert.Contains("! Detected is not located.", text, StringComparison.Ordinal);
        Assert.Contains("Planning aid, no medical device. Not seen is no evidence of absence.", text, StringComparison.Ordinal);
        Assert.EndsWith("Written: deepsourcecheck-results/ (report.html, 14 files)\n", text, StringComparison.Ordinal);
    }

    [Theory]
    [MemberData(nameof(All))]
    public void Summary_KeepsTo79ColumnsOfAscii(string fixture)
    {
        string text = ConsoleSummary.Of(AllFixtures[fixture](), "results", terminal: false, unicode: true, color: true);
        Assert.All(text.Split('\n'), line => Assert.True(line.Length <= 79, $"{line.Length}: {line}"));
        Assert.All(text, c => Assert.True(c is '\n' or >= ' ' and <= '~', $"U+{(int)c:X4}"));
    }

    [Fact]
    public void Summary_OnAUnicodeTerminal_DiffersBySignsAndColourOnly()
    {
        Assessment a = AssessmentFixture.Default();
        string plain = ConsoleSummary.Of(a, "results", terminal: false, unicode: false, color: false);
        string wide = ConsoleSummary.Of(a, "results", terminal: true, unicode: true, color: false);
        Assert.Contains("0.25 µV", wide, StringComparison.Ordinal);
        Assert.Equal(plain, wide.Replace('µ', 'u').Replace('×', 'x').Replace('−', '-'));
        string coloured = ConsoleSummary.Of(a, "results", terminal: true, unicode: true, color: true);
        foreach (string part in coloured.Split('\u001b').Skip(1).Where((_, k) => k % 2 == 0))
        {
            Assert.Matches("^\\[3[0-9]m[o*#!]$", part);
        }
    }

    [Theory]
    [MemberData(nameof(All))]
    public void Why_KeepsTo79Columns(string fixture)
    {
        Assessment a = AllFixtures[fixture]();
        string text = WhyText.Of(a, a.Responses[0], a.Responses[0].Regions[0], unicode: false);
        Assert.All(text.Split('\n'), line => Assert.True(line.Length <= 79, $"{line.Length}: {line}"));
    }

    [Fact]
    public void Why_PrintedNumbers_ReadBackToTheSameBits()
    {
        Assessment a = AssessmentFixture.Default();
        RegionResult region = a.Responses[0].Regions[0];
        string[] lines = WhyText.Of(a, a.Responses[0], region, unicode: false).Split('\n');
        double[] printed = [.. lines.Select(l => System.Text.RegularExpressions.Regex.Match(l, "^  \\S+ += (\\S+)")).Where(m => m.Success)
            .Select(m => double.Parse(m.Groups[1].Value, System.Globalization.CultureInfo.InvariantCulture))];
        Assert.Equal(region.Verdicts.SelectMany(v => v.Chain).Select(s => s.Value), printed);
    }
}
