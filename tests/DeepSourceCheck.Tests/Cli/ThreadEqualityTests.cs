using System.Diagnostics;

using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>The real program on one, two and three processors: the same bytes.</summary>
public class ThreadEqualityTests
{
    // 8,000 dipoles: a region so large that percentiles are counted in classes and take every n-th direction.
    private const string Study = """
        title: Threads
        head:
          spheres: {preset: adult-4}
        sensors:
          eeg: {layout: ten-twenty-21, reference: average}
          meg: {coil: axial-gradiometer, sites: 30, baseline_mm: 60, gap_mm: 30}
        noise: {eeg_sensor_uV_rms: 2.0, meg_sensor_fT_rms: 180}
        regions:
          - {name: ball, ellipsoid: {centre_mm: [5, -10, 10], semi_axes_mm: [25, 25, 25]}, spacing_mm: 2}
        responses:
          - name: r
            regions: [ball]
            moment_nAm: 10
            measured: baseline-to-peak
            band_Hz: [1, 100]
            direction: tangential
        target: {amplitude_ratio: 3}

        """;

    [Fact]
    public void Results_AreTheSameBytes_ForAnyNumberOfThreads()
    {
        string[] files = ["assessment.json", "regions.csv", "dipoles.csv"];
        List<byte[][]> found = [];
        foreach (string processors in new[] { "1", "2", "3" })
        {
            using var folder = new ScratchFolder();
            folder.Write("study.yaml", Study);
            Environment.SetEnvironmentVariable("DOTNET_PROCESSOR_COUNT", processors);
            Outcome outcome;
            try
            {
                using Process process = RealProcess.Start(folder.Path, "assess", "study.yaml", "--without", "figures,report", "--out", "results");
                outcome = RealProcess.End(process);
            }
            finally
            {
                Environment.SetEnvironmentVariable("DOTNET_PROCESSOR_COUNT", null);
            }

            Assert.True(outcome.Status == 0, outcome.Error);
            found.Add([.. files.Select(file => File.ReadAllBytes(Path.Combine(folder.Path, "results", file)))]);
        }

        Assert.True(found[0][2].Length > 1_000_000, "dipoles.csv holds the dipoles");
        for (int k = 0; k < files.Length; k++)
        {
            Assert.True(found[0][k].AsSpan().SequenceEqual(found[1][k]), $"{files[k]} differs between 1 and 2 threads");
            Assert.True(found[0][k].AsSpan().SequenceEqual(found[2][k]), $"{files[k]} differs between 1 and 3 threads");
        }
    }
}
