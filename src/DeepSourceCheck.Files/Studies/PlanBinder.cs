using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`target` and `protocol`: what counts as enough, and what the session affords.</summary>
internal static class PlanBinder
{
    private const double SecondsPerMinute = 60;

    /// <summary>The rules in the order of the file; the amplitude ratio where the study states none.</summary>
    public static IReadOnlyList<TargetChoice> Targets(Section root)
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
            else if (name == "detection" && target.Map(name) is { } detection)
            {
                detection.Text("topography");
                detection.Text("covariance");
                double? alpha = detection.Number("alpha"), power = detection.Number("power"), looks = detection.Number("looks");
                if (alpha is { } a && power is { } p && looks is { } k)
                {
                    if (p <= a)
                    {
                        detection.Problem("power", FormattableString.Invariant($"the probability of detection {p:0.######} is not above the false-alarm rate alpha {a:0.######}, which chance alone reaches; 0.8 or 0.9 are usual"));
                    }

                    rules.Add(new DetectionChoice(a, p, k));
                }
            }
        }

        if (rules.Count == 0 && !StudyKeys.Below("target").Any(key => target.States(key.Name)))
        {
            root.Problem("target", "states no rule; write amplitude_ratio, detection or both");
        }

        return rules;
    }

    public static Protocol? Protocol(Section root, IReadOnlyList<Response> responses)
    {
        if (root.Map("protocol") is not { } protocol)
        {
            return null;
        }

        double? rate = Rate(root, protocol, responses), rejected = protocol.Number("rejected_fraction");
        double? session = protocol.Number("session_min"), preparation = protocol.Number("preparation_min"), breaks = protocol.Number("breaks_min");
        double? conditions = protocol.Number("conditions"), replications = protocol.Number("replications");
        return rate is null || rejected is null || conditions is null || replications is null ? null : new()
        {
            Rate = rate.Value,
            RejectedFraction = rejected.Value,
            Session = session * SecondsPerMinute,
            Preparation = preparation * SecondsPerMinute,
            Breaks = breaks * SecondsPerMinute,
            Conditions = (int)conditions.Value,
            Replications = (int)replications.Value,
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
