using System.Diagnostics;

namespace DeepSourceCheck.Tests.Support;

/// <summary>What a program prints when it is run as a process of its own.</summary>
internal static class ProcessText
{
    public static string Of(string program, params string[] arguments)
    {
        ProcessStartInfo start = new(program, arguments) { RedirectStandardOutput = true, RedirectStandardError = true };
        using Process process = Process.Start(start)!;
        Task<string> error = process.StandardError.ReadToEndAsync();
        string output = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        Assert.True(process.ExitCode == 0, error.Result);
        return output;
    }
}
