using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Trials and minutes of a protocol.</summary>
public static class SessionPlan
{
    /// <summary>Accepted trials that one session affords each condition and replication: floor(T rate (1 - rejected) / (conditions replications)).</summary>
    /// <returns>Null without a protocol or session length.</returns>
    public static long? Trials(Protocol? protocol)
    {
        if (protocol?.Session is not { } seconds)
        {
            return null;
        }

        double trials = seconds * protocol.Rate * (1 - protocol.RejectedFraction) / ((double)protocol.Conditions * protocol.Replications);
        double nearest = Math.Round(trials);
        return (long)(Math.Abs(trials - nearest) <= TrialCount.IntegerTolerance * trials ? nearest : Math.Floor(trials));
    }

    /// <summary>Presented trials for accepted ones: N / (1 - rejected), rounded up; null beyond what can be counted.</summary>
    public static long? Presented(Protocol protocol, long trials) => TrialCount.Ceiling(trials / (1 - protocol.RejectedFraction));

    /// <summary>Minutes in the chair for accepted trials of each condition and replication: their recording, one after the other, breaks and preparation.</summary>
    public static double ChairMinutes(Protocol protocol, double trials) =>
        Minutes(protocol, trials) * protocol.Conditions * protocol.Replications + ((protocol.Breaks ?? 0) + (protocol.Preparation ?? 0)) / 60;

    /// <summary>Recording minutes for accepted trials: N / (60 rate (1 - rejected)).</summary>
    public static double Minutes(Protocol protocol, double trials) => trials / (60 * protocol.Rate * (1 - protocol.RejectedFraction));
}
