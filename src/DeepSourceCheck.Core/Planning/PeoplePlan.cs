using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>People against trials for one verdict.</summary>
/// <remarks>
/// In units of the mean moment a person's average of N trials varies by sb^2 + sw^2/N: sb the spread between people, sw = 1/sqrt(P) the noise of one trial, so that
/// d = 1 / sqrt(sb^2 + sw^2/N). Source: Baker et al. 2021, Psychological Methods 26:295 (from memory). A locked artefact is not in it.
/// </remarks>
internal static class PeoplePlan
{
    private static readonly long[] Grid = [10, 25, 50, 100, 200, 400, 1000];

    private const string Source = "Baker et al. 2021";

    /// <summary>The table; null where one person is planned for.</summary>
    /// <param name="people">What is asked.</param>
    /// <param name="power">Power SNR of one trial.</param>
    /// <param name="session">Trials that the session affords, or null.</param>
    public static PeopleResult? Of(PeopleChoice? people, double power, long? session)
    {
        if (people is null)
        {
            return null;
        }

        PeopleTest test = Test(people);
        long? trials = session > 0 ? session : null;
        PeopleRow Row(long n)
        {
            double d = EffectSize(people, power, n);
            long? count = test.People(d);
            return new(n, d, count, count is { } c ? TrialCount.Ceiling(c / (1 - people.DropOut)) : null);
        }

        IEnumerable<long> grid = trials is { } own ? Grid.Append(own).Distinct().Order() : Grid;
        return new(
            [.. grid.Select(Row)], trials, test.People(Difference(people) / people.Spread),
            people.Participants is { } stated && trials is { } at ? test.PowerOf(EffectSize(people, power, at), stated) : null);
    }

    /// <summary>The lines of `why` after the trials, at the session's trials of each person or, without a session, at the verdict's.</summary>
    /// <param name="people">What is asked.</param>
    /// <param name="power">Power SNR of one trial.</param>
    /// <param name="trials">Trials of each person.</param>
    /// <param name="ofSession">True where these are the session's.</param>
    public static IEnumerable<DerivedNumber> Lines(PeopleChoice people, double power, long trials, bool ofSession)
    {
        PeopleTest test = Test(people);
        bool two = people.GroupDifference is not null;
        double d = EffectSize(people, power, trials);
        const string law = "Johnson, Kotz and Balakrishnan 1995 II, ch. 31";
        yield return two ? new("mu", "difference of the groups' mean moments over the moment", Difference(people), "", "", "protocol.people_test.groups_differ_by", null)
            : new("mu", "mean moment in units of itself", 1, "", "1", "definition", Grade.Derived);
        yield return new("sb", "spread of the moment between people", people.Spread, "", "", "protocol.spread_between_people", null);
        yield return new("sw", "noise of one trial in units of the moment", 1 / Math.Sqrt(power), "", "1 / sqrt(P)", "definition", Grade.Derived);
        yield return new("Ns", $"trials of each person: {(ofSession ? "the session's" : "N")}", trials, "", ofSession ? "" : "N", ofSession ? "protocol" : "definition", null);
        yield return new("dp", "effect size over people", d, "", "mu / sqrt(sb^2 + sw^2 / Ns)", Source, Grade.Memory);
        yield return new("ap", "false-alarm rate of the two-sided test over people", people.Alpha, "", "", "protocol.people_test.alpha", null);
        yield return new("bp", "its power", people.Power, "", "", "protocol.people_test.power", null);
        if (test.People(d) is { } count)
        {
            yield return new("np", $"people{(two ? " in each of two groups" : "")}: the smallest number at which t passes its critical value with that power", count, "", two ? "groups(ap, bp, dp)" : "people(ap, bp, dp)", law, Grade.Memory);
            if (people.DropOut > 0 && TrialCount.Ceiling(count / (1 - people.DropOut)) is { } invited)
            {
                yield return new("op", "share of those invited who are lost", people.DropOut, "", "", "protocol.dropout_fraction", null);
                yield return new("ni", "people to invite", invited, "", "ceil(np / (1 - op))", "definition", Grade.Derived);
            }
        }

        if (people.Participants is { } stated)
        {
            yield return new("nk", $"participants{(two ? " in each group" : "")} as stated", stated, "", "", "protocol.participants", null);
            yield return new("pk", "power that they reach", test.PowerOf(d, stated), "", two ? "power_groups(ap, nk, dp)" : "power_people(ap, nk, dp)", law, Grade.Memory);
        }
    }

    private static PeopleTest Test(PeopleChoice people) => new(people.Alpha, people.Power, people.GroupDifference is not null);

    private static double Difference(PeopleChoice people) => people.GroupDifference ?? 1;

    private static double EffectSize(PeopleChoice people, double power, double trials) =>
        Difference(people) / Math.Sqrt(people.Spread * people.Spread + 1 / (power * trials));
}
