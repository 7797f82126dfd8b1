using System.Diagnostics;
using System.Globalization;

using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Benchmarks;

/// <summary>
/// The kernels on one thread in their units, with the goals beside them: the least, the median and the most of several passes, since other work on a machine only ever adds. One row for
/// each width of registers that the processor has: narrower ones are timed in processes of their own with the wider instructions switched off.
/// </summary>
internal static class KernelTable
{
    /// <summary>Argument with which this program starts itself: figures of one width, a line a kernel.</summary>
    public const string LinesArgument = "kernel-lines";

    private const int Passes = 31;

    private static readonly string[] Switches = ["DOTNET_EnableAVX512", "DOTNET_EnableAVX2"];

    /// <param name="Key">Word that <c>yardstick.py</c> knows.</param>
    /// <param name="Name">Name in the table.</param>
    /// <param name="Pass">One pass over all dipoles.</param>
    /// <param name="Scale">From seconds a pass to the unit.</param>
    /// <param name="Goal">Goal on AVX-512, with its unit.</param>
    private sealed record Kernel(string Key, string Name, Action Pass, double Scale, string Goal);

    /// <summary>Times of one kernel at one width.</summary>
    /// <param name="Bits">Width of the registers [bit].</param>
    /// <param name="Key">As in <see cref="Kernel"/>.</param>
    /// <param name="Seconds">Least, median and most of a pass [s].</param>
    private sealed record Figure(int Bits, string Key, double[] Seconds);

    /// <summary>Prints the table; returns seconds a dipole of each kernel at the widest registers, the least, for ratios.</summary>
    public static IReadOnlyDictionary<string, double> Print(TextWriter output)
    {
        var work = new KernelWork();
        List<Figure> figures = Measure(work);
        foreach (string name in Switches)
        {
            List<Figure> narrower = InAProcess(name);
            if (!figures.Any(f => f.Bits == narrower[0].Bits))      // the same again where the processor lacks what was switched off
            {
                figures.AddRange(narrower);
            }
        }

        output.WriteLine($"kernel                                     bits    least   median     most   goal at 512 bits, one thread; {work.Degrees:0.0} degrees on average");
        foreach (Kernel kernel in Kernels(work))
        {
            foreach (Figure figure in figures.Where(f => f.Key == kernel.Key))
            {
                double[] times = [.. figure.Seconds.Select(s => s * kernel.Scale)];
                output.WriteLine(string.Create(CultureInfo.InvariantCulture,
                    $"{(figure == figures.First(f => f.Key == kernel.Key) ? kernel.Name : ""),-42} {figure.Bits,4} {times[0],8:0.000} {times[1],8:0.000} {times[2],8:0.000}   {kernel.Goal}"));
            }
        }

        foreach (Figure peak in figures.Where(f => f.Key == "peak"))
        {
            double whitening = figures.First(f => f.Bits == peak.Bits && f.Key == "whitening").Seconds[0];
            double rate = 1e-9 * KernelWork.WhiteningFlops * KernelWork.Dipoles / whitening, most = 2e-9 * KernelWork.PeakMultiplyAdds / peak.Seconds[0];
            output.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"whitening, {peak.Bits} bits: {rate:0.0} GFLOP/s useful, {100 * rate / most:0} % of the multiply-add peak of {most:0.0} GFLOP/s measured in this run; goal 65 %"));
        }

        return figures.Where(f => f.Bits == figures[0].Bits).ToDictionary(f => f.Key, f => f.Seconds[0] / KernelWork.Dipoles);
    }

    /// <summary>Prints the figures of this process, for the one that started it.</summary>
    public static void PrintLines(TextWriter output)
    {
        foreach (Figure f in Measure(new KernelWork()))
        {
            output.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{f.Bits}\t{f.Key}\t{f.Seconds[0]:R}\t{f.Seconds[1]:R}\t{f.Seconds[2]:R}"));
        }
    }

    private static Kernel[] Kernels(KernelWork work) =>
    [
        new("eeg", "EEG, 4 layers", work.Eeg, 1e9 / (KernelWork.Dipoles * KernelWork.Electrodes * work.Degrees), "0.25 ns per dipole, electrode and degree"),
        new("meg", "MEG", work.Meg, 1e9 / (KernelWork.Dipoles * KernelWork.Channels * 2.0), "2.2 ns per dipole and coil point"),
        new("split", "split of 291 x 3", work.Split, 1e6 / KernelWork.Dipoles, "0.4 us a dipole"),
        new("projection", "projection, channel-mean and best-channel", () => work.Project(), 1e6 / KernelWork.Dipoles, "0.35 us a dipole"),
        new("whitening", "dense whitening, 291 channels", work.Whiten, 1e6 / KernelWork.Dipoles, "us a dipole; see below"),
    ];

    private static List<Figure> Measure(KernelWork work) =>
        [.. Kernels(work).Append(new("peak", "", () => work.MultiplyAdds(), 1, "")).Select(k => new Figure(64 * LaneWidth.Lanes, k.Key, Time(k.Pass)))];

    private static List<Figure> InAProcess(string switchedOff)
    {
        var start = new ProcessStartInfo("dotnet", [typeof(KernelTable).Assembly.Location, LinesArgument]) { RedirectStandardOutput = true };
        start.Environment[switchedOff] = "0";
        using Process process = Process.Start(start)!;
        string[] lines = process.StandardOutput.ReadToEnd().Split('\n', StringSplitOptions.RemoveEmptyEntries);
        process.WaitForExit();
        return process.ExitCode == 0
            ? [.. lines.Select(line => line.Split('\t')).Select(p => new Figure(int.Parse(p[0], CultureInfo.InvariantCulture), p[1], [.. p[2..].Select(s => double.Parse(s, CultureInfo.InvariantCulture))]))]
            : throw new InvalidOperationException($"the kernels could not be timed with {switchedOff}=0");
    }

    private static double[] Time(Action pass)
    {
        for (int k = 0; k < 3; k++)
        {
            pass();
        }

        var times = new double[Passes];
        for (int k = 0; k < Passes; k++)
        {
            long start = Stopwatch.GetTimestamp();
            pass();
            times[k] = Stopwatch.GetElapsedTime(start).TotalSeconds;
        }

        Array.Sort(times);
        return [times[0], times[Passes / 2], times[^1]];
    }
}
