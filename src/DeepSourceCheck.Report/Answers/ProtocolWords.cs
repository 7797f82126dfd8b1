using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Report.Answers;

/// <summary>People, planned analyses and rate in words that console and page share.</summary>
internal static class ProtocolWords
{
    /// <summary>Participants as words count them: of two groups, in each.</summary>
    /// <param name="people">What is asked.</param>
    public static string Counted(PeopleChoice people) => people.GroupDifference is null ? "people" : "people in each group";

    /// <summary>The test: `two-sided t test, alpha 0.05, power 80 %`.</summary>
    public static string Test(PeopleChoice people) =>
        $"two-sided t test{(people.GroupDifference is { } g ? $" of two groups whose mean moments differ by {Say.Percent(g)} of the moment" : "")}, alpha {Say.Stated(people.Alpha)}, power {Say.Percent(people.Power)}";

    /// <summary>A number of people, or `beyond counting`.</summary>
    public static string Count(long? people) => people is { } n && n <= Say.MostTrials ? Say.Count(n) : Say.OutOfReach;

    /// <summary>`18 (20 invited), 100 trials each`; empty without a session.</summary>
    /// <param name="people">What is asked.</param>
    /// <param name="result">What it takes.</param>
    public static string Session(PeopleChoice people, PeopleResult result)
    {
        if (result.AtSession is not { } row)
        {
            return "";
        }

        string invited = people.DropOut > 0 && row.Invited is { } i && i <= Say.MostTrials ? $" ({Say.Count(i)} invited)" : "";
        return $"{Count(row.Participants)}{invited}, {Say.Plural(row.Trials, "trial")} each";
    }

    /// <summary>`345 at most, 211 expected (12, 7.4 min)`.</summary>
    public static string Planned(StoppingResult s)
    {
        string minutes = s.MostMinutes is { } most && s.ExpectedMinutes is { } expected ? $" ({Say.Minutes(most)}, {Say.Minutes(expected)} min)" : "";
        return s.Most > Say.MostTrials ? Say.OutOfReach : $"{Say.Count(s.Most)} at most, {Say.Count((long)Math.Ceiling(s.Expected))} expected{minutes}";
    }

    /// <summary>`27.1/s would take 1.2 min, 0.8 min less`; `the stated rate is the best of the curve` where nothing is to be gained.</summary>
    public static string Rate(RateResult rate)
    {
        if (rate.Best == rate.Stated)
        {
            return $"{Say.Stated(rate.Stated)}/s is the best of the curve";
        }

        string time = rate.Minutes is { } minutes && rate.Trials <= Say.MostTrials
            ? $"would take {Say.Minutes(minutes)} min{(rate.Saved is { } saved ? $", {Say.Minutes(saved)} min less" : "")}" : Say.OutOfReach;
        return $"{Say.Significant(rate.Best, 3)}/s {time}{(rate.Overlaps ? "; responses then overlap in the window" : "")}";
    }
}
