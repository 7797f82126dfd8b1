using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>How strong a response is, in SI units.</summary>
/// <param name="Moment">Moment [A m]; 1 nAm where it is found from an amplitude.</param>
internal sealed record BoundStrength(double Moment)
{
    public MomentRange? Range { get; init; }

    public AmplitudeChoice? Amplitude { get; init; }

    public DensityChoice? Density { get; init; }
}

/// <summary>The strength of a response: a moment or its range, an amplitude at the scalp, or a density over an area; and how regions share it.</summary>
internal static class StrengthBinder
{
    private const string Instruction =
        "state the strength once: moment_nAm (a number, usually 0.05 to 300, or {low, typical, high}), amplitude {peak_uV, derivation}, or density {nAm_per_mm2, area_mm2, open_field}";

    private static readonly string[] Ways = ["moment_nAm", "amplitude", "density"];

    public static BoundStrength? Bind(Section entry, BoundSensors sensors)
    {
        string[] stated = [.. Ways.Where(entry.States)];
        if (stated.Length == 0)
        {
            entry.Problem("moment_nAm", $"is missing; {Instruction}");
            return null;
        }

        if (stated.Length > 1)
        {
            entry.Problem(stated[1], $"stands beside {stated[0]}; {Instruction}");
            return null;
        }

        return stated[0] switch
        {
            "amplitude" => entry.Map("amplitude") is { } amplitude ? Amplitude(amplitude, sensors) : null,
            "density" => entry.Map("density") is { } density ? Density(entry, density) : null,
            _ => entry.Map("moment_nAm") is { } range ? Range(range)
                : entry.Number("moment_nAm") is { } moment ? new(Si.FromNanoAmpereMetres(moment)) : null,
        };
    }

    /// <summary>Signed shares, their absolute values summing to 1, and lags [s] of regions that act together; empty where not stated.</summary>
    public static (IReadOnlyList<double> Shares, IReadOnlyList<double> Lags) Together(Section entry, bool together, double? component)
    {
        int regions = (entry.Raw("regions") as PlacedTexts)?.Items.Count ?? 0;
        IReadOnlyList<double> shares = Each(entry, "shares", together, regions), lags = Each(entry, "lags_ms", together, regions);
        double sum = shares.Sum(Math.Abs);
        if (shares.Count > 0 && !(sum > 0))
        {
            entry.Problem("shares", "are all zero: no region would act; give at least one a share");
            return ([], []);
        }

        if (lags.Any(l => l != 0) && component is null)
        {
            entry.Problem("lags_ms", "needs component_Hz: by how much a lag puts regions out of step depends on the frequency; state it");
        }

        // Empty lists are one and the same object: studies that state none compare equal.
        return (shares.Count == 0 ? [] : [.. shares.Select(s => s / sum)], lags.Count == 0 ? [] : [.. lags.Select(l => l / 1000)]);
    }

    /// <summary>A lag puts regions out of step at one frequency; of a waveform with a beginning and an end the whole course would be summed.</summary>
    public static void CheckLags(Section entry, IReadOnlyList<double> lags)
    {
        foreach (string name in Courses.Where(n => lags.Any(l => l != 0) && entry.States(n)))
        {
            entry.Problem("lags_ms", $"is not supported yet with {name}, whose whole course would be summed with its lags; leave {name} out (lags then hold at component_Hz), or remove lags_ms");
        }
    }

    private static readonly string[] Courses = ["waveform", "cycles"];

    private static IReadOnlyList<double> Each(Section entry, string name, bool together, int regions)
    {
        if (!entry.States(name))
        {
            return [];
        }

        if (!together)
        {
            entry.Problem(name, "is of regions that act together; write counts: together, or remove it");
            entry.Skip(name);
            return [];
        }

        IReadOnlyList<double>? values = entry.Numbers(name);
        if (values is not null && values.Count != regions)
        {
            entry.Problem(name, $"has {values.Count} entries for {regions} regions; give one for each, in the order of regions");
            return [];
        }

        return values ?? [];
    }

    private static BoundStrength? Range(Section range)
    {
        double? low = range.Number("low"), typical = range.Number("typical"), high = range.Number("high");
        if (low is not { } a || typical is not { } b || high is not { } c)
        {
            return null;
        }

        if (!(a <= b && b <= c))
        {
            range.Problem($"{KeyShape.Text(a)}, {KeyShape.Text(b)}, {KeyShape.Text(c)} are not ordered; low must be at most typical, and typical at most high");
            return null;
        }

        return new(Si.FromNanoAmpereMetres(b)) { Range = new(Si.FromNanoAmpereMetres(a), Si.FromNanoAmpereMetres(c)) };
    }

    private static BoundStrength? Amplitude(Section amplitude, BoundSensors sensors)
    {
        double? peak = amplitude.Number("peak_uV");
        string? derivation = amplitude.Text("derivation");
        if (!sensors.HasEeg)
        {
            amplitude.Problem("the study has no electrodes in which an amplitude could be read; state sensors.eeg (EEG need not carry the verdict), or moment_nAm");
            return null;
        }

        if (derivation is not null && SensorBinder.WhyNoDerivation(derivation) is { } fault)
        {
            amplitude.Problem("derivation", fault);
            return null;
        }

        return peak is { } p && derivation is not null
            ? new(Si.FromNanoAmpereMetres(1)) { Amplitude = new(Si.FromMicrovolts(p), derivation) }
            : null;
    }

    private static BoundStrength? Density(Section entry, Section density)
    {
        double? perArea = density.Number("nAm_per_mm2"), area = density.Number("area_mm2"), open = density.Number("open_field");
        if (perArea is not { } d || area is not { } mm2 || open is not { } share)
        {
            return null;
        }

        // nAm/mm2 is mA m/m2; mm2 is 1e-6 m2
        var choice = new DensityChoice(d / 1000, mm2 / 1e6, share);
        entry.Assume("moment_nAm", Si.ToNanoAmpereMetres(choice.Moment), "density x area x open field, all stated by the study", Grade.Derived);
        return new(choice.Moment) { Density = choice };
    }
}
