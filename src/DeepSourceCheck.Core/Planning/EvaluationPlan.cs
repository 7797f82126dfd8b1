using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>What is read from every dipole of one response: measures, directions, rules.</summary>
public sealed class EvaluationPlan
{
    private Dictionary<IMeasure, IReadOnlyList<ITargetRule>> _rules;

    /// <param name="response">The response.</param>
    /// <param name="space">Its channels.</param>
    /// <param name="targets">Targets, in the study's order.</param>
    /// <param name="protocol">Protocol, or null.</param>
    /// <param name="megReported">False where MEG rows serve the split alone.</param>
    /// <param name="splitPossible">False where there is no MEG leadfield.</param>
    /// <param name="view">What of a known waveform is read, and whether by filters that were built for something else; null: the peak, by all other measures.</param>
    public EvaluationPlan(
        Response response, SignalSpace space, IReadOnlyList<TargetChoice> targets, Protocol? protocol, bool megReported, bool splitPossible, PlanView? view = null)
    {
        View = view ?? new PlanView();
        Response = response;
        Space = space;
        Targets = targets;
        Protocol = protocol;
        SessionTrials = SessionPlan.Trials(protocol);
        MegReported = megReported;
        bool eeg = space.Reference is not null;
        var measures = new List<IMeasure>();
        if (View.Errors is not null)
        {
            measures.AddRange([.. eeg ? new[] { new RealisticFilterMeasure(Modality.Eeg) } : [], .. megReported ? new[] { new RealisticFilterMeasure(Modality.Meg) } : [],
                .. eeg && megReported ? new[] { new RealisticFilterMeasure(Modality.Both) } : []]);
        }
        else if (eeg)
        {
            measures.Add(new ChannelMeanMeasure(space, Modality.Eeg));
            measures.Add(new BestChannelMeasure(space, Modality.Eeg));
            measures.Add(new MatchedFilterMeasure(Modality.Eeg));
            for (int k = 0; k < (space.Derivations?.Outputs ?? 0); k++)
            {
                measures.Add(new DerivationMeasure(space, k));
            }
        }

        if (megReported && View.Errors is null)
        {
            measures.Add(new ChannelMeanMeasure(space, Modality.Meg));
            measures.Add(new BestChannelMeasure(space, Modality.Meg));
            measures.Add(new MatchedFilterMeasure(Modality.Meg));
        }

        EegMeasure = eeg ? response.EegMeasure ?? space.Derivations?.Names[0] ?? Names.BestChannel : null;
        MegMeasure = megReported ? response.MegMeasure ?? Names.BestChannel : null;
        if (eeg && megReported)
        {
            string[] chosen = [EegMeasure!, MegMeasure!];
            string? filter = chosen.Contains(Names.RealisticFilter) ? Names.RealisticFilter : chosen.All(c => c == Names.MatchedFilter) ? Names.MatchedFilter : null;
            BothMeasure = filter ?? (EegMeasure == Names.MatchedFilter ? MegMeasure : EegMeasure);
            if (View.Errors is null)
            {
                measures.Add(new MatchedFilterMeasure(Modality.Both));
            }

            if (filter is null && View.Errors is null && chosen.Contains(Names.MatchedFilter))
            {
                measures.Add(new SumMeasure(
                    measures.First(m => m.Modality == Modality.Eeg && m.Name == EegMeasure), measures.First(m => m.Modality == Modality.Meg && m.Name == MegMeasure)));
            }
            else if (filter is null && View.Errors is null)
            {
                measures.Add(new PairMeasure(space, space.Derivations?.Names.ToList().IndexOf(EegMeasure!) ?? -1));
            }
        }

        Measures = measures;
        _rules = Bound(double.NaN);
        Directions =
        [
            .. splitPossible ? new[] { DirectionName.QuasiRadial, DirectionName.Tangential, DirectionName.StrongestTangential } : [],
            DirectionName.Isotropic, DirectionName.Best,
            .. response.Direction.Vector is null ? Array.Empty<DirectionName>() : [DirectionName.Given],
        ];
        Gain = ReadMoment * ReadMoment / NoiseFactor;
    }

    // One reading of another plan.
    private EvaluationPlan(EvaluationPlan plan, IMeasure measure, DirectionName direction)
    {
        View = plan.View;
        Response = plan.Response;
        Space = plan.Space;
        Targets = [];
        _rules = new() { [measure] = [] };
        MegReported = plan.MegReported;
        Measures = [measure];
        Directions = [direction];
        _rules = new() { [measure] = [] };
        Gain = plan.Gain;
    }

    /// <summary>A plan that reads one measure in one direction and nothing else.</summary>
    /// <param name="measure">One of <see cref="Measures"/>.</param>
    /// <param name="direction">One of <see cref="Directions"/>.</param>
    public EvaluationPlan Only(IMeasure measure, DirectionName direction) => new(this, measure, direction);

    /// <summary>The direction that the verdict stands on; where there is no split, every direction.</summary>
    public DirectionName VerdictDirection => Directions.Contains(Response.Direction.Name) ? Response.Direction.Name : DirectionName.Isotropic;

    /// <summary>The response.</summary>
    public Response Response { get; }

    /// <summary>Its channels.</summary>
    public SignalSpace Space { get; }

    /// <summary>Targets, in the study's order.</summary>
    public IReadOnlyList<TargetChoice> Targets { get; }

    /// <summary>Protocol, or null.</summary>
    public Protocol? Protocol { get; }

    /// <summary>Accepted trials of the session, or null.</summary>
    public long? SessionTrials { get; }

    /// <summary>Whether MEG is reported.</summary>
    public bool MegReported { get; }

    /// <summary>All measures, grouped by modality.</summary>
    public IReadOnlyList<IMeasure> Measures { get; }

