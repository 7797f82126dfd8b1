using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Keys of the noise beyond plain densities: corners, tables, a factor, the room.</summary>
public class NoiseKeysTests
{
    private const string Brain = "  brain: default";

    private static StudyReading Read(string replacement) => StudyText.Read(StudyText.Small.With(Brain, replacement));

    [Fact]
    public void Corners_AreReadInHertz()
    {
        NoiseChoice noise = Read("  brain: default\n  eeg_corner_Hz: 2\n  meg_corner_Hz: 0.5").Study.Noise!;
        Assert.Equal((2.0, 0.5), (noise.EegCorner, noise.MegCorner));
        NoiseChoice white = StudyText.Read(StudyText.Small).Study.Noise!;
        Assert.Equal((0.0, 0.0), (white.EegCorner, white.MegCorner));
    }

    [Fact]
    public void Brain_TakesTablesAndAFactor()
    {
        NoiseChoice noise = Read("  brain: {eeg_table: points.tsv, meg_table: rows.tsv, scale: 0.7}").Study.Noise!;
        Assert.Equal((true, "points.tsv", "rows.tsv", 0.7), (noise.Brain, noise.BrainEegTable, noise.BrainMegTable, noise.BrainScale));
        NoiseChoice one = Read("  brain: {eeg_table: points.tsv}").Study.Noise!;
        Assert.Equal((true, "points.tsv", null, 1.0), (one.Brain, one.BrainEegTable, one.BrainMegTable, one.BrainScale));
    }

    [Fact]
    public void Environment_IsReadInSi_LeftInAndWhiteUnlessStated()
    {
        Assert.Equal(new EnvironmentChoice(3e-15, 0, false), Read(Brain + "\n  environment: {meg_fT_per_rtHz: 3}").Study.Noise!.Environment);
        Assert.Equal(new EnvironmentChoice(3e-15, 5, true), Read(Brain + "\n  environment: {meg_fT_per_rtHz: 3, corner_Hz: 5, removed: true}").Study.Noise!.Environment);
        Assert.Null(Read(Brain + "\n  environment: none").Study.Noise!.Environment);
    }

    private const string EegDensity = "  eeg_sensor_nV_per_rtHz: 20\n";

    // The reader asks only whether the file is there: any file stands in for a recording.
    private static StudyReading Recorded(string value) => StudyText.Read(StudyText.Small.With(EegDensity, $"  eeg_recording: {value}\n"));

    [Fact]
    public void Recording_IsReadInSi_WithItsDefaults()
    {
        Assert.Equal(new RecordingChoice("points.tsv", 1e-4), Recorded("points.tsv").Study.Noise!.EegRecording);
        RecordingChoice all = Recorded("{file: points.tsv, channels: [a, b], reference: Cz, from_s: 10, to_s: 190, segment_ms: 500, limit_uV: 50}").Study.Noise!.EegRecording!;
        Assert.Equal(["a", "b"], all.Channels!);
        Assert.Equal(new RecordingChoice("points.tsv", 5e-5) { Reference = "Cz", From = 10, To = 190, Segment = 0.5 }, all with { Channels = null });
        Assumption limit = Recorded("points.tsv").Assumptions.Single(a => a.Key == "noise.eeg_recording.limit_uV");
        Assert.Equal((100.0, "uV", false), (limit.Value, limit.Unit, limit.FromStudy));
    }

