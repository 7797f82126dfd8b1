using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Keys of the language that the program does not act on are refused, never read and ignored.</summary>
public class NotSupportedYetTests
{
    [Theory]
    [InlineData("moment_nAm: 3.5", "moment_nAm: 3.5\n    kind: steady-state", "responses.wave V.kind")]
    [InlineData("moment_nAm: 3.5", "moment_nAm: 3.5\n    frequency_Hz: 40", "responses.wave V.frequency_Hz")]
    [InlineData("moment_nAm: 3.5", "moment_nAm: 3.5\n    seconds: 10", "responses.wave V.seconds")]
    [InlineData("moment_nAm: 3.5", "moment_nAm: 3.5\n    waveform: waveform.csv", "responses.wave V.waveform")]
    [InlineData("moment_nAm: 3.5", "moment_nAm: 3.5\n    cycles: 2", "responses.wave V.cycles")]
    [InlineData("moment_nAm: 3.5", "moment_nAm: 3.5\n    jitter_ms: 0.3", "responses.wave V.jitter_ms")]
    [InlineData("moment_nAm: 3.5", "moment_nAm: 3.5\n    measure: {eeg: realistic-filter}", "responses.wave V.measure.eeg")]
    [InlineData("moment_nAm: 3.5", "moment_nAm: 3.5\n    measure: {meg: realistic-filter}", "responses.wave V.measure.meg")]
    [InlineData("amplitude_ratio: 3", "amplitude_ratio: 3, variance_ratio: {critical: 3.1, power: 0.9}", "target.variance_ratio")]
    [InlineData("amplitude_ratio: 3", "residual_nV: 40", "target.residual_nV")]
    [InlineData("amplitude_ratio: 3", "detection: {topography: plane}", "target.detection.topography")]
    [InlineData("amplitude_ratio: 3", "detection: {topography: unknown}", "target.detection.topography")]
    [InlineData("amplitude_ratio: 3", "detection: {covariance: estimated}", "target.detection.covariance")]
    [InlineData("rate_per_s: 11.1", "rate_per_s: 11.1, participants: 20", "protocol.participants")]
    [InlineData("rate_per_s: 11.1", "rate_per_s: 11.1, spread_between_people: 0.3", "protocol.spread_between_people")]
    public void Key_ThatIsNotActedOn_IsRefusedWithWhatToDoInstead(string place, string replacement, string key)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(place, replacement));
        Assert.Equal(key, problem.Key);
        Assert.Matches("not supported yet: .{10,}", problem.Message);
    }

    [Fact]
    public void EveryKeyThatIsNotActedOn_SaysWhatToDoInstead()
    {
        Assert.All(StudyKeys.All.Where(k => k.NotYet is not null), key => Assert.True(key.NotYet!.Length >= 10, key.Path));
        Assert.All(StudyKeys.All.Where(k => k.ShapesNotYet.Count > 0 || k.Shapes.OfType<ChoiceShape>().Any(c => c.NotYet.Count > 0)),
            key => Assert.True(key.InsteadOfShape.Length >= 10, key.Path));
    }
}
