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
        string[] lines;
        try
        {
            var start = new ProcessStartInfo("python3", [script]) { RedirectStandardOutput = true, RedirectStandardError = true };
            foreach (string variable in new[] { "OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS" })
            {
                start.Environment[variable] = "1";
            }

            using Process process = Process.Start(start)!;
            Task<string> errors = process.StandardError.ReadToEndAsync();
            lines = process.StandardOutput.ReadToEnd().Split('\n', StringSplitOptions.RemoveEmptyEntries);
            process.WaitForExit();
            if (process.ExitCode != 0)
            {
                output.WriteLine($"yardstick skipped: {errors.Result.Trim().Split('\n')[^1]} (apt-get install python3-numpy)");
                return 0;
            }
        }
        catch (System.ComponentModel.Win32Exception error)
        {
            output.WriteLine($"yardstick skipped: python3 does not start: {error.Message}");
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
}
