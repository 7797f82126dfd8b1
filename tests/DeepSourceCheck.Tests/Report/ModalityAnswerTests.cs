using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Report.Html;

namespace DeepSourceCheck.Tests.Report;

/// <summary>What is said of a count, or of none.</summary>
public class ModalityAnswerTests
{
    private const string Why = "residual_nV is a voltage: it holds for EEG alone";

    private static Assessment MegDoesNotApply()
    {
        Assessment a = AssessmentFixture.Default();
        RegionResult Changed(RegionResult region) => region with
        {
            Verdicts = [.. region.Verdicts.Select(v => v.Modality == Modality.Meg ? v with { Applies = false, Text = $"MEG, best-channel: no count ({Why})." } : v)],
            Results = [.. region.Results.Select(r => r.Modality != Modality.Meg ? r : r with { Targets = [.. r.Targets.Select(t => new TargetResult(t.Rule, new(null, null, null, null, null), null, null, null, Why) { Absent = true })] })],
        };
        return a with { Responses = [a.Responses[0] with { Regions = [.. a.Responses[0].Regions.Select(Changed)] }] };
    }

    [Fact]
    public void RuleThatDoesNotApply_IsNotOutOfReach()
    {
        Assessment a = MegDoesNotApply();
        ModalityAnswer meg = new RegionAnswer(a, a.Responses[0].Response, a.Responses[0].Regions[0]).Of(Modality.Meg)!;
        Assert.Equal(Outcome.DoesNotApply, meg.Outcome);
        Assert.Equal("does not apply", meg.Line());
        Assert.Equal(Why, meg.Reason);
        string page = HtmlReport.Text(a, figureFiles: false);
        Assert.DoesNotContain("out of reach", page, StringComparison.Ordinal);
        Assert.Contains(Why, page, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(20.09, 20, "20.1")]
    [InlineData(20.004, 20, "20.004")]
    [InlineData(31.2, 20, "31")]
    [InlineData(5.51, 5.5, "5.51")]
    public void MinutesBeyondASession_AreTellableFromIt(double minutes, double session, string expected) =>
        Assert.Equal(expected, Rounded.MinutesBeyond(minutes, session));
}
