using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`target` and `protocol`: what counts as enough, and what the session affords.</summary>
internal static class PlanBinder
{
    private const double SecondsPerMinute = 60;

    // Hz; common practice, no source. Below ten times as many stimuli a second the mains wander over a tenth of the rate and lock to no harmonic.
    private const double MainsWanders = 0.05, SlowestLocked = 10 * MainsWanders;

    private static readonly double[] Mains = [50, 60];

    /// <summary>The rules in the order of the file; the amplitude ratio where the study states none.</summary>
    /// <param name="root">The study.</param>
    /// <param name="hasEeg">Whether the study has EEG, or no sensors at all, which is reported already.</param>
    /// <param name="responses">Responses, whose waveforms may give the rms over the window.</param>
    public static IReadOnlyList<TargetChoice> Targets(Section root, bool hasEeg, IReadOnlyList<Response> responses)
    {
        Section? target = root.Map("target");
        if (target is null)
        {
            return !root.States("target") && root.Entry("target").Number("amplitude_ratio") is { } standard ? [new AmplitudeRatioChoice(standard)] : [];
        }

        var rules = new List<TargetChoice>();
        foreach (string name in target.Order)
        {
            if (name == "amplitude_ratio" && target.Number(name) is { } ratio)
            {
                rules.Add(new AmplitudeRatioChoice(ratio));
            }
            else if (name == "residual_nV" && target.Number(name) is { } residual)
            {
                if (!hasEeg)
                {
                    target.Problem(name, "is a voltage, and the study has no EEG whose average it could be of; use amplitude_ratio or detection");
                }

                rules.Add(new ResidualNoiseChoice(Si.FromNanovolts(residual)));
            }
            else if (name == "variance_ratio" && target.Map(name) is { } ratioRule)
            {
                if (VarianceRatio(ratioRule, hasEeg, responses) is { } choice)
                {
                    rules.Add(choice);
                }
            }
            else if (name == "detection" && target.Map(name) is { } detection)
            {
                string? topography = detection.Text("topography"), covariance = detection.Text("covariance");
                double? alpha = detection.Number("alpha"), power = detection.Number("power"), looks = detection.Number("looks");
                if (alpha is { } a && power is { } p && looks is { } k)
                {
                    if (p <= a)
                    {
                        detection.Problem("power", FormattableString.Invariant($"the probability of detection {p:0.######} is not above the false-alarm rate alpha {a:0.######}, which chance alone reaches; 0.8 or 0.9 are usual"));
                    }

                    rules.Add(new DetectionChoice(a, p, k,
                        topography switch { "plane" => Topography.Plane, "unknown" => Topography.Unknown, _ => Topography.Known }, covariance == "estimated")
                    {
                        Stopping = Stopping(detection, topography == "known" && covariance == "known", responses),
                    });
                }
            }
        }

        if (rules.Count > 0 && rules.All(r => r is VarianceRatioChoice) && responses.FirstOrDefault(r => r.Steady is not null) is { } sinusoid)
        {
            target.Problem("variance_ratio", $"is of a transient response over its window and says nothing of the steady-state {sinusoid.Name}; add detection or amplitude_ratio");
        }

        if (rules.Count == 0 && !StudyKeys.Below("target").Any(key => target.States(key.Name)))
        {
            root.Problem("target", "states no rule; write amplitude_ratio, detection, variance_ratio or residual_nV, or several of them");
        }

        return rules;
    }

    private static StoppingChoice? Stopping(Section detection, bool known, IReadOnlyList<Response> responses)
    {
        const string Name = "stopping";
        if (detection.Map(Name) is not { } stopping)
        {
            return null;
        }

        if (!known)
        {
            detection.Problem(Name, "is computed for topography known and covariance known alone; state these, or remove it");
        }
        else if (responses.FirstOrDefault(r => r.Steady is not null) is { } steady)
        {
            detection.Problem(Name, $"is of transient responses; {steady.Name} is steady-state, whose test is another: plan it in a study of its own, or remove stopping");
        }

        return stopping.Number("analyses") is { } analyses && stopping.Text("spending") is { } spending
            ? new((int)analyses, spending == "pocock-type" ? Spending.PocockType : Spending.ObrienFlemingType) : null;
    }

