using System.Globalization;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Planned analyses of one verdict: after each step of m trials the average is tested, m the smallest whole number with the rule's power.</summary>
internal sealed class StoppingPlan
{
    private const string Source = "Lan and DeMets 1983; Armitage, McPherson and Rowe 1969";

    private readonly DetectionChoice _rule;
    private readonly StoppingChoice _choice;
    private readonly RepeatedAnalyses _analyses;
    private readonly double _drift;

    /// <param name="rule">A rule with planned analyses.</param>
    public StoppingPlan(DetectionChoice rule)
    {
        _rule = rule;
        _choice = rule.Stopping ?? throw new ArgumentException("the rule plans no analyses", nameof(rule));
        _analyses = new(rule.Alpha / rule.Looks, _choice);
        _drift = _analyses.Drift(rule.Power);
    }

    /// <summary>The plan; null where it takes more trials than can be counted.</summary>
    /// <param name="effective">Effective power SNR of one trial.</param>
    /// <param name="protocol">Protocol, or null.</param>
    /// <param name="session">Trials that the session affords, or null.</param>
    public StoppingResult? Of(double effective, Protocol? protocol, long? session)
    {
        int count = _choice.Analyses;
        if (!(effective > 0) || TrialCount.Ceiling(_drift * _drift / (count * effective)) is not { } step || step > TrialCount.Largest / count)
        {
            return null;
        }

        double[] with = _analyses.Stops(Math.Sqrt(count * step * effective)), without = _analyses.Stops(0);
        long most = count * step;
        double expected = step * Steps(with);
        return new(
            _choice.Spending,
            [.. with.Select((stops, k) => new AnalysisRow((k + 1) * step, _analyses.Bounds[k], AlphaSpending.Spent(_choice.Spending, _rule.Alpha / _rule.Looks, (k + 1.0) / count), stops, without[k]))],
            most, expected, step * Steps(without),
            protocol is null ? null : SessionPlan.Minutes(protocol, most), protocol is null ? null : SessionPlan.Minutes(protocol, expected), session is { } n ? most <= n : null);
    }

    /// <summary>The lines of `why` after the trials of a single analysis.</summary>
    /// <param name="plan">The plan.</param>
    /// <param name="artefact">True where a locked artefact takes part of the response's place.</param>
    public IEnumerable<DerivedNumber> Lines(StoppingResult plan, bool artefact)
    {
        int count = _choice.Analyses;
        yield return new("J", $"analyses planned while trials come in, {Names.Of(_choice.Spending)} spending of alpha / K", count, "", "", "target.detection.stopping", null);
        for (int k = 1; k <= count; k++)
        {
            AnalysisRow row = plan.Rows[k - 1];
            yield return new($"b{Text(k)}", $"bound of analysis {Text(k)}, in standard deviations of its average", row.Bound, "", "", Source, Grade.Memory);
        }

        yield return new("theta", "mean of the last analysis, in its standard deviations, at which all of them together pass with the power", _drift, "", "", Source, Grade.Memory);
        yield return new("m", "trials from one analysis to the next", plan.Most / count, "", $"ceil(theta^2 / (J {(artefact ? "(sqrt(P) - sqrt(R))^2" : "P")}))", "definition", Grade.Derived);
        yield return new("Nx", "most trials", plan.Most, "", "J m", "definition", Grade.Derived);
        double on = 1;
        for (int k = 1; k < count; k++)
        {
            on -= plan.Rows[k - 1].Stops;
            yield return new($"q{Text(k)}", $"chance to go on after analysis {Text(k)}", on, "", "", Source, Grade.Memory);
        }

        yield return new("Ne", "expected trials", plan.Expected, "", $"m (1 + {string.Join(" + ", Enumerable.Range(1, count - 1).Select(k => "q" + Text(k)))})", "mean of the analyses made", Grade.Derived);
    }

    // Mean number of analyses: the first is always made, each other where all before it went on.
    private static double Steps(double[] stops)
    {
        double on = 1, sum = 1;
        for (int k = 0; k < stops.Length - 1; k++)
        {
            on -= stops[k];
            sum += on;
        }

        return sum;
    }

    private static string Text(int k) => k.ToString(CultureInfo.InvariantCulture);
}
