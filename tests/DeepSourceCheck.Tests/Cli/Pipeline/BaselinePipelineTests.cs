using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Noise.Recordings;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Tests.Cli.Pipeline;

/// <summary>Studies whose EEG noise is a recording that the test writes.</summary>
public sealed class BaselinePipelineTests : IDisposable
{
    private const string Flat = "eeg_sensor_uV_rms: 2", Layout = "layout: ten-twenty-21";
    private const double Rate = 500;

    private static readonly (string, string) Table = (Layout, "electrodes: electrodes.tsv");

    private readonly PreparedText _text = new PreparedText().With("electrodes.tsv", "name\tx\ty\tz\nCz\t0\t-18\t97\nT8\t92\t-18\t5\nT7\t-92\t-18\t5\nFz\t0\t37.2\t78.6\n");

    public void Dispose() => _text.Dispose();

    // White noise of one rms at Cz, T8, T7, Fz; a recording of an invented quiet head.
    private static EdfBytes White(double seconds = 60, double rms = 10, int seed = 1) => new()
    {
        PerRecord = (int)Rate,
        Signals = [.. new[] { "EEG Cz", "EEG T8", "EEG T7", "EEG Fz" }.Select((label, k) => new EdfTestSignal(label, Noise(seconds, rms, seed + k)) { Prefilter = "HP:0.1Hz LP:200Hz" })],
    };

    private static double[] Noise(double seconds, double rms, int seed)
    {
        var random = new Random(seed);
        return [.. Enumerable.Range(0, (int)(seconds * Rate)).Select(_ => Normal.Sample(random, 0, rms))];
    }

    private BaselinePipelineTests With(EdfBytes file)
    {
        File.WriteAllBytes(_text.At("r.edf"), file.ToArray());
        return this;
    }

    private static (string, string)[] Changes(string recording, params (string, string)[] more) => [Table, (Flat, $"eeg_recording: {recording}"), .. more];

    private string Refusal(string recording, params (string, string)[] more) => _text.Refusal(PreparedText.Study, Changes(recording, more));

    private IReadOnlyList<string> Warnings(string recording, params (string, string)[] more) => _text.Warnings(PreparedText.Study, Changes(recording, more));

    private RecordedNoise Recorded(string recording = "r.edf") => Assert.Single(_text.Prepare(PreparedText.Study, Changes(recording)).Setup.Noise!.EegRecorded);

    private static void Says(IEnumerable<string> warnings, string part) => Assert.Contains(warnings, w => w.Contains(part, StringComparison.Ordinal));

    [Fact]
    public void WhiteNoise_GivesTheFiguresOfTheSameFlatNoise()
    {
        // 10 uV rms over 250 Hz are 10 sqrt(99/250) = 6.293 uV in 1 to 100 Hz at every electrode. 12,000 independent samples: 1.3 % of a variance, 0.06 dB; four of those.
        With(White());
        Assessment recorded = _text.Assess(PreparedText.Study, Changes("r.edf")), flat = _text.Assess(PreparedText.Study, Table, (Flat, "eeg_sensor_uV_rms: 6.293"));
        Assert.Empty(recorded.Warnings);
        foreach ((MeasureResult a, MeasureResult b) in recorded.Responses[0].Regions[0].Results.Zip(flat.Responses[0].Regions[0].Results))
        {
            Assert.Equal((a.Modality, a.Measure, a.Direction), (b.Modality, b.Measure, b.Direction));
            Assert.Equal(b.SnrDb.P50 is null, a.SnrDb.P50 is null);
            Assert.Equal(b.SnrDb.P50 ?? 0, a.SnrDb.P50 ?? 0, 0.25);
        }
    }

    [Fact]
    public void EdfAndBdf_GiveTheSameCovariance()
    {
        // Steps of 400/65535 uV against noise of 10 uV: their variance, step^2/12, is 3e-8 of it, and their products with the noise average out to less than 1e-5.
        With(White());
        double[] edf = Recorded().Covariance;
        With(White() with { Bdf = true });
        RelativeAssert.Close(edf, Recorded().Covariance, 1e-5);
    }

    [Theory]
    [InlineData("nV", 1e3)]
    [InlineData("mV", 1e-3)]
    public void Units_DoNotMatter(string unit, double perMicrovolt)
    {
        EdfBytes file = White(20);
        With(file);
        double[] expected = Recorded().Covariance;
        // The physical range has eight characters, so that of 200 uV is exact in each of these units.
        With(file with
        {
            Signals = [.. file.Signals.Select(s => s with { Values = [.. s.Values.Select(v => v * perMicrovolt)], Unit = unit, PhysicalMinimum = -200 * perMicrovolt, PhysicalMaximum = 200 * perMicrovolt })],
        });
        RelativeAssert.Close(expected, Recorded().Covariance, 1e-9);
    }

