using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Report.Answers;

/// <summary>Words for competitors, location and chosen electrodes, alike on the console, in `why` and on the page.</summary>
public static class AttributionWords
{
    /// <summary>What the figures with competitors stand on.</summary>
    public const string Assumed = "Each competitor has a random moment in every trial, of the stated rms, in any direction and anywhere in its region with equal chance. It adds to the noise and averages like noise; "
        + "one that is locked to the stimulus does not, and only its topography tells it apart. Nothing is projected out: all of cortex spans nearly every pattern, and its projection would leave nothing. "
        + "A measured covariance holds what was active in its recording: state only what it lacks.";

    /// <summary>What a location error is.</summary>
    public const string Located = "Location: the smallest error that noise allows any method (Cramer-Rao bound, one dipole of unknown moment, a perfect head model), with the error of real head models added in squares "
        + "(EEG 8 mm, MEG 3 mm, both by their weights; published for a skull phantom, Leahy et al. 1998). It is no promise that a fit finds the source: a wrong number of sources or a competitor costs more.";

    /// <summary>`cortex 10 nAm, thalamus-left 3 nAm`.</summary>
    public static string Sources(CompetitorsResult competitors) => string.Join(", ", competitors.Sources.Select(s => $"{s.Region} {Say.Moment(s.Moment)}"));

    /// <summary>`7.6 mm`, or `not localisable`.</summary>
    public static string Error(LocationReading bound) => bound is { Localisable: true, Error.P50: { } error } ? $"{Millimetres(error)} mm" : "not localisable";

    /// <summary>`7.5 to 12 mm`; empty without a median.</summary>
    public static string Spread(LocationReading bound) => bound.Error is { P05: { } low } && bound.Localisable
        ? $"{Millimetres(low)} to {(bound.Error.P95 is { } high ? $"{Millimetres(high)}" : "no bound")}" : "";

    /// <summary>Sets of 2, 4, 8, 16 and so on, and the largest: how many electrodes and trials; sets that are out of reach are left out.</summary>
    /// <param name="chosen">The choice.</param>
    /// <param name="rule">Rule.</param>
    public static IReadOnlyList<(int Electrodes, long Trials)> Milestones(SensorChoiceResult chosen, string rule) =>
    [
        .. chosen.Steps.Select((s, k) => (Electrodes: k + 1, Trials: Trials(s.Trials, rule)))
            .Where(p => p.Trials is not null && p.Electrodes >= 2 && (int.IsPow2(p.Electrodes) || p.Electrodes == chosen.Steps.Count)).Select(p => (p.Electrodes, p.Trials!.Value)),
    ];

    /// <summary>The count of a rule; null where out of reach.</summary>
    public static long? Trials(IReadOnlyList<(string Rule, long? Trials)> counts, string rule) => counts.FirstOrDefault(c => c.Rule == rule).Trials;

    private static string Millimetres(double metres) => Say.Two(Si.ToMm(metres));
}
