using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>People, planned analyses and amplitude-rate curves of a study: values, defaults, and what is refused.</summary>
public class ProtocolBinderTests
{
    private const string Protocol = "protocol: {rate_per_s: 11.1}", Rule = "amplitude_ratio: 3", Band = "band_Hz: [100, 1500]";

    private static string Curve(string points) => $"{Band}\n    rate_curve: {points}";

    [Fact]
    public void People_AreBoundWithTheirDefaults()
    {
        Assert.Null(StudyText.Read(StudyText.Small).Study.Protocol!.People);
        Assert.Equal(new PeopleChoice { Spread = 0.3, Alpha = 0.05, Power = 0.8 }, Read("spread_between_people: 0.3"));
        Assert.Equal(
            new PeopleChoice { Spread = 0.3, Participants = 20, DropOut = 0.1, Alpha = 0.01, Power = 0.9, GroupDifference = 0.4 },
            Read("spread_between_people: 0.3, participants: 20, dropout_fraction: 0.1, people_test: {alpha: 0.01, power: 0.9, groups_differ_by: 0.4}"));

        static PeopleChoice? Read(string more) => StudyText.Read(StudyText.Small.With(Protocol, $"protocol: {{rate_per_s: 11.1, {more}}}")).Study.Protocol!.People;
    }

    [Fact]
    public void ParticipantsWithoutASpread_AreTakenAsAlike_WithAWarningAndAnAssumption()
    {
        var reading = StudyText.Read(StudyText.Small.With(Protocol, "protocol: {rate_per_s: 11.1, participants: 20}"));
        Assert.Equal(0, reading.Study.Protocol!.People!.Spread);
        Assert.Contains(reading.Warnings, w => w.Contains("taken as alike", StringComparison.Ordinal));
        Assert.Contains(reading.Assumptions, a => a is { Key: "protocol.spread_between_people", FromStudy: false });
    }

    [Theory]
    [InlineData("dropout_fraction: 0.1", "protocol.dropout_fraction", "spread_between_people")]
    [InlineData("people_test: {alpha: 0.01}", "protocol.people_test", "spread_between_people")]
    [InlineData("participants: 1", "protocol.participants", "whole number from 2")]
    [InlineData("spread_between_people: 0.3, dropout_fraction: 1", "protocol.dropout_fraction", "below 1")]
    [InlineData("spread_between_people: 0.3, people_test: {alpha: 0.5, power: 0.4}", "protocol.people_test.power", "chance alone")]
    public void WrongPeople_AreRefusedWithWhatIsAllowed(string keys, string key, string message)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Protocol, $"protocol: {{rate_per_s: 11.1, {keys}}}"));
        Assert.Equal(key, problem.Key);
        Assert.Contains(message, problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void PlannedAnalyses_AreBound()
    {
        Assert.Equal(new StoppingChoice(5, Spending.PocockType), Read("analyses: 5, spending: pocock-type"));
        Assert.Equal(new StoppingChoice(2, Spending.ObrienFlemingType), Read("analyses: 2"));

        static StoppingChoice? Read(string keys) =>
            ((DetectionChoice)StudyText.Read(StudyText.Small.With(Rule, $"detection: {{alpha: 0.01, stopping: {{{keys}}}}}")).Study.Targets.Single()).Stopping;
    }

    [Theory]
    [InlineData("stopping: {analyses: 1}", "target.detection.stopping.analyses", "from 2")]
    [InlineData("stopping: {spending: pocock-type}", "target.detection.stopping.analyses", "missing")]
    [InlineData("stopping: {analyses: 3, spending: evenly}", "target.detection.stopping.spending", "obrien-fleming-type or pocock-type")]
    [InlineData("topography: plane, stopping: {analyses: 3}", "target.detection.stopping", "topography known")]
    [InlineData("covariance: estimated, stopping: {analyses: 3}", "target.detection.stopping", "covariance known")]
    public void WrongAnalyses_AreRefusedWithWhatIsAllowed(string keys, string key, string message)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Rule, $"detection: {{{keys}}}"));
        Assert.Equal(key, problem.Key);
        Assert.Contains(message, problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void AnalysesOfASteadyStateResponse_AreRefused()
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Rule, "detection: {stopping: {analyses: 3}}").With(Band, "kind: steady-state\n    frequency_Hz: 40\n    seconds: 1"));
        Assert.Equal("target.detection.stopping", problem.Key);
    }

    [Fact]
    public void RateCurve_IsBound() => Assert.Equal(
        [new RatePoint(5, 1), new RatePoint(50, 0.6)],
        StudyText.Read(StudyText.Small.With(Band, Curve("[{rate_per_s: 5, amplitude: 1}, {rate_per_s: 50, amplitude: 0.6}]"))).Study.Responses[0].RateCurve);

    [Theory]
    [InlineData("[{rate_per_s: 5, amplitude: 1}]", "responses.wave V.rate_curve", "one point")]
    [InlineData("[{rate_per_s: 5, amplitude: 1}, {rate_per_s: 5, amplitude: 0.6}]", "responses.wave V.rate_curve[1].rate_per_s", "rates rising")]
    [InlineData("[{rate_per_s: 20, amplitude: 1}, {rate_per_s: 50, amplitude: 0.6}]", "responses.wave V.rate_curve", "does not hold protocol.rate_per_s 11.1")]
    [InlineData("[{rate_per_s: 5, amplitude: 0}, {rate_per_s: 50, amplitude: 0}]", "responses.wave V.rate_curve", "is zero")]
    [InlineData("[{rate_per_s: 5, amplitude: -1}, {rate_per_s: 50, amplitude: 0.6}]", "responses.wave V.rate_curve[0].amplitude", "from 0")]
    public void WrongCurve_IsRefusedWithWhatIsAllowed(string points, string key, string message)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Band, Curve(points)));
        Assert.Equal(key, problem.Key);
        Assert.Contains(message, problem.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(Band, "kind: steady-state\n    frequency_Hz: 40\n    seconds: 1\n    rate_curve: [{rate_per_s: 5, amplitude: 1}, {rate_per_s: 50, amplitude: 0.6}]", "steady-state")]
    [InlineData(Protocol, "", "without protocol.rate_per_s")]
    public void CurveWithoutUse_IsRefused(string from, string to, string message)
    {
        string text = from == Protocol ? StudyText.Small.With(Band, Curve("[{rate_per_s: 5, amplitude: 1}, {rate_per_s: 50, amplitude: 0.6}]")) : StudyText.Small;
        InputProblem problem = StudyText.Problem(text.With(from, to));
        Assert.Equal("responses.wave V.rate_curve", problem.Key);
        Assert.Contains(message, problem.Message, StringComparison.Ordinal);
    }
}
