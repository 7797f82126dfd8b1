using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Tables;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Keys of a response's course in time, and the table of its samples.</summary>
public class CourseTests
{
    private const string Moment = "moment_nAm: 3.5";

    private const string Steady = "moment_nAm: 3.5\n    kind: steady-state\n    frequency_Hz: 85\n    seconds: 2";

    private static Response Response(string replacement, string place = Moment) => StudyText.Read(StudyText.Small.With(place, replacement)).Study.Responses[0];

    [Fact]
    public void Course_IsReadInSiUnits()
    {
        Assert.Equal(new OscillationChoice(500, 2), Response(Moment + "\n    component_Hz: 500\n    cycles: 2").Waveform);
        Assert.Equal(new GaussianChoice(1.2e-3), Response(Moment + "\n    waveform: {gaussian_fwhm_ms: 1.2}\n    jitter_ms: 0.5").Waveform);
        Assert.Equal(0.5e-3, Response(Moment + "\n    waveform: {gaussian_fwhm_ms: 1.2}\n    jitter_ms: 0.5").Jitter);
        Assert.Equal(new WaveformFileChoice("points.tsv"), Response(Moment + "\n    waveform: points.tsv").Waveform);
        Response filter = Response(Moment + "\n    measure: {eeg: realistic-filter}\n    baseline_s: 60");
        Assert.Equal((5e-3, 60.0), (filter.PlaceError, filter.Baseline!.Value));
    }

    [Fact]
    public void SteadyState_HasTheBinOfATrial_AndNeedsNeitherBandNorRate()
    {
        string text = StudyText.Small.With(Moment, Steady).With("    band_Hz: [100, 1500]\n", "").With("{rate_per_s: 11.1}", "{session_min: 10}");
        Study study = StudyText.Read(text).Study;
        Assert.Equal(new SteadyState(85, 2), study.Responses[0].Steady);
        Assert.Equal(new Band(84.75, 85.25), study.Responses[0].Band);
        Assert.Equal(0.5, study.ProtocolFor(study.Responses[0])!.Rate);
    }

    [Theory]
    [InlineData(11.1, 0.5)]
    [InlineData(0.2, 0.2)]
    public void SteadyState_RunsAtTheSlowerOfRateAndTrial(double rate, double expected)
    {
        Study study = StudyText.Read(StudyText.Small.With(Moment, Steady).With("    band_Hz: [100, 1500]\n", "").With("rate_per_s: 11.1", FormattableString.Invariant($"rate_per_s: {rate}"))).Study;
        Assert.Equal(expected, study.ProtocolFor(study.Responses[0])!.Rate);
    }

