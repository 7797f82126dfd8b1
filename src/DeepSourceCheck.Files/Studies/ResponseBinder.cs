using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`responses`: where, how strong, in which band, in which direction.</summary>
internal static class ResponseBinder
{
    private static readonly DirectionName[] Words =
        [DirectionName.QuasiRadial, DirectionName.Tangential, DirectionName.StrongestTangential, DirectionName.Isotropic, DirectionName.Best];

    /// <summary>Lowest sampling rate over the upper edge of a band: two samples a cycle and room for the filter's slope.</summary>
    private const double SamplesPerCycle = 2.5;

    public static IReadOnlyList<Response> Bind(Section root, BoundSensors sensors, Reading reading)
    {
        if (!root.States("responses"))
        {
            if (reading.Purpose == Purpose.Assess)
            {
                root.Problem("responses", "is missing; state at least one response {name, regions, moment_nAm, band_Hz}");
            }
            else if (!root.States("regions"))
            {
                root.Problem("regions", "is missing, and no response names a region; state at least one region");
            }

            return [];
        }

        var own = root.Entries("regions").Select(r => (r.Raw("name") as PlacedText)?.Text).OfType<string>().ToHashSet(StringComparer.Ordinal);
        var names = new HashSet<string>(StringComparer.Ordinal);
        var responses = new List<Response>();
        foreach (Section entry in root.Entries("responses"))
        {
            if (entry.Text("name") is { } name && !names.Add(name))
            {
                entry.Problem("name", $"the name {Shown.Quoted(name)} stands twice; every response needs a name of its own");
            }

            if (Bind(entry, own, sensors, reading) is { } response)
            {
                responses.Add(response);
            }
        }

        return responses;
    }

    private static Response? Bind(Section entry, HashSet<string> own, BoundSensors sensors, Reading reading)
    {
        bool steady = entry.Text("kind") == "steady-state";
        string? name = entry.Text("name"), counts = entry.Text("counts"), measured = entry.Text("measured");
        List<string> regions = Regions(entry, own, sensors, reading);
        BoundStrength? strength = StrengthBinder.Bind(entry, sensors);
        BoundCourse course = CourseBinder.Bind(entry, steady, sensors);
        Band? band = steady ? Bin(entry, course.Steady) : Needed(entry);
        DirectionChoice? direction = Direction(entry);
        double? component = course.Component;
        if (component is { } f && band is { } b && (f < b.Low || f > b.High))
        {
            entry.Problem("component_Hz", $"{KeyShape.Text(f)} Hz lies outside the response's band of {Text(b)}; move it inside, or widen band_Hz");
        }

        (IReadOnlyList<double> shares, IReadOnlyList<double> lags) = StrengthBinder.Together(entry, counts == "together", component);
        CheckPassed(entry, band, course.Steady?.Frequency, sensors);
        CheckTogether(entry, counts == "together");
        StrengthBinder.CheckLags(entry, lags);
        if (course.Steady is not null && measured == "peak-to-trough")
        {
            entry.Problem("measured", "peak-to-trough is of a transient response; the amplitude of a steady-state one is the peak of its sinusoid: write baseline-to-peak");
        }

        if (steady)
        {
            entry.WithoutEffect("window_ms", "a steady-state response is read over the whole of its trial, seconds long");
        }

        double? window = steady ? null : entry.Number("window_ms");
        IReadOnlyList<RatePoint> rates = RateCurveBinder.Bind(entry, steady);
        Section artefact = entry.Map("locked_artefact") ?? entry.Entry("locked_artefact");
        Section measure = entry.Map("measure") ?? entry.Entry("measure");
        double artefactEeg = Artefact(artefact, "eeg_uV", sensors.HasEeg, "the study has no electrodes");
        double artefactMeg = Artefact(artefact, "meg_fT", sensors.HasMeg, "the study has no MEG sensors");
        List<CompetitorChoice> competitors = Competitors(entry, own, sensors, reading);
        bool chooseSensors = ChooseSensors(entry, sensors);
        string? eegMeasure = EegMeasure(measure, sensors), megMeasure = MegMeasure(measure, sensors);
        return name is null || strength is null || band is null || direction is null || regions.Count == 0 ? null : new()
        {
            Name = name,
            Key = entry.Key,
            Regions = regions,
            Together = counts == "together",
            Moment = strength.Moment,
            MomentRange = strength.Range,
            Amplitude = strength.Amplitude,
            Density = strength.Density,
            Shares = shares,
            Lags = lags,
            Measured = measured == "peak-to-trough" ? Measured.PeakToTrough : Measured.BaselineToPeak,
            Band = band.Value,
            Steady = course.Steady,
            Waveform = course.Waveform,
            Jitter = course.Jitter,
            PlaceError = course.PlaceError,
            Baseline = course.Baseline,
            Direction = direction,
            Window = window / 1000,
            RateCurve = rates,
            ComponentFrequency = component,
            LockedArtefactEeg = Si.FromMicrovolts(artefactEeg),
            LockedArtefactMeg = Si.FromFemtotesla(artefactMeg),
            Competitors = competitors,
            ChooseSensors = chooseSensors,
            EegMeasure = eegMeasure,
            MegMeasure = megMeasure,
        };
    }

