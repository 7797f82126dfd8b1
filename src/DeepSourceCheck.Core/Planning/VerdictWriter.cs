using System.Globalization;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Planning;

/// <summary>The answers for one region: modality by modality, rule by rule, in plain words with their reason and their chain.</summary>
internal sealed class VerdictWriter(StudySetup setup, EvaluationPlan plan, FilledRegion region, ILeadfieldSource source, RegionTally tally)
{
    /// <summary>Measures of the verdicts: EEG, MEG, both, as far as the study has them.</summary>
    /// <param name="plan">What is read.</param>
    public static IEnumerable<IMeasure> Measures(EvaluationPlan plan) =>
        from reading in new (Modality Modality, string? Name)[] { (Modality.Eeg, plan.EegMeasure), (Modality.Meg, plan.MegMeasure), (Modality.Both, plan.BothMeasure) }
        where reading.Name is not null
        let measure = plan.Measures.FirstOrDefault(m => m.Modality == reading.Modality && m.Name == reading.Name)
        where measure is not null
        select measure;

    /// <summary>Writes all verdicts.</summary>
    /// <param name="rows">The region's results; the median count of a verdict's row is that of the dipole whose chain is given.</param>
    /// <param name="cancellation">Stops the search for the dipole at the median.</param>
    public IReadOnlyList<VerdictResult> Write(ref IReadOnlyList<MeasureResult> rows, CancellationToken cancellation)
    {
        var asked = new List<MedianSearch.Question>();
        DirectionName direction = plan.VerdictDirection;
        foreach (IMeasure measure in Measures(plan))
        {
            asked.AddRange(Enumerable.Range(0, plan.Targets.Count).Where(plan.Counts).Select(rule => new MedianSearch.Question(measure, rule)));
        }

        MedianWitness?[] witnesses = new MedianSearch(plan, setup.Head, source, region, tally, direction).Find(asked, cancellation);
        var verdicts = new List<VerdictResult>();
        for (int k = 0; k < asked.Count; k++)
        {
            (IMeasure measure, int rule) = asked[k];
            bool counts = plan.RulesOf(measure)[rule].Absent is null;
            IReadOnlyList<DerivedNumber> chain = counts && witnesses[k] is { } found ? new DerivationChain(plan, setup.Noise!, source.Method).Of(found, found.Read, plan.RulesOf(measure)[rule]) : [];
            rows = counts ? Reconcile(rows, measure, direction, rule, witnesses[k]) : rows;
            MeasureResult row = rows.First(x => x.Modality == measure.Modality && x.Direction == direction && x.Measure == measure.Name);
            VerdictResult verdict = counts ? Verdict(row, rule, plan.RulesOf(measure)[rule], witnesses[k], chain) : NoCount(row, rule);
            verdicts.Add(verdict with { Power = Power(measure, rule, row, witnesses[k]) });
        }

        return verdicts;
    }

    // In a region so large that percentiles are read from classes, the median is that of the dipole whose chain is printed.
    private IReadOnlyList<MeasureResult> Reconcile(
        IReadOnlyList<MeasureResult> rows, IMeasure measure, DirectionName direction, int rule, MedianWitness? witness)
    {
        if (witness is null)
        {
            return rows;
        }

        ITargetRule bound = plan.RulesOf(measure)[rule];
        long? count = TrialCount.Ceiling(bound.Trials(bound.EffectivePower(witness.Power, witness.Artefact, witness.InverseVariance)));
        return [.. rows.Select(row =>
        {
            if (row.Modality != measure.Modality || row.Direction != direction || row.Measure != measure.Name || row.Targets[rule].Trials.P50 == count)
            {
                return row;
            }

            TargetResult target = row.Targets[rule];
            double? minutes = count is { } n && plan.Protocol is { } protocol ? SessionPlan.Minutes(protocol, n) : null;
            target = RegionReport.WithPlan(
                target with { Trials = target.Trials with { P50 = count }, Minutes = target.Minutes is null ? null : target.Minutes with { P50 = minutes } }, plan.Protocol);
            return row with { Targets = [.. row.Targets.Select((t, k) => k == rule ? target : t)] };
        })];
    }

