using System.Diagnostics;
using System.Globalization;

namespace DeepSourceCheck.Benchmarks;

/// <summary>
/// The published program as a user runs it, process by process, on 1 and 2 threads: wall time, processor time, peak memory, with the goals beside them.
/// Options: `--program FILE` times an executable that is there; else it is published, ready to run. `--runs N` (3). `--folder FOLDER` for studies and results.
/// </summary>
internal static class WholeProcess
{
    private const string Lean = "--without dipoles,figures,report,maps";

    private static readonly (string Name, string Arguments, string Goal)[] Jobs =
    [
        ("--help", "--help", "0.1 s"),
        ("check, default study", "check", "0.1 s"),
        ("assess, default study, to report", "assess --out OUT", "1.5 s (aim 1)"),
        ("300,000 dipoles, diagonal noise", $"assess diagonal.yaml {Lean} --out OUT", "0.8 s (aim 0.5) on 2 threads, 300 MB"),
        ("300,000 dipoles, dense noise", $"assess dense.yaml {Lean} --out OUT", "1.5 s (aim 1.2) on 2 threads, 300 MB"),
        ("300,000 dipoles, dipoles.csv", "assess diagonal.yaml --without figures,report,maps --out OUT", "5 s on 2 threads"),
    ];

    /// <summary>Runs all jobs.</summary>
    public static int Run(string[] options, TextWriter output)
    {
        string? Option(string name) => Array.IndexOf(options, name) is >= 0 and { } at && at + 1 < options.Length ? options[at + 1] : null;
        string folder = Path.GetFullPath(Option("--folder") ?? Path.Combine(Path.GetTempPath(), "deepsourcecheck-benchmarks"));
        int runs = int.Parse(Option("--runs") ?? "3", CultureInfo.InvariantCulture);
        WholeStudies.Write(folder);
        string program = Option("--program") ?? Publish(Path.Combine(folder, "program"), output);
        output.WriteLine($"{"job",-36} threads   wall s: least  median    most   processor s: least   peak MB   goal");
        var failed = false;
        foreach ((string name, string arguments, string goal) in Jobs)
        {
            foreach (int threads in new[] { 1, 2 })
            {
                List<(double Wall, double Processor, long Peak)> found = [];
                for (int k = 0; k < runs; k++)
                {
                    found.Add(Time(Path.GetFullPath(program), arguments.Replace("OUT", Path.Combine(folder, "results"), StringComparison.Ordinal), folder, threads, ref failed));
                }

                double[] wall = [.. found.Select(f => f.Wall).Order()];
                output.WriteLine(string.Create(CultureInfo.InvariantCulture,
                    $"{name,-36} {threads,7} {wall[0],15:0.000} {wall[wall.Length / 2],7:0.000} {wall[^1],7:0.000} {found.Min(f => f.Processor),20:0.00} {found.Max(f => f.Peak) / 1e6,9:0}   {goal}"));
            }
        }

        return failed ? 1 : 0;
    }

    private static string Publish(string folder, TextWriter output)
    {
        string project = Path.Combine(Root(), "src", "DeepSourceCheck.Cli");
        output.WriteLine("publishing, ready to run ...");
        using Process process = Process.Start(new ProcessStartInfo("dotnet", $"publish \"{project}\" -c Release -r {System.Runtime.InteropServices.RuntimeInformation.RuntimeIdentifier} --self-contained false -o \"{folder}\" --nologo -v q -nodeReuse:false"))!;
        process.WaitForExit();
        return process.ExitCode == 0 ? Path.Combine(folder, "deepsourcecheck") : throw new InvalidOperationException("the program could not be published");
    }

    private static string Root()
    {
        string? folder = AppContext.BaseDirectory;
        while (folder is not null && !File.Exists(Path.Combine(folder, "DeepSourceCheck.sln")))
        {
            folder = Path.GetDirectoryName(folder);
        }

        return folder ?? throw new InvalidOperationException("run it inside the repository, or give --program");
    }

    // Peak memory and processor time are the kernel's own figures, read until the process ends; without /proc they stay 0.
    private static (double Wall, double Processor, long Peak) Time(string program, string arguments, string folder, int threads, ref bool failed)
    {
        var start = new ProcessStartInfo(program, arguments) { WorkingDirectory = folder, RedirectStandardOutput = true, RedirectStandardError = true };
        start.Environment["DOTNET_PROCESSOR_COUNT"] = threads.ToString(CultureInfo.InvariantCulture);
        long begun = Stopwatch.GetTimestamp();
        using Process process = Process.Start(start)!;
        Task<string> text = process.StandardOutput.ReadToEndAsync(), errors = process.StandardError.ReadToEndAsync();
        long peak = 0;
        double processor = 0;
        do
        {
            try
            {
                string status = File.ReadAllText($"/proc/{process.Id}/status");
                int at = status.IndexOf("VmHWM:", StringComparison.Ordinal);
                peak = at < 0 ? peak : 1024 * long.Parse(status.AsSpan(at + 6, status.IndexOf("kB", at, StringComparison.Ordinal) - at - 6).Trim(), CultureInfo.InvariantCulture);
                processor = Math.Max(processor, process.TotalProcessorTime.TotalSeconds);
            }
            catch (Exception error) when (error is IOException or InvalidOperationException or UnauthorizedAccessException or System.ComponentModel.Win32Exception)
            {
                // it has just ended
            }
        }
        while (!process.WaitForExit(5));
        double wall = Stopwatch.GetElapsedTime(begun).TotalSeconds;
        if (process.ExitCode != 0)
        {
            failed = true;
            Console.Error.WriteLine($"{arguments}: exit status {process.ExitCode}: {errors.Result}");
        }

        _ = text.Result;
        return (wall, processor, peak);
    }
}
