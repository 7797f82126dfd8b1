using System.ComponentModel;
using System.Diagnostics;
using System.Globalization;

namespace DeepSourceCheck.Benchmarks;

/// <summary>The plain 2 mm sphere of <see cref="VoxelTable"/> beside PETSc: conjugate gradients with smoothed aggregation, the same volume, loads and relative residual.</summary>
internal static class VoxelPetsc
{
    /// <summary>Runs <c>voxels-petsc [MILLIMETRES] [LOADS]</c>: PETSc solves every so many of the 355 loads, its time is scaled up; on two ranks where mpirun works, else on one.</summary>
    public static int Run(string[] args, TextWriter output)
    {
        string millimetres = args.Length > 0 ? args[0] : "2", loads = args.Length > 1 ? args[1] : "12";
        string script = Path.Combine(AppContext.BaseDirectory, "voxels_petsc.py");
        string reason = "";
        string[]? line = Line("mpirun", ["--allow-run-as-root", "--oversubscribe", "-n", "2", "/usr/bin/python3", script, millimetres, loads], ref reason)
            ?? Line("/usr/bin/python3", [script, millimetres, loads], ref reason);
        if (line is null)
        {
            output.WriteLine($"PETSc skipped: {reason}; apt-get install python3-petsc4py python3-numpy openmpi-bin");
            return 0;
        }

        output.WriteLine(VoxelTable.Heading);
        double ours = VoxelTable.Case("plain", double.Parse(millimetres, CultureInfo.InvariantCulture) / 1000, 2, output);
        double[] numbers = [.. line.Select(text => double.Parse(text, CultureInfo.InvariantCulture))];
        double theirs = numbers[1] + numbers[2] * (VoxelWork.Pairs + VoxelWork.Dense);
        output.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"PETSc on {numbers[0]:0} ranks: set-up {numbers[1]:0.0} s, {numbers[2]:0.000} s a load, {numbers[3]:0.0} iterations: {theirs:0} s for 355 loads; ours {ours:0.0} s: {theirs / ours:0.0} times"));
        return 0;
    }

    private static string[]? Line(string program, string[] arguments, ref string reason)
    {
        var start = new ProcessStartInfo(program, arguments) { RedirectStandardOutput = true, RedirectStandardError = true };
        start.Environment["OMP_NUM_THREADS"] = "1";
        start.Environment["OPENBLAS_NUM_THREADS"] = "1";
        try
        {
            using Process process = Process.Start(start)!;
            Task<string> errors = process.StandardError.ReadToEndAsync();
            string[] parts = process.StandardOutput.ReadToEnd().Trim().Split('\t');
            process.WaitForExit();
            string[] said = errors.Result.Trim().Split('\n');
            reason = said.LastOrDefault(text => text.Contains("Error", StringComparison.Ordinal)) ?? said[^1];
            return process.ExitCode == 0 && parts.Length == 4 ? parts : null;
        }
        catch (Win32Exception error)
        {
            reason = error.Message;
            return null;
        }
    }
}