    // Where the study states no detection, its first rule carries the curve of a test at a false-alarm rate and power that are common practice (no source).
    private DetectionCurve? Power(IMeasure measure, int rule, MeasureResult row, MedianWitness? witness)
    {
        bool stated = plan.Targets[rule] is DetectionChoice;
        if (witness is null || (!stated && (rule > 0 || plan.Targets.OfType<DetectionChoice>().Any())))
        {
            return null;
        }

        DetectionChoice choice = plan.Targets[rule] as DetectionChoice ?? new DetectionChoice(0.01, 0.9, 1);
        ITargetRule test = stated ? plan.RulesOf(measure)[rule]
            : RuleBinding.Of(choice, RuleReading.Of(measure, plan.Space, plan.NoiseFactor) with { SteadyState = plan.Response.Steady is not null });
        double artefact = witness.Artefact;
        return new(test.Description, stated, choice.Power, Of(witness.Power)!, Of(FromDecibels(row.SnrDb.P05)), Of(FromDecibels(row.SnrDb.P95)));

        Func<double, double>? Of(double? power) => power is { } p ? trials => test.Probability(p, artefact, trials)!.Value : null;
        static double? FromDecibels(double? db) => db is { } value ? Math.Pow(10, value / 10) : null;
    }

    private static VerdictResult NoCount(MeasureResult row, int rule) => new()
    {
        Modality = row.Modality,
        Rule = row.Targets[rule].Rule,
        Measure = row.Measure,
        Direction = row.Direction,
        Applies = false,
        Text = $"{Names.Of(row.Modality)}, {Reading(row)}: no count ({row.Targets[rule].Reason}).",
    };

    private VerdictResult Verdict(MeasureResult row, int rule, ITargetRule bound, MedianWitness? witness, IReadOnlyList<DerivedNumber> chain)
    {
        TargetResult target = row.Targets[rule];
        long? count = target.Trials.P50;
        bool? fits = plan.SessionTrials is { } session ? count is { } n && n <= session : null;
        StoppingPlan? planned = plan.Targets[rule] is DetectionChoice { Stopping: not null } detection ? new(detection) : null;
        StoppingResult? stopping = witness is null ? null : planned?.Of(bound.EffectivePower(witness.Power, witness.Artefact, witness.InverseVariance), plan.Protocol, plan.SessionTrials);
        PeopleChoice? people = witness?.Power > 0 ? plan.Protocol?.People : null;
        return new VerdictResult
        {
            Modality = row.Modality,
            Rule = target.Rule,
            Measure = row.Measure,
            Direction = row.Direction,
            Text = Text(row, target, fits, bound.StandsOnNoise ? null : witness) + Coherence(bound, witness) + RangeText(AtMoments(bound, witness)),
            FitsSession = fits,
            AtMoments = AtMoments(bound, witness),
            Missing = plan.SessionTrials is { } trials && witness is not null ? 1 - bound.Probability(witness.Power, witness.Artefact, trials) : null,
            Averaging = Averaging.Of(plan, setup.Noise!, witness, count),
            People = people is null ? null : PeoplePlan.Of(people, witness!.Power, plan.SessionTrials),
            Stopping = stopping,
            Rate = witness is null ? null : RateOptimum.Of(plan, bound, witness, target.Minutes?.P50),
            Chain = chain.Count == 0 ? chain : [.. chain, .. stopping is null ? [] : planned!.Lines(stopping, witness!.Artefact > 0), .. people is null ? [] : People(people, witness!, count)],
        };
    }

    private IEnumerable<DerivedNumber> People(PeopleChoice people, MedianWitness witness, long? count) => plan.SessionTrials is > 0 and { } session
        ? PeoplePlan.Lines(people, witness.Power, session, ofSession: true)
        : count is { } trials ? PeoplePlan.Lines(people, witness.Power, trials, ofSession: false) : [];