    private static VarianceRatioChoice? VarianceRatio(Section rule, bool hasEeg, IReadOnlyList<Response> responses)
    {
        if (!hasEeg && rule.States("window_rms_uV"))
        {
            rule.Problem("window_rms_uV", "is a voltage, and the study has no EEG for which it could be stated; use amplitude_ratio or detection");
        }

        if (rule.States("critical") && rule.States("alpha"))
        {
            rule.Problem("alpha", "stands beside critical; state one of them: the value itself, or the false-alarm rate whose exact value is taken");
            rule.Skip("critical");
            rule.Skip("alpha");
        }

        double? alpha = rule.Number("alpha"), critical = rule.States("alpha") ? null : rule.Number("critical");
        double? power = rule.Number("power"), window = rule.Number("window_rms_uV");
        if (window is null && !rule.States("window_rms_uV") && responses.FirstOrDefault(r => r.Steady is null && (r.Waveform is null || r.Window is null)) is { } unknown)
        {
            rule.Problem("window_rms_uV", $"is missing, and {unknown.Name} states no waveform with window_ms from which it follows; state the rms of the response over the window"
                + (hasEeg ? "" : " (in a study without EEG: the waveform and window_ms)"));
        }

        if (rule.Band("degrees") is not { } degrees || (window is null && rule.States("window_rms_uV")) || (alpha is null && critical is null))
        {
            return null;
        }

        double stated = critical ?? NoncentralF.Critical(alpha!.Value, degrees.Low, degrees.High);
        double chance = NoncentralF.Survival(stated, degrees.Low, degrees.High, 0);
        string key = rule.States("alpha") ? "alpha" : "critical";
        if (power <= chance)
        {
            rule.Problem("power", FormattableString.Invariant($"the probability {power:0.######} is not above {chance:0.######}, with which noise alone passes {stated:0.###}; 0.8 or 0.9 are usual"));
        }
        else if (power is null && degrees.High <= 2)
        {
            rule.Problem("degrees", FormattableString.Invariant($"with {degrees.High:0} degrees of freedom of the noise the expected ratio does not exist; state more than 2, or state power"));
        }
        else if (power is null && stated <= degrees.High / (degrees.High - 2))
        {
            rule.Problem(key, FormattableString.Invariant($"the critical value {stated:0.######} is not above {degrees.High / (degrees.High - 2):0.######}, which the ratio of noise alone has on average; 3.1 is usual"));
        }

        return new(critical, alpha, power, window is { } w ? Si.FromMicrovolts(w) : null, degrees.Low, degrees.High);
    }

    public static Protocol? Protocol(Section root, IReadOnlyList<Response> responses)
    {
        if (root.Map("protocol") is not { } protocol)
        {
            return null;
        }

        double? rate = Rate(root, protocol, responses), rejected = protocol.Number("rejected_fraction");
        double? session = protocol.Number("session_min"), preparation = protocol.Number("preparation_min"), breaks = protocol.Number("breaks_min");
        bool steady = responses.Count > 0 && responses.All(r => r.Steady is not null);
        if (steady)
        {
            protocol.WithoutEffect("interval_jitter_ms", "trials of a steady-state response are one recording, whose stimuli follow each other at frequency_Hz");
        }

        double? jitter = steady ? null : protocol.Number("interval_jitter_ms");
        foreach (Response capped in responses.Where(r => protocol.States("rate_per_s") && rate * r.Steady?.Seconds > 1 + 1e-9))
        {
            protocol.Warn("rate_per_s", FormattableString.Invariant($"trials of {capped.Name}, {capped.Steady!.Seconds:0.######} s long, cannot follow each other at {rate:0.######} a second: they are counted at {1 / capped.Steady.Seconds:0.######} a second"));
        }

        if (rate is { } r && jitter / 1000 * r > 1)
        {
            protocol.Problem("interval_jitter_ms", FormattableString.Invariant($"{jitter:0.######} ms is longer than the {1000 / r:0.######} ms between stimuli at rate_per_s; state at most that"));
        }

        double? conditions = protocol.Number("conditions"), replications = protocol.Number("replications");
        PeopleChoice? people = PeopleBinder.Bind(protocol);
        return rate is null || rejected is null || conditions is null || replications is null ? null : new()
        {
            Rate = rate.Value,
            RejectedFraction = rejected.Value,
            Session = session * SecondsPerMinute,
            Preparation = preparation * SecondsPerMinute,
            Breaks = breaks * SecondsPerMinute,
            IntervalJitter = jitter / 1000,
            Conditions = (int)conditions.Value,
            Replications = (int)replications.Value,
            People = people,
        };
    }

    private static double? Rate(Section root, Section protocol, IReadOnlyList<Response> responses)
    {
        if (protocol.States("rate_per_s"))
        {
            return protocol.Number("rate_per_s");
        }

        if (responses.Count == 0 || responses.Any(r => r.Steady is null) || responses.Count < root.Entries("responses").Count)
        {
            protocol.Problem("rate_per_s", "is missing; state stimuli per second, usually 0.05 to 200 (where every response is steady-state, trials follow each other without it)");
            return null;
        }

        double rate = 1 / responses.Min(r => r.Steady!.Seconds);
        protocol.Assume("rate_per_s", rate, "steady-state trials follow each other without a gap: 1/seconds", Grade.Derived);
        return rate;
    }