    [Theory]
    [InlineData("jitter_ms: 0.3", "responses.wave V.jitter_ms", "waveform", "component_Hz")]
    [InlineData("cycles: 2", "responses.wave V.cycles", "component_Hz", "state it")]
    [InlineData("component_Hz: 500\n    cycles: 2\n    waveform: points.tsv", "responses.wave V.cycles", "beside waveform", "once")]
    [InlineData("frequency_Hz: 40", "responses.wave V.frequency_Hz", "steady-state", "kind")]
    [InlineData("waveform: absent.csv", "responses.wave V.waveform", "does not exist", "time_ms")]
    public void Course_ThatDoesNotFit_IsRefusedWithWhatToDo(string keys, string key, string part, string remedy)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Moment, $"{Moment}\n    {keys}"));
        Assert.Equal(key, problem.Key);
        Assert.Contains(part, problem.Message, StringComparison.Ordinal);
        Assert.Contains(remedy, problem.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("kind: steady-state\n    seconds: 2", "responses.wave V.frequency_Hz", "is missing")]
    [InlineData("kind: steady-state\n    frequency_Hz: 85\n    seconds: 0.001", "responses.wave V.seconds", "less than one cycle")]
    [InlineData("kind: steady-state\n    frequency_Hz: 85\n    seconds: 2\n    measured: peak-to-trough", "responses.wave V.measured", "baseline-to-peak")]
    [InlineData("kind: steady-state\n    frequency_Hz: 85\n    seconds: 2\n    component_Hz: 85", "responses.wave V.component_Hz", "transient")]
    public void SteadyState_ThatDoesNotFit_IsRefused(string keys, string key, string part)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Moment, $"{Moment}\n    {keys}").With("    band_Hz: [100, 1500]\n", ""));
        Assert.Equal(key, problem.Key);
        Assert.Contains(part, problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void SteadyState_OutsideAStatedBand_IsRefused_AndInsideItOnlySaid()
    {
        InputProblem problem = StudyText.Problem(StudyText.Small.With(Moment, Steady));
        Assert.Equal("responses.wave V.band_Hz", problem.Key);
        Assert.Contains("excludes", problem.Message, StringComparison.Ordinal);
        Assert.Contains(StudyText.Read(StudyText.Small.With(Moment, Steady).With("[100, 1500]", "[50, 1500]")).Warnings, w => w.Contains("band_Hz: has no effect", StringComparison.Ordinal));
    }

    [Fact]
    public void FreeTrigger_NeedsASamplingRate_AndAResponseThatItSmears()
    {
        InputProblem rate = StudyText.Problem(StudyText.Small.With("  meg: {coil: magnetometer}", "  meg: {coil: magnetometer}\n  trigger: free").With(Moment, Moment + "\n    component_Hz: 500"));
        Assert.Equal("sensors.trigger", rate.Key);
        InputProblem course = StudyText.Problem(StudyText.Small.With("  meg: {coil: magnetometer}", "  meg: {coil: magnetometer}\n  trigger: free\n  sampling_Hz: 5000"));
        Assert.Contains("free trigger", course.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void RealisticFilter_OfRegionsTogether_IsRefused() => Assert.Contains("one place",
        StudyText.Problem(StudyText.Small.With(Moment, Moment + "\n    counts: together\n    measure: {meg: realistic-filter}")).Message, StringComparison.Ordinal);

    [Fact]
    public void VarianceRatio_WithoutWindowRms_NeedsAWaveformAndAWindow()
    {
        string text = StudyText.Small.With("amplitude_ratio: 3", "variance_ratio: {critical: 3.1, power: 0.9}");
        Assert.Contains("states no waveform with window_ms", StudyText.Problem(text).Message, StringComparison.Ordinal);
        Assert.Null(((VarianceRatioChoice)StudyText.Read(text.With(Moment, Moment + "\n    component_Hz: 500\n    cycles: 2\n    window_ms: 10")).Study.Targets[0]).WindowRms);
    }

    [Theory]
    [InlineData("time_ms,value\n0,0\n1,x\n", 3, "value", "is not a number")]
    [InlineData("time_ms\tvalue\n0\t0\n1\t2\n0.5\t1\n", 4, "time_ms", "sort the rows")]
    [InlineData("time_ms,amplitude\n0,0\n1,1\n", 1, "value", "missing")]
    [InlineData("time_ms,value\n0,1\n", 0, null, "two samples")]
    [InlineData("time_ms,value\n0,0\n1,0\n", 0, "value", "no response")]
    [InlineData("time_ms,value\n0,0\n1,0,3\n", 3, null, "3 cells")]
    public void Table_WithAFault_NamesFileLineAndColumn(string text, int line, string? column, string part)
    {
        using var folder = new ScratchFolder();
        string path = System.IO.Path.Combine(folder.Path, "w.csv");
        File.WriteAllText(path, text);
        InputProblem problem = Assert.Throws<InputException>(() => WaveformTable.Read(path, "w.csv")).Problems[0];
        Assert.Equal("w.csv", problem.File);
        Assert.Contains(part, problem.Message, StringComparison.Ordinal);
        if (line > 0)
        {
            Assert.Equal(line, problem.Line);
        }

        if (column is not null)
        {
            Assert.Contains(column, problem.ToString(), StringComparison.Ordinal);
        }
    }

    [Theory]
    [InlineData("time_ms,value\r\n0,0\r\n1,2\r\n3,-1\r\n")]
    [InlineData("value\ttime_ms\n0\t0\n2\t1\n-1\t3\n")]
    public void Table_IsReadWithCommasOrTabs(string text)
    {
        using var folder = new ScratchFolder();
        string path = System.IO.Path.Combine(folder.Path, "w.csv");
        File.WriteAllText(path, text);
        var waveform = WaveformTable.Read(path, "w.csv");
        Assert.Equal((0.0, 3e-3), (waveform.FirstTime, waveform.LastTime));
        RelativeAssert.Equal(1, waveform.At(0.5e-3), 1e-12);
        RelativeAssert.Equal(-0.25, waveform.At(2.5e-3), 1e-12);
    }
}