    private static string Coherence(ITargetRule rule, MedianWitness? witness) => rule is not SteadyStateRule spectral || witness is null
        || spectral.CoherenceTrials(rule.EffectivePower(witness.Power, witness.Artefact)) is not { } trials || trials > TrialCount.MostPlanned ? ""
        : string.Create(CultureInfo.InvariantCulture, $" By coherence over trials {trials:N0}.");

    private CountRange? AtMoments(ITargetRule rule, MedianWitness? witness)
    {
        if (plan.Response.MomentRange is not { } range || range.Low == range.High || witness is null)
        {
            return null;
        }

        return new(At(range.Low), At(range.High));

        long? At(double moment)
        {
            double ratio = moment / plan.Response.Moment, effective = rule.EffectivePower(witness.Power * ratio * ratio, witness.Artefact, witness.InverseVariance);
            return effective > 0 ? TrialCount.Ceiling(rule.Trials(effective)) : null;
        }
    }

    private string Text(MeasureResult row, TargetResult target, bool? fits, MedianWitness? witness)
    {
        string reading = $"{Names.Of(row.Modality)}, {Reading(row)}";
        if (target.Trials.P50 is not { } count)
        {
            const string Said = "not reachable by averaging: ";
            string reason = target.Reason ?? row.Reason ?? "no signal";
            return $"{reading}: out of reach by averaging ({(reason.StartsWith(Said, StringComparison.Ordinal) ? reason[Said.Length..] : reason)}).";
        }

        string why = witness is null ? "" : string.Create(CultureInfo.InvariantCulture, $" In one trial{(plan.IsSpectral ? ", for a filter that knows the waveform," : "")} {Compare(witness.Power)}.");
        if (count > TrialCount.MostPlanned)
        {
            return string.Create(CultureInfo.InvariantCulture, $"{reading}: out of reach, more than {TrialCount.MostPlanned:N0} trials.{why}");
        }

        string trials = string.Create(CultureInfo.InvariantCulture, $"{count:N0} {(count == 1 ? "trial" : "trials")}");
        if (target.Minutes?.P50 is not { } minutes)
        {
            return $"{reading}: {trials}.{why}";
        }

        string averages = Rounded.Averages(plan.Protocol!.Conditions, plan.Protocol.Replications);
        string each = averages.Length > 0 ? $" for {averages}" : "";
        string session = plan.Protocol.Session is { } seconds && plan.SessionTrials is { } afforded
            ? string.Create(CultureInfo.InvariantCulture, $": {(fits == true ? "fits" : "does not fit")} the session of {seconds / 60:0.######} min ({afforded:N0} trials{(each.Length > 0 ? " each" : "")})")
            : "";
        string length = fits == false && plan.Protocol is { Session: { } whole, Conditions: 1, Replications: 1 } ? Rounded.MinutesBeyond(minutes, whole / 60) : Rounded.Minutes(minutes);
        return $"{reading}: {trials}, {length} min{each}{session}.{why}";
    }

    private string RangeText(CountRange? range)
    {
        if (range is null)
        {
            return "";
        }

        MomentRange moments = plan.Response.MomentRange!;
        return $" At {Trials(range.Low, moments.Low)}, at {Trials(range.High, moments.High)}.";

        static string Trials(long? count, double moment) => string.Create(CultureInfo.InvariantCulture,
            $"{Math.Round(Si.ToNanoAmpereMetres(moment), 9):0.######} nAm {(count is { } n && n <= TrialCount.MostPlanned ? $"{n:N0} trials" : "out of reach")}");
    }

    private static string Reading(MeasureResult row) => row.Modality == Modality.Both && row.Measure is not (Names.MatchedFilter or Names.RealisticFilter)
        ? $"{row.Measure} and best MEG channel" : row.Measure;

    private static string Compare(double power)
    {
        double ratio = 1 / Math.Sqrt(power);
        return ratio >= 1
            ? string.Create(CultureInfo.InvariantCulture, $"the noise is {Rounded.Two(ratio)} times the response")
            : string.Create(CultureInfo.InvariantCulture, $"the response is {Rounded.Two(1 / ratio)} times the noise");
    }
}