    private static List<string> Regions(Section entry, HashSet<string> own, BoundSensors sensors, Reading reading)
    {
        var names = new List<string>();
        var seen = new HashSet<string>(StringComparer.Ordinal);
        foreach (YamlScalar item in entry.Texts("regions"))
        {
            string? fault = seen.Add(item.Text) ? Unknown(item.Text, own, sensors, reading) : $"{Shown.Quoted(item.Text)} stands twice; remove one";
            if (fault is not null)
            {
                entry.ProblemAt(item, "regions", fault);
            }
            else
            {
                names.Add(item.Text);
            }
        }

        return names;
    }

    // Why a region cannot be had by its name; null where it can.
    private static string? Unknown(string name, HashSet<string> own, BoundSensors sensors, Reading reading)
    {
        bool library = reading.LibraryRegions.Contains(name);
        if (own.Contains(name) || (!sensors.Imported && library))
        {
            return null;
        }

        if (library)
        {
            return $"the library's region {name} has no place among imported leadfields; list the imported points under regions with points";
        }

        IEnumerable<string> known = sensors.Imported ? own : own.Concat(reading.LibraryRegions.Where(r => !own.Contains(r)));
        string nearest = reading.Suggests && NearestName.Of(name, known) is { } near ? $"the nearest known one is {Shown.Quoted(near)}; " : "";
        return $"there is no region {Shown.Quoted(name)}; {nearest}write one of the study's regions"
            + (sensors.Imported ? "" : " or of the library (`deepsourcecheck regions` lists them)");
    }

    private static List<CompetitorChoice> Competitors(Section entry, HashSet<string> own, BoundSensors sensors, Reading reading)
    {
        var competitors = new List<CompetitorChoice>();
        var seen = new HashSet<string>(StringComparer.Ordinal);
        foreach (Section competitor in entry.Entries("competitors"))
        {
            string? region = competitor.Text("region");
            double? moment = competitor.Number("moment_nAm");
            string? fault = region is null ? null : seen.Add(region) ? Unknown(region, own, sensors, reading)
                : $"{Shown.Quoted(region)} stands twice among the competitors; state it once, with the moment of both (the root of the sum of squares)";
            if (fault is not null)
            {
                competitor.Problem("region", fault);
            }
            else if (region is not null && moment is { } m)
            {
                competitors.Add(new CompetitorChoice(region, Si.FromNanoAmpereMetres(m)));
            }
        }

        return competitors;
    }

    private static bool ChooseSensors(Section entry, BoundSensors sensors)
    {
        if (!sensors.HasEeg)
        {
            entry.WithoutEffect("choose_sensors", "the study has no electrodes");
            return false;
        }

        return entry.Text("choose_sensors") == "true";
    }

    private static DirectionChoice? Direction(Section entry)
    {
        if (entry.Raw("direction") is not PlacedNumbers)
        {
            return entry.Text("direction") is { } word ? new(Words.Single(d => Names.Of(d) == word), null) : null;
        }

        Vec3 v = entry.Vector("direction")!.Value;
        double largest = Math.Max(Math.Abs(v.X), Math.Max(Math.Abs(v.Y), Math.Abs(v.Z)));
        if (largest > 0)
        {
            // Scaled first, so that neither tiny nor huge components lose the length.
            return new(DirectionName.Given, (v / largest).Unit());
        }

        entry.Problem("direction", "the vector [0, 0, 0] has no direction; write one with a component other than zero");
        return null;
    }

    private static Band? Needed(Section entry)
    {
        if (!entry.States("band_Hz"))
        {
            entry.Problem("band_Hz", "is missing; state the band in which the response is recorded, for instance [100, 1500] Hz");
        }

        return entry.Band("band_Hz");
    }

