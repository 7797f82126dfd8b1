using System.Diagnostics;
using System.Globalization;

namespace DeepSourceCheck.Benchmarks;

/// <summary>The same kernels in vectorised numpy on one thread, beside ours in one run.</summary>
internal static class Yardstick
{
    /// <summary>Runs yardstick.py where python3 with numpy is present; else says why not.</summary>
    public static int Run(TextWriter output)
    {
        string script = Path.Combine(AppContext.BaseDirectory, "yardstick.py");
        string[]? lines = null;
        string reason = "";
        foreach (string python in new[] { "python3", "/usr/bin/python3" }.TakeWhile(_ => lines is null))
        {
            lines = Lines(python, script, ref reason);
        }

        if (lines is null)
        {
            output.WriteLine($"yardstick skipped: {reason}; apt-get install python3-numpy");
            return 0;
        }

        IReadOnlyDictionary<string, double> ours = KernelTable.Print(output);
        foreach (string line in lines)
        {
            string[] parts = line.Split('\t');
            double theirs = double.Parse(parts[1], CultureInfo.InvariantCulture);
            output.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{parts[0],-12} numpy {1e6 * theirs,8:0.00} us a dipole, ours {1e6 * ours[parts[0]],6:0.00}: {theirs / ours[parts[0]]:0} times"));
        }

        return 0;
    }

    private static string[]? Lines(string python, string script, ref string reason)
    {
        var start = new ProcessStartInfo(python, [script]) { RedirectStandardOutput = true, RedirectStandardError = true };
        foreach (string variable in new[] { "OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS" })
        {
            start.Environment[variable] = "1";
        }

        try
        {
            using Process process = Process.Start(start)!;
            Task<string> errors = process.StandardError.ReadToEndAsync();
            string[] lines = process.StandardOutput.ReadToEnd().Split('\n', StringSplitOptions.RemoveEmptyEntries);
            process.WaitForExit();
            reason = errors.Result.Trim().Split('\n')[^1];
            return process.ExitCode == 0 ? lines : null;
        }
        catch (System.ComponentModel.Win32Exception error)
        {
            reason = error.Message;
            return null;
        }
    }
}
