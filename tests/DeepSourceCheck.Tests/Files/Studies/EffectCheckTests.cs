using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Keys that are stated and change nothing are warned of or refused, with the reason.</summary>
public class EffectCheckTests
{
    private const string Moment = "moment_nAm: 3.5", Target = "{amplitude_ratio: 3}", Rate = "{rate_per_s: 11.1}";

    private static string Steady(string keys = "frequency_Hz: 85\n    seconds: 2", string more = "") =>
        StudyText.Small.With(Moment, $"{Moment}\n    kind: steady-state\n    {keys}{more}").With("    band_Hz: [100, 1500]\n", "").With(Rate, "{session_min: 10}");

    private static void Warns(string text, string key, string part) =>
        Assert.Contains(StudyText.Read(text).Warnings, w => w.StartsWith(key + ": ", StringComparison.Ordinal) && w.Contains(part, StringComparison.Ordinal));

    private static void Silent(string text, string part) => Assert.DoesNotContain(StudyText.Read(text).Warnings, w => w.Contains(part, StringComparison.Ordinal));

    [Fact]
    public void SteadyState_SaysWhichKeysItDoesNotHeed()
    {
        Warns(Steady().With(Target, "{detection: {topography: plane, covariance: estimated}}"), "target.detection.topography", "F(2, 240)");
        Warns(Steady().With(Target, "{detection: {topography: plane, covariance: estimated}}"), "target.detection.covariance", "F(2, 240)");
        Silent(Steady().With(Target, "{detection: {topography: known}}"), "has no effect");
        Warns(Steady(more: "\n    window_ms: 10"), "responses.wave V.window_ms", "has no effect");
        Warns(Steady().With("{session_min: 10}", "{session_min: 10, interval_jitter_ms: 2}"), "protocol.interval_jitter_ms", "has no effect");
    }

    [Fact]
    public void SteadyState_WithPartOfACycle_IsWarnedOf_WithTheNearestLength()
    {
        Warns(Steady("frequency_Hz: 40.5\n    seconds: 1"), "responses.wave V.seconds", "40.5 cycles");
        Silent(Steady("frequency_Hz: 40.5\n    seconds: 2"), "cycles");
    }

    [Theory]
    [InlineData("frequency_Hz: 50\n    seconds: 2", "50 Hz")]
    [InlineData("frequency_Hz: 120\n    seconds: 2", "2 x 60 Hz")]
    [InlineData("frequency_Hz: 50.5\n    seconds: 1", "50 Hz")]
    public void SteadyState_InTheBinOfTheMains_IsWarnedOf(string keys, string mains) => Warns(Steady(keys), "responses.wave V.frequency_Hz", mains);

    [Fact]
    public void SteadyState_BesideTheMains_IsNotWarnedOf() => Silent(Steady("frequency_Hz: 51\n    seconds: 2"), "mains");

    [Fact]
    public void SteadyState_FasterThanItsTrials_IsSaid()
    {
        Warns(Steady().With("{session_min: 10}", "{session_min: 10, rate_per_s: 10}"), "protocol.rate_per_s", "counted at 0.5 a second");
        Silent(Steady().With("{session_min: 10}", "{session_min: 10, rate_per_s: 0.5}"), "cannot follow");
    }

    [Fact]
    public void SteadyState_WithTheVarianceRatioAlone_IsRefused()
    {
        InputProblem problem = StudyText.Problem(Steady().With(Target, "{variance_ratio: {critical: 3.1, window_rms_uV: 0.1}}"));
        Assert.Equal("target.variance_ratio", problem.Key);
        Assert.Contains("steady-state wave V", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void ResidualNoise_WithoutEeg_IsRefused()
    {
        string text = StudyText.Small.With("  eeg: {layout: ten-ten-64, reference: average}\n  eeg_derivations: [Cz-mastoids, Cz-M1]\n", "").With("  eeg_sensor_nV_per_rtHz: 20\n", "").With(Target, "{residual_nV: 40}");
        InputProblem problem = StudyText.Problem(text);
        Assert.Equal("target.residual_nV", problem.Key);
        Assert.Contains("is a voltage", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void ComponentAlone_ServesJitterAlone()
    {
        Warns(StudyText.Small.With(Moment, Moment + "\n    component_Hz: 500"), "responses.wave V.component_Hz", "has no effect");
        Silent(StudyText.Small.With(Moment, Moment + "\n    component_Hz: 500\n    jitter_ms: 0.2"), "has no effect");
        Silent(StudyText.Small.With(Moment, Moment + "\n    component_Hz: 500\n    cycles: 2"), "has no effect");
    }

    [Fact]
    public void Window_WithoutARuleThatAsksForIt_IsSaid()
    {
        Warns(StudyText.Small.With(Moment, Moment + "\n    window_ms: 10"), "responses.wave V.window_ms", "has no effect");
        Silent(StudyText.Small.With(Moment, Moment + "\n    window_ms: 10").With(Target, "{detection: {looks: 28}}"), "has no effect");
    }

    [Fact]
    public void NoiseWithoutASpectrum_LeavesIntervalsWithoutEffect_AndIsTakenAsWhite()
    {
        string flat = StudyText.Tables + "\nprotocol: {rate_per_s: 2, interval_jitter_ms: 20}\n";
        Warns(flat, "protocol.interval_jitter_ms", "without a spectrum");
        Silent(StudyText.Small.With(Rate, "{rate_per_s: 2, interval_jitter_ms: 20}"), "without a spectrum");
        string course = StudyText.Tables.With("moment_nAm: 10", "moment_nAm: 10, waveform: {gaussian_fwhm_ms: 40}");
        Warns(course + "\ntarget: {detection: {looks: 1}}\n", "responses.slow.waveform", "as white over the band");
        Silent(course, "as white");
    }

    [Theory]
    [InlineData("0.05")]
    [InlineData("0.1")]
    [InlineData("0.07")]
    public void SlowRate_LocksToNoMains(string rate) => Silent(StudyText.Small.With(Rate, $"{{rate_per_s: {rate}}}"), "mains");
}
