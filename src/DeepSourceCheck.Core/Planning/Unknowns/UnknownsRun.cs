using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning.Unknowns;

// UnknownsRun.cs - the answer over what is not known.
//   Every draw s gives a moment, a noise factor, a head. Its median power over places and directions E_s (the spread over places is kept apart) gives its trials N_s.
//   Trials: 5, 50, 95 % of N_s. Assurance: mean over s of the probability that the session's N suffices: the rule's power at E_s, or, for a rule without power, whether N_s <= N.
//   Ranking: the same with one unknown at a time. Interaction: 1 - sum of the variances of ln N of single unknowns / variance of ln N over all.
//   Source: assurance, O'Hagan, Stevens & Campbell 2005, Pharm Stat 4:187; variance by single inputs, Sobol 2001, Math Comput Simul 55:271 (both from memory).

/// <summary>Runs one region over the unknowns.</summary>
internal sealed class UnknownsRun
{
    // Below this the single unknowns explain all there is: what is left is the draw's own error.
    private const double NoInteraction = 0.1;

    // Variance of ln trials below which an unknown does nothing: rounding.
    private const double NoEffect = 1e-9;

    private readonly StudySetup _setup;
    private readonly EvaluationPlan _plan;
    private readonly UnknownDraws _draws;
    private readonly int _samples;
    private readonly Func<HeadPerturbation, ILeadfieldSource>? _sources;
    private readonly PerturbedReadings _reader;
    private readonly PerturbedReadings? _matchedReader;
    private readonly EvaluationPlan? _matched;
    private readonly MeasureReadings[] _nominal, _matchedNominal = [];
    private readonly (IMeasure Measure, int Rule)[] _verdicts;
    private readonly int _knownReading;

    /// <param name="setup">The study.</param>
    /// <param name="plan">What is read, at the region's moment.</param>
    /// <param name="head">Nominal head.</param>
    /// <param name="nominal">Its leadfields.</param>
    /// <param name="region">The region.</param>
    /// <param name="parts">Its parts where regions act together.</param>
    /// <param name="matched">The same against the noise as a filter sees it that knows the waveform, for the rules that stand on it; null where none is known.</param>
    public UnknownsRun(
        StudySetup setup, EvaluationPlan plan, IHead head, ILeadfieldSource nominal, FilledRegion region, IReadOnlyList<FilledRegion> parts, EvaluationPlan? matched = null)
    {
        UnknownsChoice choice = setup.Study.Unknowns!;
        _setup = setup;
        _plan = plan;
        _draws = new UnknownDraws(choice, plan.Response);
        _samples = choice.Samples;
        if (setup.Perturbable is { } perturbable)
        {
            _sources = nominal is not SummedSource ? perturbable.Perturbed
                : p => new SummedSource(perturbable.Perturbed(p), parts, Activation.Weights(plan.Response), CancellationToken.None);
        }

        List<IMeasure> measures = [.. VerdictWriter.Measures(plan)];
        _verdicts = [.. measures.SelectMany(m => plan.Targets.Select((_, r) => (m, r)))];
        IMeasure? known = plan.Response.Amplitude is { } amplitude ? plan.Measures.First(m => m is DerivationMeasure && m.Name == amplitude.Derivation) : null;
        _knownReading = known is null ? -1 : measures.IndexOf(known);
        if (known is not null && _knownReading < 0)
        {
            measures.Add(known);
            _knownReading = measures.Count - 1;
        }

        _reader = new PerturbedReadings(plan, head, nominal, region, measures);
        _nominal = _reader.Read(nominal);
        if (matched is not null)
        {
            _matched = matched;
            _matchedReader = new PerturbedReadings(matched, head, nominal, region, [.. VerdictWriter.Measures(matched)]);
            _matchedNominal = _matchedReader.Read(nominal);
        }
    }

    /// <summary>Computes.</summary>
    /// <param name="cancellation">Stops between draws.</param>
    public UnknownsResult Run(CancellationToken cancellation)
    {
        double[][] all = Effective(_samples, _draws.All, cancellation);
        Dictionary<string, double[][]> alone = _draws.Names.ToDictionary(name => name, name => Effective(UnknownDraws.Alone, k => _draws.Single(k, name), cancellation));
        var ends = _draws.Names.ToDictionary(name => name, name => (Low: End(name, false), High: End(name, true)));
        VerdictSpread[] spreads = [.. _verdicts.Select((_, v) => Spread(v, all, alone, ends))];
        return new UnknownsResult(_samples, spreads, [.. _plan.Targets.Select((_, r) => new FirstComparison(_setup, _plan, this, r).Of(all))]);
    }

    /// <summary>Verdicts: measure and rule, in the order of the results.</summary>
    public IReadOnlyList<(IMeasure Measure, int Rule)> Verdicts => _verdicts;

    /// <summary>The rule of a verdict.</summary>
    /// <param name="v">Its number.</param>
    public ITargetRule Rule(int v) => _plan.RulesOf(_verdicts[v].Measure)[_verdicts[v].Rule];

