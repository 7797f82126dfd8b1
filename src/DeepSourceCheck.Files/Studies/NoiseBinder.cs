using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`noise`: a spectrum from densities and tables, flat figures, measured covariances or a recording; one of them for each modality.</summary>
internal static class NoiseBinder
{
    private const string Recorded = "eeg_recording";

    private static readonly string[] EegSpectral = ["eeg_sensor_nV_per_rtHz", "eeg_total"];
    private static readonly string[] MegSpectral = ["meg_sensor_fT_per_rtHz", "meg_planar_fT_per_cm_rtHz"];

    public static NoiseChoice? Bind(Section root, BoundSensors sensors, Reading reading)
    {
        if (root.Map("noise") is not { } noise)
        {
            if (reading.Purpose == Purpose.Assess && !root.States("noise") && (sensors.HasEeg || sensors.HasMeg))
            {
                root.Problem("noise", "is missing; state what is in one trial, for instance noise: {eeg_sensor_nV_per_rtHz: 20, meg_sensor_fT_per_rtHz: 5}");
            }

            return null;
        }

        string? eeg = Kind(noise, sensors.HasEeg, "EEG", "electrodes", EegSpectral, "eeg_sensor_uV_rms", ["eeg_covariance", Recorded],
            "state eeg_total, eeg_sensor_nV_per_rtHz, eeg_sensor_uV_rms, eeg_covariance or eeg_recording", reading);
        string? meg = Kind(noise, sensors.HasMeg, "MEG", "MEG sensors", MegSpectral, "meg_sensor_fT_rms", ["meg_covariance"],
            "state meg_sensor_fT_per_rtHz (usually 0.2 to 50), meg_sensor_fT_rms or meg_covariance", reading);
        CheckPlanar(noise, sensors, meg, reading);
        bool? brain = Brain(noise, sensors, eeg, meg);
        (string? eegTable, string? megTable, double scale) = BrainTables(noise, eeg, meg);
        var choice = new NoiseChoice
        {
            EegTotal = eeg == "spectral" ? EegTotal(noise) : null,
            EegDensity = eeg == "spectral" ? Scaled(noise.Number("eeg_sensor_nV_per_rtHz"), Si.FromNanovolts) : null,
            MegDensity = meg == "spectral" ? Scaled(noise.Number("meg_sensor_fT_per_rtHz"), Si.FromFemtotesla) : null,
            MegPlanarDensity = meg == "spectral" ? Scaled(noise.Number("meg_planar_fT_per_cm_rtHz"), Si.FromFemtoteslaPerCm) : null,
            EegCorner = Corner(noise, "eeg", eeg),
            MegCorner = Corner(noise, "meg", meg),
            BrainEegTable = eegTable,
            BrainMegTable = megTable,
            BrainScale = scale,
            Environment = Environment(noise, sensors, meg),
            EegRms = eeg == "flat" ? Scaled(noise.Number("eeg_sensor_uV_rms"), Si.FromMicrovolts) : null,
            MegRms = meg == "flat" ? Scaled(noise.Number("meg_sensor_fT_rms"), Si.FromFemtotesla) : null,
            EegCovariance = eeg == "measured" ? Covariance(noise, "eeg_covariance") : null,
            MegCovariance = meg == "measured" ? Covariance(noise, "meg_covariance") : null,
            EegRecording = eeg == Recorded ? Recording(noise) : null,
            Brain = brain,
            SpreadBetweenTrials = noise.Number("spread_between_trials"),
        };
        if (brain != true && !noise.States("eeg_total") && (eeg == "spectral" || meg == "spectral"))
        {
            string which = eeg == "spectral" && meg == "spectral" ? "EEG and MEG" : eeg == "spectral" ? "EEG" : "MEG";
            reading.Warn("noise", $"the {which} noise is the instrument's alone, so the trial counts are lower bounds; "
                + "state eeg_total or brain: default for the noise of a living head");
        }

        return choice;
    }