    [Fact]
    public void WhatWasReadOff_StandsInTheAssumptions_TheResultAndTheChain()
    {
        With(White());
        Assessment assessment = _text.Assess(PreparedText.Study, Changes("{file: r.edf, from_s: 5, to_s: 55, limit_uV: 18.5}", ("direction: tangential", "direction: tangential, measure: {eeg: matched-filter}")));
        RecordedNoise noise = assessment.Responses[0].Recording!;
        Assert.Equal((50.0, new Band(1, 100)), (noise.SecondsRead, noise.Band));
        Assert.InRange(noise.RejectedShare, 0.05, 0.95);
        RelativeAssert.Equal(2 * 99 * noise.SecondsUsed, noise.IndependentSamples, 1e-12);
        string[] found = [.. assessment.Assumptions.Where(a => a.Key.StartsWith("noise.eeg_recording (1 to 100 Hz): ", StringComparison.Ordinal)).Select(a => a.Key.Split(": ")[1])];
        Assert.Equal(["seconds used", "rejected share", "independent samples", "shrinkage", "held-out share"], found);
        Assert.Equal("r.edf", assessment.Inputs.Single(f => f.Path == "r.edf").Path);
        DerivedNumber power = assessment.Responses[0].Regions[0].Verdicts.Single(v => v.Modality == Modality.Eeg).Chain.Single(l => l.Symbol == "q");
        Assert.Contains("what filters from half of the recording reach on the other half", power.Source, StringComparison.Ordinal);
    }

    [Fact]
    public void HeldOutShare_IsAFactorOfTheMatchedFilterAlone()
    {
        With(White(7));
        PreparedStudy prepared = _text.Prepare(PreparedText.Study, Changes("{file: r.edf, segment_ms: 50}"));
        RecordedNoise noise = Assert.Single(prepared.Setup.Noise!.EegRecorded);
        Assert.InRange(noise.HeldOutShare, 0.8, 0.9999);
        var exact = new DeepSourceCheck.Core.Noise.NoiseModel { EegRows = 4, MegRows = 40, EegPerTrial = noise.Covariance, MegPerTrial = prepared.Setup.Noise.MegPerTrial };
        IReadOnlyList<MeasureResult> with = Results(prepared.Setup), without = Results(prepared.Setup with { Noise = exact });
        foreach ((MeasureResult a, MeasureResult b) in with.Zip(without).Where(r => r.First.Modality == Modality.Eeg && r.First.SnrDb.P50 is not null))
        {
            double expected = a.Measure == "matched-filter" ? 10 * Math.Log10(noise.HeldOutShare) : 0;
            Assert.Equal(expected, a.SnrDb.P50!.Value - b.SnrDb.P50!.Value, 1e-9);
        }

        static IReadOnlyList<MeasureResult> Results(DeepSourceCheck.Core.Planning.StudySetup setup) =>
            DeepSourceCheck.Core.Planning.Assessor.Assess(setup, null, null, CancellationToken.None)[0].Regions[0].Results;
    }

    [Fact]
    public void SeveralResponses_EachHaveTheNoiseOfTheirBand()
    {
        With(White());
        PreparedStudy prepared = _text.Prepare(PreparedText.Study, Changes("r.edf",
            ("responses: [{", "responses: [{name: q, regions: [probe], moment_nAm: 10, band_Hz: [1, 34], direction: tangential, window_ms: 200}, {")));
        RecordedNoise[] noises = [.. prepared.Setup.Noise!.EegRecorded];
        Assert.Equal([new Band(1, 34), new Band(1, 100)], noises.Select(n => n.Band));
        Assert.Equal([0.2, 1.0], noises.Select(n => n.SegmentSeconds));
        RelativeAssert.Equal(3, noises[1].Covariance[0] / noises[0].Covariance[0], 0.1, "white noise goes with the bandwidth");
    }

    [Fact]
    public void SteadyStateResponse_ReadsTheBandAboutItsBin()
    {
        With(White());
        Assessment assessment = _text.Assess(PreparedText.Study, Changes("r.edf", ("band_Hz: [1, 100]", "kind: steady-state, frequency_Hz: 40, seconds: 2")));
        RecordedNoise noise = assessment.Responses[0].Recording!;
        Assert.Equal(new Band(36, 44), noise.BandRead);
        RelativeAssert.Equal(100 * 1e-12 * 0.5 / 250 * 3 / 4, noise.Covariance[0], 0.2);
    }