    /// <summary>Effective power of every verdict for one draw.</summary>
    /// <param name="draw">The draw.</param>
    public double[] Effective(Draw draw)
    {
        MeasureReadings[] readings = _nominal, matched = _matchedNominal;
        if (draw.Head is { } head && _sources is not null)
        {
            ILeadfieldSource source = _sources(head);
            (readings, matched) = (_reader.Read(source), _matchedReader?.Read(source) ?? []);
        }

        double factor = draw.MomentFactor;
        if (_knownReading >= 0)
        {
            // The amplitude is what is known: under another head another moment reads it.
            factor *= Math.Sqrt(_nominal[_knownReading].MedianPower / readings[_knownReading].MedianPower);
        }

        double noise = draw.NoiseFactor * draw.NoiseFactor;
        return [.. _verdicts.Select((v, k) =>
        {
            // Measures of verdicts stand first in both, in the same order.
            bool spectral = _matched is not null && !_plan.Counts(v.Rule);
            double moment = (spectral ? _matched!.ReadMoment : _plan.ReadMoment) * factor;
            return (spectral ? matched : readings)[MeasureIndex(v.Measure)].Effective(Rule(k), moment * moment, noise);
        })];
    }

    /// <summary>Trials as a real number; infinite where out of reach.</summary>
    /// <param name="v">Verdict.</param>
    /// <param name="effective">Its effective power.</param>
    public double Trials(int v, double effective) => effective > 0 && Rule(v).Absent is null ? Rule(v).Trials(effective) : double.PositiveInfinity;

    private int MeasureIndex(IMeasure measure)
    {
        for (int k = 0; k < _reader.Measures.Count; k++)
        {
            if (ReferenceEquals(_reader.Measures[k], measure))
            {
                return k;
            }
        }

        throw new InvalidOperationException("a verdict without its measure");
    }

    // [draw][verdict]: every draw is its own, so the number of threads changes nothing.
    private double[][] Effective(int count, Func<int, Draw> draw, CancellationToken cancellation)
    {
        var effective = new double[count][];
        Parallel.For(0, count, new ParallelOptions { CancellationToken = cancellation }, k => effective[k] = Effective(draw(k)));
        return effective;
    }

    private (double[] Effective, double Value)? End(string name, bool high) => _draws.End(name, high) is { } end ? (Effective(end.Draw), end.Value) : null;

    private VerdictSpread Spread(
        int v, double[][] all, Dictionary<string, double[][]> alone, Dictionary<string, ((double[] Effective, double Value)? Low, (double[] Effective, double Value)? High)> ends)
    {
        (IMeasure measure, int _) = _verdicts[v];
        double[] trials = [.. all.Select(e => Trials(v, e[v])).Order()];
        var counts = new Percentiles3<long?>(Count(trials, 0.05), Count(trials, 0.5), Count(trials, 0.95));
        double? Minutes(long? count) => count is { } n && _plan.Protocol is { } protocol ? SessionPlan.Minutes(protocol, n) : null;
        // Over the same draws as each unknown on its own, so that both carry the same error.
        double total = Variance(all.Take(UnknownDraws.Alone).Select(e => Trials(v, e[v])));
        UnknownEffect[] ranking = [.. _draws.Names.Select(name => Effect(v, name, alone[name], ends[name])).OrderByDescending(e => e.LogVariance)];
        double explained = ranking.Sum(e => e.LogVariance);
        double? interaction = ranking.Count(e => e.LogVariance > 0) > 1 && double.IsFinite(explained) && double.IsFinite(total) ? Math.Clamp(1 - explained / total, 0, 1) : null;
        double? assurance = _plan.SessionTrials is { } session && Rule(v).Absent is null ? all.Average(e => Suffices(v, e[v], session)) : null;

        return new VerdictSpread(measure.Modality, Rule(v).Name, measure.Name, counts,
            _plan.Protocol is null ? null : new(Minutes(counts.P05), Minutes(counts.P50), Minutes(counts.P95)), assurance, ranking,
            interaction is < NoInteraction ? 0 : interaction);
    }

    private double Suffices(int v, double effective, long session) =>
        Rule(v).Probability(effective, 0, session) ?? (TrialCount.Ceiling(Trials(v, effective)) is { } n && n <= session ? 1 : 0);

    private UnknownEffect Effect(int v, string name, double[][] alone, ((double[] Effective, double Value)? Low, (double[] Effective, double Value)? High) ends)
    {
        double variance = Variance(alone.Select(e => Trials(v, e[v])));
        if (ends is ({ } low, { } high))
        {
            (double at, double value)[] both = [(Trials(v, low.Effective[v]), low.Value), (Trials(v, high.Effective[v]), high.Value)];
            (double at, double value)[] ordered = both[0].at <= both[1].at ? both : [both[1], both[0]];
            return new UnknownEffect(name, TrialCount.Ceiling(ordered[0].at), TrialCount.Ceiling(ordered[1].at), Shown(name, ordered[0].value), Shown(name, ordered[1].value), variance);
        }

        double[] trials = [.. alone.Select(e => Trials(v, e[v])).Order()];
        return new UnknownEffect(name, Count(trials, 0.05), Count(trials, 0.95), null, null, variance);
    }

    private static double Shown(string name, double value) => name == "moment_nAm" ? Units.Si.ToNanoAmpereMetres(value) : value;

    // Nearest rank, from the smallest.
    private static long? Count(double[] ascending, double share) =>
        TrialCount.Ceiling(ascending[Math.Clamp((int)Math.Ceiling(share * ascending.Length - 1e-9), 1, ascending.Length) - 1]);

    private static double Variance(IEnumerable<double> trials)
    {
        double[] logs = [.. trials.Select(n => Math.Log(n))];
        double mean = logs.Average();
        double variance = logs.Sum(l => (l - mean) * (l - mean)) / logs.Length;
        return variance < NoEffect ? 0 : variance;
    }
}
