using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Turns the tally of one region into its table of results.</summary>
internal sealed class RegionReport(EvaluationPlan plan, RegionTally tally, bool megPeakIsPlanar, Func<Modality, int, string> channelName)
{
    /// <summary>Amplitude of the least against the most sensitive direction in realistic heads: published median over cortex (Ahlfors et al. 2010, Brain Topogr 23:227).</summary>
    public const double PublishedLeak = 0.06;

    private const string SilentMegReason =
        "silent: MEG does not see this direction (below the rounding of the strongest; so it is in a spherical head); realistic heads leak: at_leak holds the figures at the published leak";

    private const string SilentReason = "silent: what is read is exactly zero for this direction";

    private const string UndefinedReason = "the directions are undefined here: no MEG channel sees anything (the centre of a spherical head, or summed fields that cancel)";

    private const string ArtefactReason = "a locked artefact is stated for one channel; what a filter over all channels makes of it is not known";

    private const string BuriedReason = "not reachable by averaging: the locked artefact is too large against the response";

    private const string BeyondReason = "not reachable: more trials than can be counted";

    /// <summary>Every row: modality, then direction, then measure.</summary>
    public IReadOnlyList<MeasureResult> Rows()
    {
        (int Direction, int Measure)[] order =
        [
            .. from modality in Enum.GetValues<Modality>()
               from d in Enumerable.Range(0, plan.Directions.Count)
               from m in Enumerable.Range(0, plan.Measures.Count)
               where plan.Measures[m].Modality == modality
               select (d, m),
        ];
        var rows = new MeasureResult[order.Length];
        Parallel.For(0, rows.Length, k => rows[k] = Row(order[k].Direction, order[k].Measure));
        return rows;
    }

    /// <summary>How well the directions split; null where there is no split at all.</summary>
    public SplitSummary? Split() => plan.Directions.Contains(DirectionName.QuasiRadial)
        ? new SplitSummary(tally.WeakestOverStrongest.Percentiles(x => x), tally.AngleToRadial.Percentiles(Si.ToDegrees), tally.Undefined, tally.Degenerate)
        : null;

    private MeasureResult Row(int d, int m)
    {
        IMeasure measure = plan.Measures[m];
        DirectionName direction = plan.Directions[d];
        MeasureTally cell = tally.Cells[d][m];
        Percentiles snr = cell.Power.Percentiles(Decibels);
        bool silent = cell.Power.Count > 0 && cell.Power.AtRank(cell.Power.Count - 1) == 0;
        PeakAmplitude? peak = Peak(d, measure, cell);
        double? peakPerMoment = peak?.Value / plan.Response.Moment;
        List<TargetResult> targets = [.. plan.RulesOf(measure).Select((rule, r) => Target(rule, r, cell, measure, peakPerMoment))];
        string? reason = cell.Power.Count == 0 ? UndefinedReason
            : silent ? Silent(measure)
            : snr.P05 is null ? "some dipoles or directions are silent: percentiles that fall on them are null"
            : targets.Where((_, r) => plan.RulesOf(measure)[r].Absent is null).FirstOrDefault(t => t.Trials.P50 is null)?.Reason;
        LeakResult? leak = null;
        if (cell.Power.Count > 0 && snr.P50 is null && measure.Modality == Modality.Meg && plan.Directions.Contains(DirectionName.StrongestTangential))
        {
            leak = Leak(tally.Cell(DirectionName.StrongestTangential, measure), measure);
        }

        return new MeasureResult(measure.Modality, direction, measure.Name, silent ? null : peak, snr, targets, reason, leak);
    }

