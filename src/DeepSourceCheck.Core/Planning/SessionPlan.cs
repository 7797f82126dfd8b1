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

    /// <summary>Recording minutes for accepted trials: N / (60 rate (1 - rejected)).</summary>
    public static double Minutes(Protocol protocol, double trials) => trials / (60 * protocol.Rate * (1 - protocol.RejectedFraction));
}
