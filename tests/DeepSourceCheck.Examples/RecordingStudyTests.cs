using System.Text.Json;

using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Examples;

/// <summary>Study 18 on baselines of known noise, which the tests write: what a person's recording does in them.</summary>
public class RecordingStudyTests
{
    private const int Rate = 250, Seconds = 64;
    private const double RmsMicrovolts = 12;

    private static readonly string Study = SourceTree.Study("18-own-baseline", "study.yaml");

    // The 21 sites of the layout and the mastoids that the derivation brings along.
    private static readonly string[] Sites =
        ["Fp1", "Fpz", "Fp2", "F7", "F3", "Fz", "F4", "F8", "T7", "C3", "Cz", "C4", "T8", "P7", "P3", "Pz", "P4", "P8", "O1", "Oz", "O2", "M1", "M2"];

    // White noise, independent between the electrodes; a swing of 500 uV at one of them for a fifth of a second every so many seconds.
    private static byte[] Baseline(double rms = RmsMicrovolts, int swingEvery = 0) => new EdfBytes
    {
        PerRecord = Rate,
        Signals = [.. Sites.Select((site, k) => new EdfTestSignal("EEG " + site, Values(rms, swingEvery, k)) { Prefilter = "HP:0.1Hz LP:100Hz", PhysicalMinimum = -1000, PhysicalMaximum = 1000 })],
    }.ToArray();

    private static double[] Values(double rms, int swingEvery, int site)
    {
        var random = new Random(site);
        double[] values = [.. Enumerable.Range(0, Seconds * Rate).Select(_ => Normal.Sample(random, 0, rms))];
        for (int second = 5; swingEvery > 0 && site == 0 && second < Seconds; second += swingEvery)
        {
            for (int n = 0; n < Rate / 5; n++)
            {
                values[second * Rate + n] += 500;
            }
        }

        return values;
    }

    private static JsonElement Recording(AssessedStudy study, string response) =>
        study.Root.GetProperty("responses").EnumerateArray().Single(r => r.GetProperty("name").GetString() == response).GetProperty("noise_recording");

    [Fact]
    public void Study18_SaysWhatWasReadOffTheBaseline()
    {
        AssessedStudy study = AssessedStudy.RunBeside(Study, "baseline.edf", Baseline(swingEvery: 10));
        JsonElement slow = Recording(study, "slow response"), following = Recording(study, "following response");
        Assert.Equal("baseline.edf", slow.GetProperty("file").GetString());
        Assert.Equal(60, slow.GetProperty("seconds_read").GetDouble());
        Assert.Equal([36.0, 44.0], following.GetProperty("band_read_Hz").EnumerateArray().Select(v => v.GetDouble()));

        // Six swings, each in one to three of the 108 segments of half a second: the filter's lower edge of 1 Hz rings for that long.
        Assert.InRange(slow.GetProperty("rejected_share").GetDouble(), 6 / 109.0, 18 / 107.0);
        Assert.Equal(2 * 39 * slow.GetProperty("seconds_used").GetDouble(), slow.GetProperty("independent_samples").GetDouble(), 1e-6);

        // 12 uV rms over 125 Hz: 12 sqrt(39/125 22/23) = 6.56 uV in 1 to 40 Hz against the average; in a bin of half a Hz 12 sqrt(0.5/125 22/23) = 0.742 uV.
        // 5 % is several standard errors of the median electrode, and what the shares of rejected swings leave.
        Assert.InRange(slow.GetProperty("median_rms_uV").GetDouble(), 6.56 * 0.95, 6.56 * 1.05);
        Assert.InRange(following.GetProperty("median_rms_uV").GetDouble(), 0.742 * 0.95, 0.742 * 1.05);
    }

    [Fact]
    public void Study18_HalfTheNoiseNeedsAQuarterOfTheTrials()
    {
        // N goes with the variance; rounding up leaves 1/N, the 16 bits of the file far less.
        AssessedStudy study = AssessedStudy.RunBeside(Study, "baseline.edf", Baseline()), quiet = AssessedStudy.RunBeside(Study, "baseline.edf", Baseline(RmsMicrovolts / 2));
        long whole = Trials(study), half = Trials(quiet);
        Assert.InRange(whole, 4 * (half - 1) * 0.999, 4 * half * 1.001);

        static long Trials(AssessedStudy s) => AssessedStudy.Trials(s.Result("slow response", "thalamus-left", "EEG", "tangential", "Cz-mastoids"));
    }

    [Fact]
    public void Study18_WithoutItsBaseline_IsRefusedByName() =>
        Assert.Contains("baseline.edf", AssessedStudy.Refusal(Study), StringComparison.Ordinal);
}