    [Fact]
    public void PrefilterAgainstTheBand_IsRefusedOrTold_WithBoth()
    {
        EdfBytes file = White(20);
        With(file with { Signals = [.. file.Signals.Select(s => s with { Prefilter = "HP:1Hz LP:70Hz" })] });
        Says(Warnings("r.edf"), "r.edf was recorded with the filters 'HP:1Hz LP:70Hz' (EEG Cz), r has the band 1 to 100 Hz: part of its noise was taken out before");
        string refused = Refusal("r.edf", ("band_Hz: [1, 100]", "band_Hz: [100, 150]"));
        Assert.Contains("'HP:1Hz LP:70Hz'", refused, StringComparison.Ordinal);
        Assert.Contains("the band 100 to 150 Hz: the recording holds nothing of it", refused, StringComparison.Ordinal);
    }

    [Fact]
    public void SlowSampling_IsRefusedWithTheRateThatIsNeeded() =>
        Assert.Contains("was sampled at 500 Hz, less than 2.5 times the upper edge of r's band (250 Hz)", With(White(5)).Refusal("r.edf", ("band_Hz: [1, 100]", "band_Hz: [1, 250]")), StringComparison.Ordinal);

    [Fact]
    public void RmsFarFromTheUsual_IsToldOrRefused()
    {
        // The table of the total: 18 uV or so in 1 to 100 Hz. 400 uV at the limits of the file is far above.
        Assert.Contains("far from the usual", With(Loud(5000)).Refusal("{file: r.edf, limit_uV: 100000}", ("responses:", "accept_implausible: [noise.eeg_recording.limit_uV]\nresponses:")), StringComparison.Ordinal);
        Says(With(White(20, 1.5)).Warnings("r.edf"), "the rms of the median electrode against the average,");

        static EdfBytes Loud(double rms)
        {
            EdfBytes file = White(20, rms);
            return file with { Signals = [.. file.Signals.Select(s => s with { PhysicalMinimum = -40000, PhysicalMaximum = 40000 })] };
        }
    }

    [Fact]
    public void WhatTheRecordingCannotTell_IsRefused()
    {
        With(White(20));
        Assert.Contains("sensors.eeg.reference: is none, but a recording is always against some reference", Refusal("r.edf", ("reference: average", "reference: none")), StringComparison.Ordinal);
        Assert.Contains("no signal is electrode", _text.Refusal(PreparedText.Study, (Flat, "eeg_recording: r.edf")), StringComparison.Ordinal);
        EdfBytes file = White(20);
        With(file with { Signals = [.. file.Signals.Take(3), file.Signals[3] with { Values = new double[10000] }] });
        Assert.Contains("signal 4 (EEG Fz): is flat", Refusal("r.edf"), StringComparison.Ordinal);
    }

    [Fact]
    public void WhatIsDoubtful_IsTold()
    {
        EdfBytes file = White(20);
        With(file with { Records = "-1", Signals = [file.Signals[0] with { PhysicalMinimum = -15, PhysicalMaximum = 15 }, .. file.Signals.Skip(1)] });
        IReadOnlyList<string> warnings = Warnings("{file: r.edf, limit_uV: 19}");
        Says(warnings, "leaves the number of data records open (-1); the file holds 20");
        Says(warnings, "end of the digital range and may be clipped in EEG Cz (");
        Says(warnings, "% of the segments exceed the limit of limit_uV over the band of r");
    }

    [Fact]
    public void FlawsOfTheFile_NameFileAndField()
    {
        With(White(20) with { Records = "21" });
        Assert.Contains("r.edf: number of data records: is 21, but the file holds 20", Refusal("r.edf"), StringComparison.Ordinal);
        Assert.Contains("to_s: is 90 s, but the recording ends at 20 s", With(White(20)).Refusal("{file: r.edf, to_s: 90}"), StringComparison.Ordinal);
        Assert.Contains("noise.eeg_recording.to_s: must lie after from_s, 5 s", Refusal("{file: r.edf, from_s: 5, to_s: 5}"), StringComparison.Ordinal);
        Assert.Contains("stands beside eeg_sensor_uV_rms: a recording is all of the noise", _text.Refusal(PreparedText.Study, Table, (Flat, Flat + ", eeg_recording: r.edf")), StringComparison.Ordinal);
    }
}
