using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Targets of a study: every rule with its defaults, and what is refused.</summary>
public class TargetBinderTests
{
    private static TargetChoice Only(string target) => Assert.Single(StudyText.Read(StudyText.Small.With("amplitude_ratio: 3", target)).Study.Targets);

    [Fact]
    public void Rules_AreBoundWithTheirDefaults()
    {
        Assert.Equal(new DetectionChoice(0.01, 0.9, 1, Topography.Plane, true), Only("detection: {topography: plane, covariance: estimated}"));
        Assert.Equal(new DetectionChoice(0.01, 0.9, 1, Topography.Unknown), Only("detection: {topography: unknown}"));
        Assert.Equal(new VarianceRatioChoice(3.1, null, null, 0.12 / 1e6, 5, 250), Only("variance_ratio: {window_rms_uV: 0.12}"));
        Assert.Equal(new VarianceRatioChoice(null, 0.01, 0.9, 0.12 / 1e6, 5, 100), Only("variance_ratio: {alpha: 0.01, power: 0.9, window_rms_uV: 0.12, degrees: [5, 100]}"));
        Assert.Equal(new ResidualNoiseChoice(40 / 1e9), Only("residual_nV: 40"));
    }

    [Theory]
    [InlineData("variance_ratio: {critical: 3.1}", "target.variance_ratio.window_rms_uV", "is missing")]
    [InlineData("variance_ratio: {critical: 3.1, alpha: 0.01, window_rms_uV: 0.12}", "target.variance_ratio.alpha", "beside critical")]
    [InlineData("variance_ratio: {critical: 1.0, window_rms_uV: 0.12}", "target.variance_ratio.critical", "noise alone has on average")]
    [InlineData("variance_ratio: {critical: 3.1, window_rms_uV: 0.12, degrees: [1, 2]}", "target.variance_ratio.degrees", "does not exist")]
    [InlineData("variance_ratio: {critical: 1.1, power: 0.2, window_rms_uV: 0.12}", "target.variance_ratio.power", "noise alone passes")]
    [InlineData("detection: {topography: some}", "target.detection.topography", "known, plane or unknown")]
    [InlineData("residual_nV: 0", "target.residual_nV", "above 0")]
    public void WrongTargets_AreRefusedWithWhatIsAllowed(string target, string key, string message)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With("amplitude_ratio: 3", target));
        Assert.Equal(key, problem.Key);
        Assert.Contains(message, problem.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("10", "submultiple of the mains frequency of 50 Hz")]
    [InlineData("12", "submultiple of the mains frequency of 60 Hz")]
    [InlineData("16.67", "submultiple of the mains frequency of 50 Hz")]
    public void RateThatLocksToTheMains_IsWarnedOf(string rate, string message) =>
        Assert.Contains(StudyText.Read(StudyText.Small.With("rate_per_s: 11.1", $"rate_per_s: {rate}")).Warnings, w => w.Contains(message, StringComparison.Ordinal));

    [Fact]
    public void UsualRate_IsNotWarnedOf() =>
        Assert.DoesNotContain(StudyText.Read(StudyText.Small).Warnings, w => w.Contains("mains", StringComparison.Ordinal) || w.Contains("alpha", StringComparison.Ordinal));

    [Fact]
    public void JitterLongerThanTheInterval_IsRefused()
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With("rate_per_s: 11.1", "rate_per_s: 11.1, interval_jitter_ms: 100"));
        Assert.Equal("protocol.interval_jitter_ms", problem.Key);
        Assert.Equal(0.02, StudyText.Read(StudyText.Small.With("rate_per_s: 11.1", "rate_per_s: 11.1, interval_jitter_ms: 20")).Study.Protocol!.IntervalJitter);
    }
}
