using System.Globalization;

using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Waveforms;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Files.Tables;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>The waveforms of a study: read, and judged against the bands in which they are recorded.</summary>
internal static class WaveformAssembly
{
    // Cycles of the upper edge of the band over which a waveform may last: beyond, it is a recording rather than a response.
    private const double MostCycles = 2000;

    // Share of the peak at which a table may start and end: below, the step is lost in any noise of the table itself.
    private const double MostStep = 0.02;

    // A band that leaves less than this of the peak does not record the response.
    private const double LeastKept = 1e-3;

    /// <summary>Reads the tables of samples.</summary>
    /// <param name="reading">The study as read.</param>
    /// <param name="inputs">Receives the files that are read.</param>
    /// <param name="warnings">Receives what the user must know.</param>
    /// <returns>By the response's key.</returns>
    /// <exception cref="InputException">A table is wrong, or does not fit the response's band.</exception>
    public static IReadOnlyDictionary<string, SampledWaveform> Build(StudyReading reading, InputDigests inputs, List<string> warnings)
    {
        var tables = new Dictionary<string, SampledWaveform>(StringComparer.Ordinal);
        foreach (Response response in reading.Study.Responses.Where(r => r.Waveform is not null))
        {
            Waveform course = response.Waveform switch
            {
                OscillationChoice o => new WindowedOscillation(o.Frequency, o.Cycles),
                GaussianChoice g => new GaussianPulse(g.Width),
                WaveformFileChoice file => tables[response.Key] = Read(file, response, inputs),
                _ => throw new InvalidOperationException($"no waveform for {response.Waveform!.GetType().Name}"),
            };
            Judge(reading, response, course, warnings);
        }

        return tables;
    }

    // The larger of the first and the last value, over the peak.
    private static double Step(Waveform course) =>
        Math.Max(Math.Abs(course.At(course.FirstTime)), Math.Abs(course.At(course.LastTime))) / course.Knots.Max(t => Math.Abs(course.At(t)));

    private static SampledWaveform Read(WaveformFileChoice file, Response response, InputDigests inputs)
    {
        try
        {
            (string path, string display) = inputs.Use(file.File);
            return WaveformTable.Read(path, display);
        }
        catch (InputException error)
        {
            throw new InputException([.. error.Problems.Select(p => p with { Key = p.Key ?? response.Key + ".waveform" })]);
        }
    }

    private static void Judge(StudyReading reading, Response response, Waveform course, List<string> warnings)
    {
        if (course is SampledWaveform && Step(course) is > MostStep and var step)
        {
            warnings.Add(string.Create(CultureInfo.InvariantCulture,
                $"{response.Key}.waveform: the table starts or ends at {step * 100:0} % of its peak; outside it the response is 0, so that this step counts as part of it: let the table start and end at the baseline"));
        }

        string key = response.Key + (response.Waveform is OscillationChoice ? ".cycles" : ".waveform");
        double cycles = (course.LastTime - course.FirstTime) * response.Band.High;
        if (cycles > MostCycles)
        {
            throw new InputException([reading.Problem(key, string.Create(CultureInfo.InvariantCulture,
                $"{course.Description} lasts {cycles:0} cycles of the band's upper edge; at most {MostCycles:0} are computed: keep the response alone, or lower the band's upper edge"))]);
        }

        var recorded = new RecordedWaveform(course, response.Band, response.Measured, reading.Study.LatencyDeviation(response), []);
        if (recorded.Kept < LeastKept)
        {
            throw new InputException([reading.Problem(key, string.Create(CultureInfo.InvariantCulture,
                $"of {course.Description} the band of {response.Band.Low:0.###} to {response.Band.High:0.###} Hz and a jitter of {recorded.Jitter * 1000:0.###} ms leave {recorded.Kept * 100:0.###} % of the peak: such a response is not recorded; move the band to where it has its energy"))]);
        }

        double loss = -20 * Math.Log10(recorded.Kept);
        if (Math.Abs(loss) >= 1)
        {
            warnings.Add(string.Create(CultureInfo.InvariantCulture,
                $"{response.Name}: filter (the band, rectangular) and jitter {(loss > 0 ? $"take {loss:0.0} dB off" : $"add {-loss:0.0} dB to")} the peak; amplitude_ratio and SNR are read on what remains, detection on the whole waveform"));
        }
    }
}
