using System.Diagnostics;
using System.Globalization;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>Runs the real executable in a process of its own.</summary>
internal static class RealProcess
{
    /// <summary>The program's assembly, beside the tests'.</summary>
    public static string Assembly { get; } = Path.Combine(AppContext.BaseDirectory, "deepsourcecheck.dll");

    // Generous: the machine may be busy. Only a hang reaches it.
    private static readonly TimeSpan Longest = TimeSpan.FromSeconds(120);

    public static Process Start(string folder, params string[] arguments)
    {
        // A job that a script starts in the background ignores SIGINT, and so does all that it starts: the program must be asked as a terminal asks it.
        string[] command = IgnoresInterrupts() ? ["env", "--default-signal=INT", DotNet(), Assembly] : [DotNet(), Assembly];
        var start = new ProcessStartInfo(command[0]) { WorkingDirectory = folder, RedirectStandardOutput = true, RedirectStandardError = true, RedirectStandardInput = true };
        foreach (string argument in command.Skip(1).Concat(arguments))
        {
            start.ArgumentList.Add(argument);
        }

        return Process.Start(start)!;
    }

    /// <summary>Runs to the end.</summary>
    public static Outcome Run(string folder, params string[] arguments)
    {
        using Process process = Start(folder, arguments);
        return End(process);
    }

    /// <summary>Waits for the end and collects what was printed.</summary>
    public static Outcome End(Process process)
    {
        process.StandardInput.Close();
        Task<string> standardOutput = process.StandardOutput.ReadToEndAsync();
        Task<string> standardError = process.StandardError.ReadToEndAsync();
        if (!process.WaitForExit(Longest))
        {
            process.Kill();
            Assert.Fail($"still running after {Longest}");
        }

        process.WaitForExit();
        return new(process.ExitCode, standardOutput.Result, standardError.Result);
    }

    /// <summary>Runs a tool of the system, which must succeed.</summary>
    public static void Tool(string name, params string[] arguments)
    {
        using Process process = Process.Start(name, arguments);
        Assert.True(process.WaitForExit(Longest) && process.ExitCode == 0, $"{name} {string.Join(' ', arguments)} failed");
    }

    /// <summary>Whether this process ignores SIGINT (number 2, hence bit 1 of the mask that Linux shows).</summary>
    private static bool IgnoresInterrupts()
    {
        const string Status = "/proc/self/status", Mask = "SigIgn:";
        string? line = File.Exists(Status) ? File.ReadLines(Status).FirstOrDefault(l => l.StartsWith(Mask, StringComparison.Ordinal)) : null;
        return line is not null && (ulong.Parse(line[Mask.Length..].Trim(), NumberStyles.HexNumber, CultureInfo.InvariantCulture) & 0b10) != 0;
    }

    /// <summary>The host that runs this test also runs the program.</summary>
    private static string DotNet() => Environment.ProcessPath is { } path && Path.GetFileNameWithoutExtension(path) == "dotnet" ? path : "dotnet";
}
