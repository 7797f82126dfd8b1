using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>What the study records with.</summary>
/// <param name="HasEeg">True when the study asks for EEG, even where its keys are wrong.</param>
/// <param name="HasMeg">True when the study asks for MEG, even where its keys are wrong.</param>
/// <param name="Imported">True for imported leadfields.</param>
/// <param name="Coil">Kind of coil of a generated array, or null.</param>
internal sealed record BoundSensors(bool HasEeg, bool HasMeg, bool Imported, string? Coil)
{
    public EegChoice? Eeg { get; init; }

    public IReadOnlyList<string> Derivations { get; init; } = [];

    public MegChoice? Meg { get; init; }

    public Band? EegBandwidth { get; init; }

    public Band? MegBandwidth { get; init; }

    public double? Sampling { get; init; }

    /// <summary>True where the study says that stimuli fall between samples.</summary>
    public bool FreeTrigger { get; init; }
}

/// <summary>`sensors`: electrodes, derivations, coils, bandwidths, sampling.</summary>
internal static class SensorBinder
{
    private const string NoEeg = "the study has no electrodes";
    private const string NoMeg = "the study has no MEG sensors";

    private static readonly string[] ElectrodeKeys = ["layout", "electrodes", "coordinates"];
    private static readonly string[] MegKeys = ["meg", "meg_edge_deg"];
    private static readonly string[] ArrayKeys = ["sites", "baseline_mm", "gap_mm"];

    public static BoundSensors Bind(Section root)
    {
        Section? head = root.Map("head");
        Section? leadfields = head?.Map("leadfields");
        bool imported = head?.States("leadfields") == true && !head.States("spheres");
        Section? sensors = root.Map("sensors");
        bool hasEeg = imported ? leadfields?.States("eeg") == true : sensors?.States("eeg") == true;
        bool hasMeg = imported ? leadfields?.States("meg") == true : sensors?.States("meg") == true;
        if (!imported && !hasEeg && !hasMeg && (sensors is not null || !root.States("sensors")))
        {
            root.Problem("sensors", "the study has neither electrodes nor MEG sensors; state sensors.eeg, sensors.meg or both");
        }

        sensors ??= root.Entry("sensors");
        string? coil = !imported && sensors.Map("meg") is { } m && m.Raw("coil") is PlacedText c ? c.Text : null;
        var bound = new BoundSensors(hasEeg, hasMeg, imported, coil);
        return bound with
        {
            Eeg = imported ? ImportedEeg(sensors, hasEeg, hasMeg) : hasEeg ? Eeg(sensors) : null,
            Derivations = [.. Derivations(sensors, hasEeg).Concat(Named(root, hasEeg)).Distinct()],
            Meg = imported ? ImportedMeg(sensors, hasMeg) : Meg(sensors, hasMeg),
            EegBandwidth = Bandwidth(sensors, "eeg", hasEeg, NoEeg),
            MegBandwidth = Bandwidth(sensors, "meg", hasMeg, NoMeg),
            Sampling = sensors.Number("sampling_Hz"),
            FreeTrigger = Trigger(sensors),
        };
    }

    private static EegChoice? Eeg(Section sensors)
    {
        if (sensors.Map("eeg") is not { } eeg)
        {
            return null;
        }

        string? which = eeg.OneOf("write layout for sites by rule, or electrodes for a table", "layout", "electrodes");
        ReferenceChoice? reference = Reference(eeg);
        if (which == "layout" && eeg.States("coordinates"))
        {
            eeg.Problem("coordinates", "belongs to a table of electrodes; remove it, or write electrodes instead of layout");
            eeg.Skip("coordinates");
        }

        string? layout = which == "layout" ? eeg.Text("layout") : null;
        string? electrodes = which == "electrodes" ? eeg.Text("electrodes") : null;
        string? coordinates = which == "electrodes" ? eeg.Text("coordinates") : null;
        return reference is not null && (layout ?? electrodes) is not null ? new(layout, electrodes, coordinates, reference) : null;
    }

    private static EegChoice? ImportedEeg(Section sensors, bool hasEeg, bool hasMeg)
    {
        if (!hasEeg)
        {
            if (sensors.States("eeg") && hasMeg)
            {
                sensors.Problem("eeg", "head.leadfields has no eeg array; name it there, or remove this key");
            }

            return null;
        }

        Section eeg = sensors.Map("eeg") ?? sensors.Entry("eeg");
        foreach (string name in ElectrodeKeys.Where(eeg.States))
        {
            eeg.Problem(name, "is not used with head.leadfields, whose rows are the electrodes; only reference stands here");
        }

        return Reference(eeg) is { } reference ? new(null, null, null, reference) : null;
    }

