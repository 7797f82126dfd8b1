namespace DeepSourceCheck.Core.Studies;

/// <summary>How far a value lies from what is usual.</summary>
public enum Plausible
{
    /// <summary>Within 3 times of the usual range.</summary>
    Yes,

    /// <summary>Outside by more than 3 times, or by more than 10 times and accepted by the study: a warning.</summary>
    Warning,

    /// <summary>Outside by more than 10 times: the study is refused.</summary>
    Problem,
}

/// <summary>A judgement with its text.</summary>
/// <param name="Is">The judgement.</param>
/// <param name="Text">Value, usual range and what to do; empty where the value is plausible.</param>
public sealed record PlausibilityJudgement(Plausible Is, string Text);

/// <summary>Whether a value can be meant: most implausible values are a wrong unit.</summary>
public static class Plausibility
{
    private const double WarnFactor = 3, StopFactor = 10;

    // A bound that is met exactly is inside, whatever the rounding of the product.
    private const double Guard = 1e-12;

    /// <summary>
    /// Judges a value against its usual range: below low/3 or above 3 high it warns, below low/10 or above 10 high it stops,
    /// unless <paramref name="accepted"/> holds the key.
    /// </summary>
    /// <param name="key">Full key in the study, as `accept_implausible` would name it.</param>
    /// <param name="value">The value, in <paramref name="unit"/>.</param>
    /// <param name="low">Lower end of the usual range, positive.</param>
    /// <param name="high">Upper end of the usual range.</param>
    /// <param name="unit">Unit, or empty.</param>
    /// <param name="accepted">Keys that the study accepts as they are (<see cref="Study.AcceptImplausible"/>).</param>
    /// <param name="what">What the value is, where the key does not say it: `the peak amplitude`; empty: the key's value.</param>
    public static PlausibilityJudgement Judge(
        string key, double value, double low, double high, string unit, IReadOnlyCollection<string> accepted, string what = "")
    {
        if (!Outside(value, low, high, WarnFactor))
        {
            return new(Plausible.Yes, "");
        }

        string u = unit.Length > 0 ? " " + unit : "";
        string subject = what.Length > 0 ? what + " " : "";
        string range = $"{subject}{KeyShape.Text(value)}{u} is far from the usual {KeyShape.Text(low)} to {KeyShape.Text(high)}{u}";
        if (!Outside(value, low, high, StopFactor))
        {
            return new(Plausible.Warning, $"{range} (more than 3 times outside); check the unit");
        }

        return accepted.Contains(key)
            ? new(Plausible.Warning, $"{range} (more than 10 times outside); accepted by accept_implausible")
            : new(Plausible.Problem, $"{range} (more than 10 times outside); check the unit, or add `{key}` to accept_implausible if it is meant");
    }

    // Written so that NaN is outside.
    private static bool Outside(double value, double low, double high, double factor) =>
        !(value >= low / factor * (1 - Guard) && value <= high * factor * (1 + Guard));
}