    /// <summary>Reported directions.</summary>
    public IReadOnlyList<DirectionName> Directions { get; }

    /// <summary>Measure of the EEG verdict, or null without EEG.</summary>
    public string? EegMeasure { get; }

    /// <summary>Measure of the MEG verdict, or null without MEG.</summary>
    public string? MegMeasure { get; }

    /// <summary>Measure of the joint verdict, or null without both.</summary>
    public string? BothMeasure { get; }

    /// <summary>What of a known waveform is read, and by what.</summary>
    public PlanView View { get; }

    /// <summary>True where powers are d^2 of a filter that is matched in time to the waveform.</summary>
    public bool IsSpectral => Space.IsSpectral;

    /// <summary>Whether a target's counts are taken from this plan.</summary>
    /// <param name="target">Index among <see cref="Targets"/>.</param>
    public bool Counts(int target) => View.Waveform is null || (Targets[target] is DetectionChoice) == IsSpectral;

    /// <summary>Times that every dipole is read: once, or under each draw of the filters' errors.</summary>
    public int Passes => View.Errors is null ? 1 : FilterErrors.Draws;

    /// <summary>Ratio of the power of the noise of the convention to that of one sample: 2 for a peak-to-trough difference, else 1. A filter in time reads no two points: 1.</summary>
    public double NoiseFactor => Response.Measured == Measured.PeakToTrough && !IsSpectral ? 2 : 1;

    /// <summary>Moment that is read [A m]: what filter and jitter leave of the peak; for a filter in time all of it, since they are in its spectrum.</summary>
    public double ReadMoment => Response.Moment * (IsSpectral ? 1 : View.Kept);

    /// <summary>Square of <see cref="ReadMoment"/> over <see cref="NoiseFactor"/> [(A m)^2].</summary>
    public double Gain { get; }

    /// <summary>The targets' rules on a measure, in the study's order.</summary>
    public IReadOnlyList<ITargetRule> RulesOf(IMeasure measure) => _rules[measure];

    /// <summary>Whether a rule stands on the ratio of window rms to peak, which is known only when a region was read.</summary>
    public bool StandsOnWindow => Targets.Any(t => t is VarianceRatioChoice);

    /// <summary>Factor, without unit, by which weighting each trial by its own noise lowers the noise power; null where the study states no spread between trials.</summary>
    /// <remarks>Plain averaging leaves mean(s^2)/N, weighted 1/sum(1/s^2): for a lognormal s the ratio is exp(var ln s^2) = exp(4 var ln s).</remarks>
    public double? WeightingGain { get; init; }

    /// <summary>The same plan, measures and all, with rules that know the ratio.</summary>
    /// <param name="windowPerPeak">Rms over the window per peak amplitude; 0 where it is not to be had.</param>
    public EvaluationPlan WithWindow(double windowPerPeak)
    {
        var plan = (EvaluationPlan)MemberwiseClone();
        plan.WindowPerPeak = windowPerPeak;
        plan._rules = Bound(windowPerPeak);
        return plan;
    }

    /// <summary>Rms over the window per peak amplitude that the rules know, without unit; NaN where they do not.</summary>
    public double WindowPerPeak { get; private set; } = double.NaN;

    /// <summary>The same plan against other noise.</summary>
    /// <param name="space">The same channels under that noise.</param>
    public EvaluationPlan Against(SignalSpace space) =>
        new EvaluationPlan(Response, space, Targets, Protocol, MegReported, Directions.Contains(DirectionName.QuasiRadial), View) { WeightingGain = WeightingGain }.WithWindow(WindowPerPeak);

    private Dictionary<IMeasure, IReadOnlyList<ITargetRule>> Bound(double windowPerPeak) => Measures.ToDictionary(m => m, m =>
    {
        RuleReading reading = RuleReading.Of(m, Space, NoiseFactor) with { WindowPerPeak = windowPerPeak, SteadyState = Response.Steady is not null };
        return (IReadOnlyList<ITargetRule>)[.. Targets.Select(t => RuleBinding.Of(t, reading))];
    });

    /// <summary>Whether percentiles of a rule on a measure run over powers that the rule makes of each reading, not over the powers themselves.</summary>
    public bool CountsEffective(IMeasure measure, ITargetRule rule) => rule.Absent is null && (HasArtefact(measure.Modality) || rule.StandsOnNoise);

    /// <summary>Whether the noise of what was read, dipole by dipole, enters any count.</summary>
    public bool ReadsNoise => HasArtefact(Modality.Both) || Measures.Any(m => RulesOf(m).Any(r => CountsEffective(m, r)));

    /// <summary>Whether a locked artefact bears on a modality.</summary>
    public bool HasArtefact(Modality modality) =>
        (modality != Modality.Meg && Response.LockedArtefactEeg > 0) || (modality != Modality.Eeg && Response.LockedArtefactMeg > 0);

    /// <summary>Single readings that the pair of both modalities falls back to where a locked artefact buries one of them; empty for other measures.</summary>
    public IReadOnlyList<IMeasure> Fallbacks(IMeasure measure) => measure is not PairMeasure ? [] :
        [Measures.First(m => m.Modality == Modality.Eeg && m.Name == EegMeasure), Measures.First(m => m.Modality == Modality.Meg && m.Name == MegMeasure)];

    /// <summary>The given direction, a unit vector, where there is one.</summary>
    public Vec3 GivenVector => Response.Direction.Vector ?? default;

    /// <summary>Columns of dipoles.csv.</summary>
    public IReadOnlyList<DipoleColumn> Columns =>
        [.. Directions.SelectMany(d => Measures.Select(m => (m, d))).OrderBy(p => p.m.Modality).Select(p => new DipoleColumn(p.m.Modality, Names.Of(p.d), p.m.Name))];
}