    private static ReferenceChoice? Reference(Section eeg)
    {
        if (eeg.Raw("reference") is PlacedTexts)
        {
            IReadOnlyList<YamlScalar> names = eeg.Texts("reference");
            if (names.DistinctBy(n => n.Text).Count() < names.Count)
            {
                eeg.Problem("reference", "names an electrode twice; remove one");
            }

            return new(ReferenceKind.Electrodes, [.. names.Select(n => n.Text)]);
        }

        return eeg.Text("reference") switch
        {
            null => null,
            "average" => new(ReferenceKind.Average, []),
            "none" => new(ReferenceKind.None, []),
            "mastoids" => new(ReferenceKind.Electrodes, ["M1", "M2"]),
            var name => new(ReferenceKind.Electrodes, [name]),
        };
    }

    private static List<string> Derivations(Section sensors, bool hasEeg)
    {
        if (!hasEeg)
        {
            sensors.WithoutEffect("eeg_derivations", NoEeg);
            return [];
        }

        var names = new List<string>();
        foreach (YamlScalar item in sensors.Texts("eeg_derivations"))
        {
            string fault = WhyNoDerivation(item.Text) ?? (names.Contains(item.Text) ? $"{Shown.Quoted(item.Text)} stands twice; remove one" : "");
            if (fault.Length > 0)
            {
                sensors.ProblemAt(item, "eeg_derivations", fault);
            }

            names.Add(item.Text);
        }

        return names;
    }

    // An amplitude is read in its derivation whether or not that is listed.
    private static IEnumerable<string> Named(Section root, bool hasEeg) => !hasEeg ? [] : root.Entries("responses")
        .Select(r => (r.Map("amplitude")?.Raw("derivation") as PlacedText)?.Text).OfType<string>().Where(d => WhyNoDerivation(d) is null);

    /// <summary>Null for a difference of two electrodes, else what is wrong.</summary>
    public static string? WhyNoDerivation(string name)
    {
        int dash = name.IndexOf('-', StringComparison.Ordinal);
        if (dash <= 0 || dash == name.Length - 1)
        {
            return $"{Shown.Quoted(name)} is no difference; write electrode-electrode, electrode-mastoids or electrode-average, for instance Cz-mastoids";
        }

        return name[..dash] == name[(dash + 1)..] ? $"{Shown.Quoted(name)} is the difference of an electrode with itself; name two" : null;
    }

    private static MegChoice? Meg(Section sensors, bool hasMeg)
    {
        if (!hasMeg)
        {
            sensors.WithoutEffect("meg_edge_deg", NoMeg);
            return null;
        }

        if (sensors.Map("meg") is not { } meg)
        {
            return null;
        }

        string? which = meg.OneOf("write coil for a generated array, or coils for a table", "coils", "coil");
        if (which == "coils")
        {
            foreach (string name in ArrayKeys.Where(meg.States))
            {
                meg.Problem(name, "belongs to a generated array; a table of coils states every place itself: remove it");
            }

            if (sensors.States("meg_edge_deg"))
            {
                sensors.Problem("meg_edge_deg", "belongs to a generated array; a table of coils states every place itself: remove it");
            }

            return meg.Text("coils") is { } file ? new(file, null) : null;
        }

        return which == "coil" && Generated(sensors, meg) is { } array ? new(null, array) : null;
    }

    private static CoilArrayChoice? Generated(Section sensors, Section meg)
    {
        if (meg.Text("coil") is not { } coil)
        {
            return null;
        }

        bool gradiometer = coil is "axial-gradiometer" or "planar-gradiometer";
        if (!gradiometer && meg.States("baseline_mm"))
        {
            meg.Problem("baseline_mm", $"belongs to gradiometers; {coil} has none: remove it");
        }

        double? sites = meg.Number("sites");
        double? baseline = gradiometer ? meg.Number("baseline_mm", coil) : 0;
        double? gap = meg.Number("gap_mm", coil);
        Section edge = sensors.Map("meg_edge_deg") ?? sensors.Entry("meg_edge_deg");
        double? front = edge.Number("front"), back = edge.Number("back");
        return sites is { } n && baseline is { } b && gap is { } g && front is { } f && back is { } k
            ? new(coil, (int)n, Si.FromMm(b), Si.FromMm(g), Si.FromDegrees(f), Si.FromDegrees(k))
            : null;
    }

    private static MegChoice? ImportedMeg(Section sensors, bool hasMeg)
    {
        foreach (string name in MegKeys.Where(sensors.States))
        {
            sensors.Problem(name, "is not used with head.leadfields, whose rows are the channels; remove it");
            sensors.Skip(name);
        }

        return hasMeg ? new(null, null) : null;
    }

    // Asked only where it is stated: without a waveform nothing depends on it.
    private static bool Trigger(Section sensors)
    {
        bool free = sensors.States("trigger") && sensors.Text("trigger") == "free";
        if (free && !sensors.States("sampling_Hz"))
        {
            sensors.Problem("trigger", "is free: the latency then scatters by 1/(sampling rate x sqrt(12)); state sensors.sampling_Hz");
        }

        return free;
    }

    private static Band? Bandwidth(Section sensors, string modality, bool used, string reason)
    {
        if (sensors.Map("bandwidth_Hz") is not { } bandwidth)
        {
            return null;
        }

        if (!used)
        {
            bandwidth.WithoutEffect(modality, reason);
            return null;
        }

        return bandwidth.Band(modality);
    }
}