    [Theory]
    [InlineData("{from_s: 1}", "noise.eeg_recording.file", "is missing")]
    [InlineData("none.edf", "noise.eeg_recording", "does not exist")]
    [InlineData("{file: points.tsv, limit_uV: 0}", "noise.eeg_recording.limit_uV", "out of range|above 0")]
    [InlineData("{file: points.tsv, limit_uV: 6000}", "noise.eeg_recording.limit_uV", "more than 10 times outside")]
    [InlineData("{file: points.tsv, from_s: -1}", "noise.eeg_recording.from_s", "out of range|from 0")]
    [InlineData("{file: points.tsv, from_s: 20, to_s: 10}", "noise.eeg_recording.to_s", "must lie after from_s, 20 s")]
    [InlineData("{file: points.tsv, to: 10}", "noise.eeg_recording.to", "unknown key|to_s")]
    public void WrongRecording_NamesItsKey(string value, string key, string parts)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(EegDensity, $"  eeg_recording: {value}\n"));
        Assert.Equal(key, problem.Key);
        Assert.All(parts.Split('|'), part => Assert.Contains(part, problem.Message, StringComparison.Ordinal));
    }

    [Fact]
    public void EveryNewKey_StandsInTheAssumptions_WithItsOrigin()
    {
        IReadOnlyList<Assumption> all = Read("  brain: {eeg_table: points.tsv}\n  eeg_corner_Hz: 2\n  environment: {meg_fT_per_rtHz: 3, removed: true}").Assumptions;
        Assert.All(new[] { "noise.brain.eeg_table", "noise.eeg_corner_Hz", "noise.environment.meg_fT_per_rtHz", "noise.environment.removed" }, key => Assert.True(all.Single(a => a.Key == key).FromStudy, key));
        Assert.All(new[] { "noise.brain.scale", "noise.environment.corner_Hz" }, key => Assert.False(all.Single(a => a.Key == key).FromStudy, key));
        Assert.Equal("fT/sqrt(Hz)", all.Single(a => a.Key == "noise.environment.meg_fT_per_rtHz").Unit);
    }

    [Theory]
    [InlineData("  brain: {}", "noise.brain", "holds no key|scale")]
    [InlineData("  brain: {scale: 0}", "noise.brain.scale", "out of range|above 0")]
    [InlineData("  brain: {scale: 50}", "noise.brain.scale", "more than 10 times outside")]
    [InlineData("  brain: {eeg_table: none.csv}", "noise.brain.eeg_table", "does not exist")]
    [InlineData("  brain: {scale: 0.7, table: points.tsv}", "noise.brain.table", "unknown key|eeg_table")]
    [InlineData("  brain: yes", "noise.brain", "default or none; or keys with values")]
    [InlineData("  eeg_corner_Hz: -1", "noise.eeg_corner_Hz", "out of range|from 0")]
    [InlineData("  environment: {removed: true}", "noise.environment.meg_fT_per_rtHz", "is missing|meg_fT_per_rtHz: 3")]
    [InlineData("  environment: {meg_fT_per_rtHz: 3, removed: yes}", "noise.environment.removed", "'yes' is not allowed|true or false")]
    [InlineData("  environment: {meg_fT_per_rtHz: 3000}", "noise.environment.meg_fT_per_rtHz", "more than 10 times outside")]
    [InlineData("  environment: quiet", "noise.environment", "none; or keys with values")]
    public void WrongValue_NamesItsKey(string replacement, string key, string parts)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Brain, replacement));
        Assert.Equal(key, problem.Key);
        Assert.True(problem.Line > 0);
        Assert.All(parts.Split('|'), part => Assert.Contains(part, problem.Message, StringComparison.Ordinal));
    }

    [Fact]
    public void Environment_BesideAFlatFigure_OrWithoutKnownCoils_IsRefused()
    {
        InputProblem flat = StudyText.Problem(StudyText.Tables.With("meg_sensor_fT_rms: 200", "meg_sensor_fT_rms: 200, environment: {meg_fT_per_rtHz: 3}"));
        Assert.Equal("noise.environment", flat.Key);
        Assert.Contains("the room's included", flat.Message, StringComparison.Ordinal);
        InputProblem imported = StudyText.Problem(StudyText.Imported.With("  meg_covariance: meg.npy", "  meg_sensor_fT_per_rtHz: 5\n  environment: {meg_fT_per_rtHz: 3, removed: true}"));
        Assert.Equal("noise.environment", imported.Key);
        Assert.Contains("imported leadfields do not tell", imported.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void KeysWithoutTheirModality_HaveNoEffect_AndSayWhy()
    {
        string eegOnly = StudyText.Small.With("  meg: {coil: magnetometer}\n", "").With("  meg_sensor_fT_per_rtHz: 5\n", "")
            .With(Brain, "  brain: {scale: 0.8, meg_table: rows.tsv}\n  meg_corner_Hz: 1\n  environment: {meg_fT_per_rtHz: 3, removed: true}");
        StudyReading reading = StudyText.Read(eegOnly);
        Assert.Null(reading.Study.Noise!.Environment);
        Assert.All(new[] { "noise.brain.meg_table", "noise.meg_corner_Hz", "noise.environment" },
            key => Assert.Contains(reading.Warnings, w => w.Contains(key, StringComparison.Ordinal) && w.Contains("has no effect", StringComparison.Ordinal)));
    }
}