    /// <summary>Warnings about the mains: steady-state responses whose bin they fall into, at their frequency or a multiple.</summary>
    public static void CheckFrequencies(IReadOnlyList<Response> responses, Reading reading)
    {
        foreach (Response response in responses.Where(r => r.Steady is not null))
        {
            (double frequency, double near) = (response.Steady!.Frequency, 0.5 / response.Steady.Seconds + MainsWanders);
            double[] met = [.. Mains.Where(mains => Math.Round(frequency / mains) is >= 1 and var harmonic && Math.Abs(harmonic * mains - frequency) <= near)];
            if (met.Length > 0)
            {
                reading.Warn(response.Key + ".frequency_Hz", FormattableString.Invariant(
                    $"{frequency:0.######} Hz shares its bin with {string.Join(" and with ", met.Select(m => Math.Round(frequency / m) is > 1 and var n ? FormattableString.Invariant($"{n:0} x {m:0} Hz") : FormattableString.Invariant($"{m:0} Hz")))} of the mains, which the noise tables do not hold and averaging does not remove where it is the local one; choose another frequency"));
            }
        }
    }

    /// <summary>Warnings about the rate: harmonics that meet the mains, and those within the alpha band of a response.</summary>
    public static void CheckRate(IReadOnlyList<Response> responses, Protocol? protocol, Reading reading)
    {
        // Trials of a steady-state response are one recording: its frequency, not a rate, meets the mains or the alpha rhythm.
        if (protocol is null || (responses.Count > 0 && responses.All(r => r.Steady is not null)))
        {
            return;
        }

        const string Key = "protocol.rate_per_s";
        const double AlphaLow = 8, AlphaHigh = 12;      // Hz; common practice, no source
        string remedy = protocol.IntervalJitter > 0 ? "; the stated protocol.interval_jitter_ms counters it" : "; choose another rate, or state protocol.interval_jitter_ms";
        double[] met = [.. Mains.Where(mains => protocol.Rate >= SlowestLocked && Math.Round(mains / protocol.Rate) is >= 1 and var harmonic && Math.Abs(harmonic * protocol.Rate - mains) <= MainsWanders)];
        if (met.Length > 0)
        {
            reading.Warn(Key, FormattableString.Invariant(
                $"{protocol.Rate:0.######} a second is a submultiple of the mains frequency of {string.Join(" and of ", met.Select(m => FormattableString.Invariant($"{m:0} Hz")))}, which then does not average away where it is the local one{remedy}"));
        }

        // Below half the band's width several harmonics fall into it and the alpha rhythm averages as between them.
        foreach (Response response in responses.Where(r => r.Steady is null && protocol.Rate >= (AlphaHigh - AlphaLow) / 2))
        {
            double low = Math.Max(AlphaLow, response.Band.Low), high = Math.Min(AlphaHigh, response.Band.High);
            double harmonic = Math.Max(1, Math.Ceiling(low / protocol.Rate));
            if (high > low && harmonic * protocol.Rate <= high)
            {
                reading.Warn(Key, FormattableString.Invariant(
                    $"{harmonic:0} x {protocol.Rate:0.######} = {harmonic * protocol.Rate:0.###} Hz lies in the alpha rhythm (8 to 12 Hz) within the band of {response.Name}: alpha then averages worse than 1/N; effective numbers of trials know the noise tables alone{remedy}"));
            }
        }
    }

    /// <summary>Warnings about the analysis window: against the interval between stimuli, and against one look.</summary>
    public static void CheckWindows(IReadOnlyList<Response> responses, IReadOnlyList<TargetChoice> targets, Protocol? protocol, Reading reading)
    {
        foreach (Response response in responses.Where(r => r.Window is not null))
        {
            double window = response.Window!.Value;
            string key = response.Key + ".window_ms";
            if (protocol is not null && window * protocol.Rate > 1)
            {
                reading.Warn(key, $"{KeyShape.Text(window * 1000)} ms is longer than the {Rounded(1000 / protocol.Rate)} ms between stimuli "
                    + "at protocol.rate_per_s; responses overlap in the window");
            }

            double looks = 2 * response.Band.Width * window;
            if (looks > 1 && targets.OfType<DetectionChoice>().Any(d => d.Looks == 1))
            {
                reading.Warn(key, $"the window holds about {Rounded(looks)} independent looks (2 x bandwidth x window); "
                    + "target.detection.looks 1 holds only for a latency, channel and polarity fixed in advance");
            }
        }
    }

    private static string Rounded(double value) => KeyShape.Text(value < 10 ? Math.Round(value, 1) : Math.Round(value));
}
