using System.Diagnostics;
using System.Globalization;

using DeepSourceCheck.Cli;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>Ctrl-C and its kin end the real program quickly and leave nothing behind. Unix only: other systems have no such signals to send.</summary>
public sealed class InterruptTests : IDisposable
{
    // The program ends within a second; the rest is for a machine that runs other things at the same time.
    private const double LongestEnd = 3.0;

    private readonly string _folder = Directory.CreateTempSubdirectory("dsc-interrupt-").FullName;

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Theory]
    [InlineData("INT")]
    [InlineData("TERM")]
    public void SignalWhileReading_EndsWith130(string signal)
    {
        // A pipe that nobody writes to: reading it never returns by itself.
        string pipe = Path.Combine(_folder, "study.yaml");
        RealProcess.Tool("mkfifo", pipe);
        using Process process = RealProcess.Start(_folder, "check", pipe);
        WaitForHandlers(process);
        Assert.False(process.HasExited, "the program did not wait for the pipe: " + (process.HasExited ? process.StandardError.ReadToEnd() : ""));
        AssertEnds(process, signal, signals: 1);
    }

    [Theory]
    [InlineData("INT", 1)]
    [InlineData("TERM", 1)]
    [InlineData("INT", 2)]
    public void SignalDuringAssess_EndsWith130AndLeavesNothing(string signal, int signals)
    {
        string study = HeavyStudy();
        string[] before = Names();
        using Process process = RealProcess.Start(_folder, "assess", study, "--out", Path.Combine(_folder, "out"));
        WaitForTemporaryFolder(process, before);
        AssertEnds(process, signal, signals);
        Assert.Equal(before, Names());
    }

    [Fact]
    public void SignalDuringLeadfield_LeavesNothing()
    {
        string study = HeavyStudy();
        string[] before = Names();
        using Process process = RealProcess.Start(_folder, "leadfield", study, "--out", Path.Combine(_folder, "deeper", "out"));
        WaitForTemporaryFolder(process, before);
        AssertEnds(process, "INT", signals: 1);
        Assert.Equal(before, Names());
    }

    [Fact]
    public void EarlierResult_SurvivesAnInterruptedRun()
    {
        string study = HeavyStudy();
        string result = Path.Combine(_folder, "out");
        Assert.Equal(ExitStatus.Done, RealProcess.Run(_folder, "assess", "--out", result, "--without", "figures,report").Status);
        byte[] whole = File.ReadAllBytes(Path.Combine(result, "assessment.json"));
        string[] before = Names();
        using Process process = RealProcess.Start(_folder, "assess", study, "--out", result);
        WaitForTemporaryFolder(process, before);
        AssertEnds(process, "INT", signals: 1);
        Assert.Equal(before, Names());
        Assert.Equal(whole, File.ReadAllBytes(Path.Combine(result, "assessment.json")));
    }

    // A signal that comes before the program listens ends it as the system does. Linux tells which signals a process catches; elsewhere the wait is long enough on a machine at rest.
    private static void WaitForHandlers(Process process)
    {
        const ulong IntAndTerm = 1UL << (2 - 1) | 1UL << (15 - 1);
        string status = $"/proc/{process.Id}/status";
        long start = Stopwatch.GetTimestamp();
        while (File.Exists(status) && Stopwatch.GetElapsedTime(start).TotalSeconds < 30)
        {
            string caught = File.ReadLines(status).FirstOrDefault(line => line.StartsWith("SigCgt:", StringComparison.Ordinal)) ?? "SigCgt: 0";
            if ((ulong.Parse(caught[7..].Trim(), NumberStyles.HexNumber, CultureInfo.InvariantCulture) & IntAndTerm) == IntAndTerm)
            {
                break;
            }

            Thread.Sleep(20);
        }

        Thread.Sleep(700);
    }

    private static void AssertEnds(Process process, string signal, int signals)
    {
        long start = Stopwatch.GetTimestamp();
        for (int i = 0; i < signals; i++)
        {
            RealProcess.Tool("kill", "-" + signal, process.Id.ToString(CultureInfo.InvariantCulture));
        }

        Outcome outcome = RealProcess.End(process);
        double seconds = Stopwatch.GetElapsedTime(start).TotalSeconds;
        Assert.True(outcome.Status == ExitStatus.Interrupted, $"status {outcome.Status}: {outcome.Error}");
        Assert.True(seconds <= LongestEnd, $"ended {seconds:0.00} s after the signal");
        Assert.DoesNotContain("   at ", outcome.Error, StringComparison.Ordinal);
        Assert.Empty(outcome.Out);
    }

    private string[] Names() => [.. Directory.EnumerateFileSystemEntries(_folder).Select(f => Path.GetFileName(f)).Order(StringComparer.Ordinal)];

    /// <summary>Waits until the program has begun to write: the moment at which an interruption could leave something.</summary>
    private void WaitForTemporaryFolder(Process process, string[] before)
    {
        long start = Stopwatch.GetTimestamp();
        while (Names().SequenceEqual(before))
        {
            Assert.False(process.HasExited, "the program ended before it wrote: " + (process.HasExited ? process.StandardError.ReadToEnd() : ""));
            Assert.True(Stopwatch.GetElapsedTime(start).TotalSeconds < 60, "nothing was written within a minute");
            Thread.Sleep(5);
        }
    }

    /// <summary>Some 1.5 million dipoles under many electrodes: long enough to be interrupted on any machine.</summary>
    private string HeavyStudy()
    {
        string file = Path.Combine(_folder, "heavy.yaml");
        File.WriteAllText(file, """
            title: A ball of many dipoles
            head:
              spheres: {preset: adult-4}
            sensors:
              eeg: {layout: ten-five-329, reference: average}
              meg: {coil: axial-gradiometer, sites: 300, baseline_mm: 60, gap_mm: 30}
            regions:
              - {name: ball, spacing_mm: 0.65, ellipsoid: {centre_mm: [0, -18, 5], semi_axes_mm: [46, 46, 46]}}
            responses:
              - {name: any, regions: [ball], moment_nAm: 10, band_Hz: [1, 40], direction: tangential}
            noise: {eeg_sensor_uV_rms: 8, meg_sensor_fT_rms: 200}
            """);
        return file;
    }
}