    /// <summary>spectral, flat, measured or eeg_recording; null where the modality is not used, states nothing or contradicts itself.</summary>
    private static string? Kind(
        Section noise, bool used, string modality, string sensors, string[] spectral, string flat, string[] measured, string instruction, Reading reading)
    {
        string[] all = [.. spectral, flat, .. measured];
        if (!used)
        {
            foreach (string name in all)
            {
                noise.WithoutEffect(name, $"the study has no {sensors}");
            }

            return null;
        }

        List<string> stated = [.. all.Where(noise.States)];
        if (stated.Count == 0)
        {
            if (reading.Purpose == Purpose.Assess)
            {
                noise.Problem($"states no {modality} noise although the study has {sensors}; {instruction}");
            }

            return null;
        }

        string[] kinds = [.. stated.Select(name => name == flat ? "flat" : name == Recorded ? Recorded : measured.Contains(name) ? "measured" : "spectral").Distinct()];
        if (kinds.Length == 1)
        {
            return kinds[0];
        }

        foreach (string name in measured.Append(flat).Where(noise.States))
        {
            string others = string.Join(", ", stated.Where(other => other != name));
            string what = name == flat ? "a flat figure" : name == Recorded ? "a recording" : "a measured covariance";
            noise.Problem(name, $"stands beside {others}: {what} is all of the noise, nothing else is added; keep one of them");
        }

        foreach (string name in stated)
        {
            noise.Skip(name);
        }

        return null;
    }

    private static void CheckPlanar(Section noise, BoundSensors sensors, string? meg, Reading reading)
    {
        if (sensors.Coil is not { } coil || meg is null)
        {
            return;
        }

        bool planar = coil == "planar-gradiometer";
        if (planar && meg == "flat")
        {
            noise.Problem("meg_sensor_fT_rms",
                "is in fT, but planar gradiometers measure a difference over their baseline, in fT/cm; state meg_planar_fT_per_cm_rtHz instead");
        }

        if (meg != "spectral")
        {
            return;
        }

        (string needed, string other) = planar ? (MegSpectral[1], MegSpectral[0]) : (MegSpectral[0], MegSpectral[1]);
        if (!noise.States(needed) && reading.Purpose == Purpose.Assess)
        {
            noise.Problem(other, $"does not hold for the array's coils ({coil}); state {needed}");
        }

        noise.WithoutEffect(other, $"the array's coils are of the kind {coil}");
    }

    private static bool? Brain(Section noise, BoundSensors sensors, string? eeg, string? meg)
    {
        bool spectral = eeg == "spectral" || meg == "spectral";
        if (!noise.States("brain"))
        {
            if (spectral && sensors.Imported)
            {
                noise.Assume("brain", "none", "imported leadfields have no brain term", Grade.Derived);
            }
            else if (spectral)
            {
                noise.Text("brain", noise.States("eeg_total") && eeg == "spectral" ? "eeg_total" : "");
            }

            return null;
        }

        bool on = noise.Raw("brain") is PlacedMap || noise.Text("brain") == "default";
        if (on && sensors.Imported)
        {
            noise.Problem("brain",
                "the brain's tables need a head whose cortex is known; with head.leadfields write brain: none, or give measured covariances");
        }
        else if (on && !spectral && (eeg ?? meg) is not null)
        {
            noise.Problem("brain",
                "stands beside flat figures or covariances, which are all of the noise, nothing else is added; remove it or state densities");
        }

        return noise.Raw("brain") is null ? null : on;
    }

    // Tables and factor of `brain: {...}`; a table without its modality's spectrum has no effect.
    private static (string? Eeg, string? Meg, double Scale) BrainTables(Section noise, string? eeg, string? meg)
    {
        if (noise.Map("brain") is not { } brain)
        {
            return (null, null, 1);
        }

        string? Table(string modality, string? kind)
        {
            string name = $"{modality}_table";
            if (kind == "spectral")
            {
                return brain.Text(name);
            }

            brain.WithoutEffect(name, kind is null ? $"the study states no {modality.ToUpperInvariant()} densities" : $"the {modality.ToUpperInvariant()} noise is stated per trial");
            return null;
        }

        if (!brain.States("eeg_table") && !brain.States("meg_table") && !brain.States("scale"))
        {
            brain.Problem("holds no key; state eeg_table, meg_table or scale, or write brain: default");
        }

        return (Table("eeg", eeg), Table("meg", meg), brain.Number("scale") ?? 1);
    }