    private TargetResult Target(ITargetRule rule, int r, MeasureTally cell, IMeasure measure, double? peakPerMoment, double powerFactor = 1)
    {
        if (rule.Absent is { } absent)
        {
            return new TargetResult(rule.Name, new(null, null, null, null, null), null, null, null, cell.Power.Count == 0 ? UndefinedReason : absent) { Absent = true };
        }

        QuantileStore effective = cell.Counted(r);
        CountPercentiles Trials(Func<double, double> of)
        {
            long? Count(double share) => effective.NearestRankFromTop(share) is { } power && power > 0 ? TrialCount.Ceiling(of(power * powerFactor)) : null;
            return new(Count(0.05), Count(0.25), Count(0.50), Count(0.75), Count(0.95));
        }

        CountPercentiles trials = Trials(rule.Trials);
        CountPercentiles? weighted = plan.WeightingGain is { } gain ? Trials(power => rule.WeightedTrials(power, gain)) : null;
        Percentiles? minutes = plan.Protocol is null ? null : Times(trials, n => SessionPlan.Minutes(plan.Protocol, n));

        double? smallest = null;
        if (rule.NoSmallest is null && plan.SessionTrials is > 0 and { } session)
        {
            double? scale = cell.Scales[r] is { } scales
                ? scales.NearestRankFromTop(0.5) is { } inverse && inverse > 0 ? 1 / Math.Sqrt(inverse * powerFactor) : null
                : cell.Power.NearestRankFromTop(0.5) is { } power && power > 0 ? rule.SmallestScale(power * powerFactor, 0, session) : null;
            smallest = scale * plan.Response.Moment;
        }

        string? reason = rule.NoSmallest;
        if (trials.P50 is null || trials.P95 is null)
        {
            reason = cell.Power.Count == 0 ? UndefinedReason
                : cell.Power.NearestRankFromTop(0.95) == 0 ? Silent(measure)
                : effective.Count == 0 ? ArtefactReason
                : plan.HasArtefact(measure.Modality) ? BuriedReason : BeyondReason;
        }

        return WithPlan(new TargetResult(rule.Name, trials, minutes, smallest, smallest * peakPerMoment, reason) { Weighted = weighted }, plan.Protocol);
    }

    /// <summary>A result whose presented trials and time in the chair follow from its trials.</summary>
    public static TargetResult WithPlan(TargetResult target, Protocol? protocol) => protocol is null ? target : target with
    {
        Presented = Counts(target.Trials, n => SessionPlan.Presented(protocol, n)),
        ChairMinutes = Times(target.Trials, n => SessionPlan.ChairMinutes(protocol, n)),
    };

    private static CountPercentiles Counts(CountPercentiles n, Func<long, long?> map)
    {
        long? Of(long? count) => count is { } c ? map(c) : null;
        return new(Of(n.P05), Of(n.P25), Of(n.P50), Of(n.P75), Of(n.P95));
    }

    private static Percentiles Times(CountPercentiles n, Func<long, double> map)
    {
        double? Of(long? count) => count is { } c ? map(c) : null;
        return new(Of(n.P05), Of(n.P25), Of(n.P50), Of(n.P75), Of(n.P95));
    }

    private static string Silent(IMeasure measure) => measure.Modality == Modality.Meg ? SilentMegReason : SilentReason;

    private LeakResult Leak(MeasureTally strongest, IMeasure measure)
    {
        const double factor = PublishedLeak * PublishedLeak;
        return new LeakResult(PublishedLeak, strongest.Power.Percentiles(p => Decibels(p * factor)),
            [.. plan.RulesOf(measure).Select((rule, r) => Target(rule, r, strongest, measure, null, factor))]);
    }

    private PeakAmplitude? Peak(int d, IMeasure measure, MeasureTally cell)
    {
        if (measure.Modality == Modality.Both)
        {
            return null;
        }

        if (measure is DerivationMeasure derivation)
        {
            double sd = plan.Space.DerivationSd[derivation.Index] * Math.Sqrt(plan.NoiseFactor) * (plan.IsSpectral ? plan.View.Kept : 1);
            return cell.Power.Interpolated(0.5, p => Si.ToMicrovolts(Math.Sqrt(p) * sd)) is { } amplitude ? new PeakAmplitude(amplitude, "uV", derivation.Name) : null;
        }

        bool eeg = measure.Modality == Modality.Eeg;
        PeakTally peak = tally.Peaks[d][eeg ? 0 : 1];
        if (peak.MostOften < 0)
        {
            return null;
        }

        (string unit, Func<double, double> convert) = eeg ? ("uV", Si.ToMicrovolts) : megPeakIsPlanar ? ("fT/cm", Si.ToFemtoteslaPerCm) : ("fT", (Func<double, double>)Si.ToFemtotesla);
        double? value = peak.Power.Interpolated(0.5, p => convert(Math.Sqrt(p) * plan.Response.Moment * plan.View.Kept));
        return value is { } v ? new PeakAmplitude(v, unit, channelName(measure.Modality, peak.MostOften)) : null;
    }

    /// <summary>Power ratio in dB.</summary>
    public static double Decibels(double power) => 10 * Math.Log10(power);
}