    // The bin of one trial; a stated band is checked and otherwise without effect.
    private static Band? Bin(Section entry, SteadyState? steady)
    {
        if (entry.States("band_Hz"))
        {
            if (entry.Band("band_Hz") is { } band && steady is { } s && (s.Frequency < band.Low || s.Frequency > band.High))
            {
                entry.Problem("band_Hz", $"{Text(band)} excludes the response's frequency of {KeyShape.Text(s.Frequency)} Hz; remove it: a steady-state response is read in the bin of one trial");
            }
            else
            {
                entry.WithoutEffect("band_Hz", "a steady-state response is read in the bin that one trial resolves, 1/seconds wide");
            }
        }

        return steady?.Bin;
    }

    private static void CheckTogether(Section entry, bool together)
    {
        foreach (string modality in new[] { "eeg", "meg" })
        {
            if (together && entry.Map("measure") is { } measure && (measure.Raw(modality) as PlacedText)?.Text == Names.RealisticFilter)
            {
                measure.Problem(modality, "a realistic-filter is built for one place; regions that act together have several: write matched-filter or a single reading");
            }
        }
    }

    private static void CheckPassed(Section entry, Band? stated, double? frequency, BoundSensors sensors)
    {
        string key = frequency is null ? "band_Hz" : "frequency_Hz";
        if (stated is not { } band)
        {
            return;
        }

        Check(sensors.HasEeg ? sensors.EegBandwidth : null, "EEG", "eeg");
        Check(sensors.HasMeg ? sensors.MegBandwidth : null, "MEG sensors", "meg");
        if (sensors.Sampling is { } rate && rate < SamplesPerCycle * band.High)
        {
            entry.Problem(key, $"reaches {KeyShape.Text(band.High)} Hz, which needs at least {KeyShape.Text(SamplesPerCycle * band.High)} samples a second; "
                + $"sensors.sampling_Hz is {KeyShape.Text(rate)}: raise it, or lower the band's upper edge");
        }

        void Check(Band? passed, string what, string modality)
        {
            if (passed is { } p && (band.Low < p.Low || band.High > p.High))
            {
                string passes = modality == "eeg" ? "passes" : "pass";
                entry.Problem(key, $"the response's {(frequency is null ? "band" : "bin")} of {Text(band)} lies outside the {Text(p)} that the {what} {passes} (sensors.bandwidth_Hz.{modality}); "
                    + $"they would not record it: narrow the band to what is passed, or remove sensors.{modality}");
            }
        }
    }

    private static double Artefact(Section artefact, string name, bool used, string reason)
    {
        if (!used)
        {
            artefact.WithoutEffect(name, reason);
            return 0;
        }

        return artefact.Number(name) ?? 0;
    }

    private static string? EegMeasure(Section measure, BoundSensors sensors)
    {
        if (!sensors.HasEeg)
        {
            measure.WithoutEffect("eeg", "the study has no electrodes");
            return null;
        }

        if (!measure.States("eeg"))
        {
            if (sensors.Derivations.Count == 0)
            {
                measure.Text("eeg", "no derivation");
            }
            else if (StudyKeys.Find("responses[].measure.eeg")?.DefaultFor("derivation") is { } standard)
            {
                measure.Assume("eeg", sensors.Derivations[0], standard.Source, standard.Grade);
            }

            return null;
        }

        string? stated = measure.Text("eeg");
        if (measure.Raw("eeg") is PlacedText { IsWord: false } && !sensors.Derivations.Contains(stated!))
        {
            string listed = sensors.Derivations.Count > 0 ? string.Join(", ", sensors.Derivations) : "none";
            string message = stated == Names.ChannelMean
                ? "channel-mean is for maps and comparisons, a verdict never stands on it; write best-channel, matched-filter, realistic-filter or a derivation"
                : $"{Shown.Quoted(stated!)} is not among sensors.eeg_derivations ({Shown.Text(listed, 120)}); add it there, or write best-channel, matched-filter or realistic-filter";
            measure.Problem("eeg", message);
        }

        return stated;
    }

    private static string? MegMeasure(Section measure, BoundSensors sensors)
    {
        if (!sensors.HasMeg)
        {
            measure.WithoutEffect("meg", "the study has no MEG sensors");
            return null;
        }

        bool stated = measure.States("meg");
        string? text = measure.Text("meg");
        return stated ? text : null;
    }

    private static string Text(Band band) => $"{KeyShape.Text(band.Low)} to {KeyShape.Text(band.High)} Hz";
}
