using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>The course of a response in time, in SI units.</summary>
internal sealed record BoundCourse
{
    public SteadyState? Steady { get; init; }

    public double? Component { get; init; }

    public WaveformChoice? Waveform { get; init; }

    public double Jitter { get; init; }

    public double PlaceError { get; init; }

    public double? Baseline { get; init; }
}

/// <summary>How a response runs in time: steady state, dominant frequency, waveform, jitter; and how well a filter for it is built.</summary>
internal static class CourseBinder
{
    // Cycles by which a trial may miss a whole number: the power in its bin falls by less than 1e-3.
    private const double WholeCycles = 0.01;

    private static readonly string[] SteadyKeys = ["frequency_Hz", "seconds"], CourseKeys = ["component_Hz", "cycles", "waveform"], Modalities = ["eeg", "meg"];

    /// <summary>Binds.</summary>
    /// <param name="entry">The response.</param>
    /// <param name="steady">True where it says kind: steady-state.</param>
    /// <param name="sensors">What records it.</param>
    public static BoundCourse Bind(Section entry, bool steady, BoundSensors sensors)
    {
        foreach (string name in (steady ? CourseKeys : SteadyKeys).Where(entry.States))
        {
            entry.Problem(name, steady
                ? "is of a transient response; a steady-state one is a sinusoid at frequency_Hz: remove it"
                : "is of a steady-state response; write kind: steady-state, or remove it");
            entry.Skip(name);
        }

        double? frequency = steady ? Needed(entry, "frequency_Hz") : null, seconds = steady ? Needed(entry, "seconds") : null;
        double? component = steady ? null : entry.Number("component_Hz"), cycles = steady ? null : entry.Number("cycles");
        if (frequency is { } f && seconds is { } t && f * t < 1)
        {
            entry.Problem("seconds", $"{KeyShape.Text(t)} s holds less than one cycle of {KeyShape.Text(f)} Hz; a trial needs whole cycles of the response: make it longer");
        }
        else if (frequency is { } hertz && seconds is { } trial && Math.Abs(hertz * trial - Math.Round(hertz * trial)) > WholeCycles)
        {
            double cyclesHeld = hertz * trial, nearest = Math.Round(cyclesHeld);
            entry.Warn("seconds", FormattableString.Invariant($"{trial:0.######} s holds {cyclesHeld:0.###} cycles of {hertz:0.######} Hz: the power of the bin is counted as of whole cycles, and leaks into its neighbours with any other; write {nearest / hertz:0.######} ({nearest:0} cycles)"));
        }

        if (component is not null && !entry.States("cycles") && !entry.States("jitter_ms") && !entry.States("lags_ms") && !sensors.FreeTrigger)
        {
            entry.Warn("component_Hz", "has no effect: without cycles it serves jitter_ms and lags_ms alone, and the response states neither; add cycles for a waveform, or remove it");
        }

        WaveformChoice? waveform = steady ? null : Waveform(entry, component, cycles);
        bool known = waveform is not null || component is not null || frequency is not null;
        double jitter = entry.States("jitter_ms") || waveform is not null ? entry.Number("jitter_ms") ?? 0 : 0;
        if (!known && (jitter > 0 || sensors.FreeTrigger) && !CourseKeys.Concat(SteadyKeys).Any(entry.States))
        {
            string what = jitter > 0 ? "needs to know what it smears" : "scatters with a free trigger (sensors.trigger), by what depends on the response's course";
            entry.Problem("jitter_ms", $"{what}: state a waveform (samples, or {{gaussian_fwhm_ms: ...}}), component_Hz with cycles, or component_Hz alone");
        }

        string[] filters = [.. Modalities.Where(m => (entry.Map("measure")?.Raw(m) as PlacedText)?.Text == Names.RealisticFilter)];
        if (filters.Length == 0)
        {
            const string reason = "the verdict stands on no realistic-filter";
            entry.WithoutEffect("place_error_mm", reason);
            entry.WithoutEffect("baseline_s", reason);
        }

        return new()
        {
            Steady = frequency is { } at && seconds is { } length ? new(at, length) : null,
            Component = component,
            Waveform = waveform,
            Jitter = jitter / 1000,
            PlaceError = filters.Length > 0 ? Si.FromMm(entry.Number("place_error_mm") ?? 0) : 0,
            Baseline = filters.Length > 0 ? entry.Number("baseline_s") : null,
        };
    }

    private static double? Needed(Section entry, string name)
    {
        if (!entry.States(name))
        {
            entry.Problem(name, "is missing; a steady-state response needs frequency_Hz and seconds, the length of one trial");
        }

        return entry.Number(name);
    }

    private static WaveformChoice? Waveform(Section entry, double? component, double? cycles)
    {
        if (entry.States("waveform") && entry.States("cycles"))
        {
            entry.Problem("cycles", "stands beside waveform; state the course once: a waveform, or component_Hz with cycles");
            return null;
        }

        if (entry.States("cycles") && !entry.States("component_Hz"))
        {
            entry.Problem("cycles", "needs component_Hz, the frequency of the cycles; state it");
            return null;
        }

        if (component is { } f && cycles is { } n)
        {
            return new OscillationChoice(f, n);
        }

        return entry.Raw("waveform") switch
        {
            PlacedText => new WaveformFileChoice(entry.Text("waveform")!),
            PlacedMap when entry.Map("waveform")!.Number("gaussian_fwhm_ms") is { } width => new GaussianChoice(width / 1000),
            _ => null,
        };
    }
}