    private static double Corner(Section noise, string modality, string? kind)
    {
        string name = $"{modality}_corner_Hz";
        if (!noise.States(name))
        {
            return 0;
        }

        if (kind != "spectral")
        {
            noise.WithoutEffect(name, kind is null ? $"the study states no {modality.ToUpperInvariant()} densities" : $"the {modality.ToUpperInvariant()} noise is stated per trial, whatever its spectrum");
            return 0;
        }

        return noise.Number(name) ?? 0;
    }

    private static EnvironmentChoice? Environment(Section noise, BoundSensors sensors, string? meg)
    {
        if (noise.Map("environment") is not { } room)
        {
            noise.Text("environment");
            return null;
        }

        if (!sensors.HasMeg)
        {
            noise.WithoutEffect("environment", "the study has no MEG sensors");
            return null;
        }

        double? density = room.Number("meg_fT_per_rtHz");
        double corner = room.Number("corner_Hz") ?? 0;
        bool removed = room.Text("removed") == "true";
        if (sensors.Imported)
        {
            noise.Problem("environment", "needs to know where every coil lies and points, which imported leadfields do not tell; write environment: none and put the room's share into meg_covariance");
        }
        else if (meg is "flat" or "measured")
        {
            noise.Problem("environment", $"stands beside {(meg == "flat" ? "meg_sensor_fT_rms" : "meg_covariance")}, which is all of the MEG noise, the room's included; write environment: none or state densities");
        }

        return density is { } d ? new(Si.FromFemtotesla(d), corner, removed) : null;
    }

    private static EegTotalChoice? EegTotal(Section noise)
    {
        if (noise.Map("eeg_total") is not { } total)
        {
            return null;
        }

        double? rms = total.Number("rms_uV");
        string? derivation = total.Text("derivation");
        Band? band = total.Band("band_Hz");
        if (derivation is not null && SensorBinder.WhyNoDerivation(derivation) is { } fault)
        {
            total.Problem("derivation", fault);
        }

        return rms is { } r && derivation is not null && band is { } b ? new(Si.FromMicrovolts(r), derivation, b) : null;
    }

    private static CovarianceChoice? Covariance(Section noise, string name)
    {
        if (noise.Raw(name) is PlacedText)
        {
            return new(noise.Text(name)!, null, 1);
        }

        return noise.Map(name) is { } map && map.Text("file") is { } file ? new(file, map.Number("samples"), map.Number("averaged_trials") ?? 1) : null;
    }

    private static RecordingChoice? Recording(Section noise)
    {
        Section of = noise.Map(Recorded) ?? noise.Entry(Recorded);
        string? file = noise.Raw(Recorded) is PlacedText ? noise.Text(Recorded) : of.Text("file");
        IReadOnlyList<YamlScalar> channels = of.Texts("channels");
        double? from = of.Number("from_s"), to = of.Number("to_s"), segment = of.Number("segment_ms"), limit = of.Number("limit_uV");
        string? reference = of.Text("reference");
        if (to <= (from ?? 0))
        {
            of.Problem("to_s", $"must lie after from_s, {KeyShape.Text(from ?? 0)} s");
        }

        return file is null || limit is null ? null : new(file, Si.FromMicrovolts(limit.Value))
        {
            Channels = channels.Count > 0 ? [.. channels.Select(c => c.Text)] : null,
            Reference = reference,
            From = from,
            To = to,
            Segment = segment / 1000,
        };
    }

    private static double? Scaled(double? value, Func<double, double> toSi) => value is { } v ? toSi(v) : null;
}
