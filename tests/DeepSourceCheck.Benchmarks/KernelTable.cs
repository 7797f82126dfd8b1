using System.Diagnostics;
using System.Globalization;

namespace DeepSourceCheck.Benchmarks;

/// <summary>The kernels on one thread in their units, with the goals beside them: the least, the median and the most of several passes, since other work on a machine only ever adds.</summary>
internal static class KernelTable
{
    private const int Passes = 31;

    /// <summary>Prints the table; returns seconds a dipole of each kernel, the least, for ratios.</summary>
    public static IReadOnlyDictionary<string, double> Print(TextWriter output)
    {
        var work = new KernelWork();
        double dipoles = KernelWork.Dipoles;
        double peak = Time(() => work.MultiplyAdds())[0];
        double peakRate = 2e-9 * KernelWork.PeakMultiplyAdds / peak;
        var least = new Dictionary<string, double>();
        output.WriteLine($"kernel                                         least   median     most   goal   unit, one thread; {work.Degrees:0.0} degrees on average");
        Row("eeg", "EEG, 4 layers", work.Eeg, 1e9 / (dipoles * KernelWork.Electrodes * work.Degrees), "0.25", "ns per dipole, electrode and degree");
        Row("meg", "MEG", work.Meg, 1e9 / (dipoles * KernelWork.Channels * 2), "2.2", "ns per dipole and coil point");
        Row("split", "split of 291 x 3", work.Split, 1e6 / dipoles, "0.4", "us a dipole");
        Row("projection", "projection, channel-mean and best-channel", () => work.Project(), 1e6 / dipoles, "0.35", "us a dipole");
        Row("whitening", "dense whitening, 291 channels", work.Whiten, 1e6 / dipoles, "", "us a dipole");
        double rate = 1e-9 * KernelWork.WhiteningFlops / least["whitening"];
        output.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"whitening: {rate:0.0} GFLOP/s useful, {100 * rate / peakRate:0} % of the multiply-add peak of {peakRate:0.0} GFLOP/s measured in this run; goal 65 %"));
        return least;

        void Row(string key, string name, Action pass, double scale, string goal, string unit)
        {
            double[] times = Time(pass);
            least[key] = times[0] / dipoles;
            output.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"{name,-42} {times[0] * scale,9:0.000} {times[times.Length / 2] * scale,8:0.000} {times[^1] * scale,8:0.000} {goal,6}   {unit}"));
        }
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
        return times;
    }
}
