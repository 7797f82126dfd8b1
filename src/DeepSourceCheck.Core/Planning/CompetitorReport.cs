using System.Numerics;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Attribution;
using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Planning;

// CompetitorReport.cs - a response with other sources active.
//   The covariance of the other sources joins that of the noise (CompetingNoise), and the same dipoles and directions are read twice, without and with. Filters are built
//   anew for the noise with the sources in it, so that they suppress them where topographies differ; a single reading only gets noisier:
//     P' = P s^2 / (s^2 + n^2),  n the other sources' rms in the reading.
//   A large region is read at evenly picked dipoles.

/// <summary>What competitors leave of one response, region by region.</summary>
internal sealed class CompetitorReport
{
    /// <summary>Dipoles of the response's region that are read at most.</summary>
    private const int MostDipoles = 1024;

    // Of these angles are read, and as many of a competitor's give its patterns.
    private const int MostAngleBlocks = 16, MostAngles = 16, MostPatternDipoles = 512;

    private readonly IReadOnlyList<CompetitorChoice> _choices;
    private readonly CompetingNoise[] _sources;
    private readonly SignalSpace _plain, _all;
    private readonly SignalSpace[] _alone;
    private readonly Modality[] _modalities;
    private readonly FieldSubspace[][] _subspaces;

    /// <param name="setup">The study.</param>
    /// <param name="response">A response with competitors.</param>
    /// <param name="plain">Channels under that noise.</param>
    /// <param name="cancellation">Stops between blocks.</param>
    public CompetitorReport(StudySetup setup, Response response, SignalSpace plain, CancellationToken cancellation)
    {
        NoiseCovariance noise = setup.Noise!.Of(response);
        _plain = plain;
        _choices = response.Competitors;
        _sources = [.. _choices.Select(c => new CompetingNoise(setup.Source, setup.Region(c.Region), cancellation))];
        _all = Space([.. _sources.Select((s, k) => (s, _choices[k].Moment))]);
        _alone = _sources.Length == 1 ? [_all] : [.. _sources.Select((s, k) => Space([(s, _choices[k].Moment)]))];
        _modalities = [.. new[] { Modality.Eeg, Modality.Meg, Modality.Both }.Where(m => (m == Modality.Meg || plain.Reference is not null) && (m == Modality.Eeg || setup.MegReported))];
        _subspaces = [.. _choices.Select(c => _modalities.Select(m => Subspace(setup.Source, setup.Region(c.Region), new WhitenedLeadfield(plain, m), cancellation)).ToArray())];

        SignalSpace Space((CompetingNoise, double)[] active) =>
            new(CompetingNoise.Add(noise, active, setup.MegReported), setup.Reference, setup.Derivations, setup.MegNames, setup.MegKinds);
    }

    /// <summary>Reads one region.</summary>
    /// <param name="plan">What is read without competitors.</param>
    /// <param name="setup">The study, with the head as this region sees it.</param>
    /// <param name="region">The region, or the one source of regions that act together.</param>
    /// <param name="source">Its leadfields.</param>
    /// <param name="rows">Its results without competitors.</param>
    /// <param name="cancellation">Stops between blocks.</param>
    public CompetitorsResult Of(EvaluationPlan plan, StudySetup setup, FilledRegion region, ILeadfieldSource source, IReadOnlyList<MeasureResult> rows, CancellationToken cancellation)
    {
        int[] picked = Picked.Of(region, MostDipoles);
        var run = new Reading(plan, setup, [_plain, _all, .. _alone.Where(a => a != _all)], picked.Length);
        WhitenedLeadfield[] white = [.. _modalities.Select(m => new WhitenedLeadfield(_plain, m))];
        double[][] grams = [.. white.Select(w => new double[w.Rows * w.Rows])];
        int blocks = (picked.Length + LeadfieldBlock.Lanes - 1) / LeadfieldBlock.Lanes, everyBlock = (blocks + MostAngleBlocks - 1) / MostAngleBlocks;
        var angles = _choices.Select(_ => _modalities.Select(_ => new QuantileStore(picked.Length * MostAngles)).ToArray()).ToArray();
        var directions = new FieldDirections(plan);
        var block = new LeadfieldBlock(source.EegRows, source.MegRows);
        for (int from = 0; from < picked.Length; from += LeadfieldBlock.Lanes)
        {
            cancellation.ThrowIfCancellationRequested();
            int count = Picked.Load(block, region, picked.AsSpan(from, Math.Min(LeadfieldBlock.Lanes, picked.Length - from)));
            source.Fill(block);
            run.Read(block, count);
            foreach (LaneDirection u in from / LeadfieldBlock.Lanes % everyBlock != 0 ? [] : directions.Of(run.Signals, MostAngles))
            {
                for (int m = 0; m < _modalities.Length; m++)
                {
                    Angles(white[m].Of(block), white[m].Rows, count, u, grams[m], [.. angles.Select(a => a[m])], m);
                }
            }
        }

        FieldSubspace[] own = [.. _modalities.Select((_, m) => new FieldSubspace(grams[m], white[m].Rows))];
        return new CompetitorsResult(plan.VerdictDirection, picked.Length,
            [.. _choices.Select((c, k) => new CompetitorSource(c.Region, c.Moment, _sources[k].Dipoles, [.. _modalities.Select((m, i) => new FieldOverlap(
                m, _subspaces[k][i].Patterns, angles[k][i].Percentiles(Si.ToDegrees), [.. own[i].PrincipalAngles(_subspaces[k][i]).Select(Si.ToDegrees)],
                run.Left(_alone.Length == 1 ? 1 : 2 + k, run.Filter(m)).Percentiles(RegionReport.Decibels)))]))],
            [.. run.Measures.Select((_, at) => run.Result(at, rows, _plain, _all))]);
    }

    private void Angles(ReadOnlySpan<double> rows, int count, int lanes, in LaneDirection u, double[] gram, QuantileStore[] stores, int modality)
    {
        var field = new double[count];
        for (int lane = 0; lane < lanes; lane++)
        {
            bool known = true;
            for (int row = 0; row < count; row++)
            {
                int at = LeadfieldBlock.At(row, 0) + lane;
                field[row] = rows[at] * u.X[lane] + rows[at + LeadfieldBlock.Lanes] * u.Y[lane] + rows[at + 2 * LeadfieldBlock.Lanes] * u.Z[lane];
                known &= !double.IsNaN(field[row]);
            }

            if (!known)
            {
                continue;
            }

            AddSquare(gram, field);
            for (int k = 0; k < stores.Length; k++)
            {
                stores[k].Add(_subspaces[k][modality].Angle(field));
            }
        }
    }

    private static FieldSubspace Subspace(ILeadfieldSource source, FilledRegion region, WhitenedLeadfield white, CancellationToken cancellation)
    {
        int[] picked = Picked.Of(region, MostPatternDipoles);
        var gram = new double[white.Rows * white.Rows];
        var block = new LeadfieldBlock(source.EegRows, source.MegRows);
        var field = new double[white.Rows];
        for (int from = 0; from < picked.Length; from += LeadfieldBlock.Lanes)
        {
            cancellation.ThrowIfCancellationRequested();
            int count = Picked.Load(block, region, picked.AsSpan(from, Math.Min(LeadfieldBlock.Lanes, picked.Length - from)));
            source.Fill(block);
            ReadOnlySpan<double> rows = white.Of(block);
            for (int lane = 0; lane < count; lane++)
            {
                for (int axis = 0; axis < 3; axis++)
                {
                    for (int row = 0; row < field.Length; row++)
                    {
                        field[row] = rows[LeadfieldBlock.At(row, axis) + lane];
                    }

                    AddSquare(gram, field);
                }
            }
        }

        return new FieldSubspace(gram, white.Rows);
    }

    private static void AddSquare(double[] gram, double[] field)
    {
        int whole = field.Length - field.Length % Vector<double>.Count;
        for (int i = 0; i < field.Length; i++)
        {
            Span<double> row = gram.AsSpan(i * field.Length, field.Length);
            ReadOnlySpan<Vector<double>> from = MemoryMarshal.Cast<double, Vector<double>>(field.AsSpan(0, whole));
            Span<Vector<double>> to = MemoryMarshal.Cast<double, Vector<double>>(row[..whole]);
            for (int j = 0; j < from.Length; j++)
            {
                to[j] += field[i] * from[j];
            }

            for (int j = whole; j < field.Length; j++)
            {
                row[j] += field[i] * field[j];
            }
        }
    }

    /// <summary>The same dipoles under several covariances, the first without competitors, the second with all.</summary>
    private sealed class Reading
    {
        private readonly EvaluationPlan[] _plans;
        private readonly BlockSignals[] _signals;
        private readonly BlockReader _reader;
        private readonly int[] _measures;
        private readonly QuantileStore[][] _left;
        private readonly QuantileStore[] _power;
        private readonly QuantileStore[][] _without, _with;

        public Reading(EvaluationPlan plan, StudySetup setup, SignalSpace[] spaces, int dipoles)
        {
            _plans = [.. spaces.Select((s, k) => k == 0 ? plan : plan.Against(s))];
            _signals = [.. spaces.Select(s => new BlockSignals(s, setup.Head, plan.MegReported))];
            _reader = new BlockReader(plan);
            IMeasure[] verdicts = [.. VerdictWriter.Measures(plan)];
            _measures = [.. Enumerable.Range(0, plan.Measures.Count).Where(k => verdicts.Contains(plan.Measures[k]) || plan.Measures[k] is MatchedFilterMeasure)];
            long values = (long)dipoles * DirectionSets.IsotropicPoints;
            _left = [.. spaces.Select(_ => _measures.Select(_ => new QuantileStore(values)).ToArray())];
            _power = [.. _measures.Select(_ => new QuantileStore(values))];
            _without = [.. _measures.Select(_ => plan.Targets.Select(_ => new QuantileStore(values)).ToArray())];
            _with = [.. _measures.Select(_ => plan.Targets.Select(_ => new QuantileStore(values)).ToArray())];
        }

        /// <summary>Channels without competitors, of the block that was read last.</summary>
        public BlockSignals Signals => _signals[0];

        public IReadOnlyList<IMeasure> Measures => [.. _measures.Select(k => _plans[0].Measures[k])];

        public int Filter(Modality modality) => Array.FindIndex(_measures, k => _plans[0].Measures[k] is MatchedFilterMeasure && _plans[0].Measures[k].Modality == modality);

        public QuantileStore Left(int space, int measure) => _left[space][measure];

        public void Read(LeadfieldBlock block, int count)
        {
            foreach (BlockSignals signals in _signals)
            {
                signals.Load(block);
            }

            // Directions are those without competitors: the split must not move with them.
            (DirectionMode mode, LaneDirection[] directions) = _reader.DirectionsOf(_plans[0].VerdictDirection, _signals[0]);
            var plain = new Vector512<double>[_measures.Length];
            foreach (LaneDirection u in directions)
            {
                for (int space = 0; space < _plans.Length; space++)
                {
                    _signals[space].Ask(mode, u);
                    for (int at = 0; at < _measures.Length; at++)
                    {
                        Vector512<double> power = _plans[space].Measures[_measures[at]].Power(_signals[space]) * Vector512.Create(_plans[0].Gain);
                        plain[at] = space == 0 ? power : plain[at];
                        Keep(space, at, count, plain[at], power);
                    }
                }
            }
        }

        private void Keep(int space, int at, int count, Vector512<double> plain, Vector512<double> power)
        {
            IMeasure measure = _plans[space].Measures[_measures[at]];
            IReadOnlyList<ITargetRule> rules = _plans[space].RulesOf(measure);
            ArtefactScale scale = space < 2 ? measure.InverseVariance(_signals[space]) : default;
            Vector512<double> artefact = space < 2 && _plans[0].HasArtefact(measure.Modality) ? _reader.ArtefactPower(scale) : default;
            for (int lane = 0; lane < count; lane++)
            {
                double p = power[lane];
                if (double.IsNaN(p) || double.IsNaN(plain[lane]))
                {
                    continue;
                }

                if (plain[lane] > 0)
                {
                    _left[space][at].Add(p / plain[lane]);
                }

                if (space == 1)
                {
                    _power[at].Add(p);
                }

                for (int r = 0; space < 2 && r < rules.Count; r++)
                {
                    if (rules[r].Absent is null)
                    {
                        (space == 0 ? _without : _with)[at][r].Add(rules[r].EffectivePower(p, artefact[lane], scale.Eeg[lane]));
                    }
                }
            }
        }

        public CompetitorReading Result(int at, IReadOnlyList<MeasureResult> rows, SignalSpace without, SignalSpace with)
        {
            IMeasure measure = _plans[0].Measures[_measures[at]], noisier = _plans[1].Measures[_measures[at]];
            PeakAmplitude? peak = rows.FirstOrDefault(r => r.Modality == measure.Modality && r.Direction == _plans[0].VerdictDirection && r.Measure == measure.Name)?.Peak;
            PeakAmplitude? rms = peak is null || measure is MatchedFilterMeasure or PairMeasure ? null : Rms(measure, peak, without, with);
            return new CompetitorReading(
                measure.Modality, measure.Name, VerdictWriter.Measures(_plans[0]).Contains(measure), rms, _left[1][at].Percentiles(RegionReport.Decibels), _power[at].Percentiles(RegionReport.Decibels),
                [.. Enumerable.Range(0, _plans[1].Targets.Count).Where(_plans[1].Counts).Select(r =>
                {
                    // Where a waveform is known, detection is counted by a filter in time, of which competitors state nothing: no count then.
                    ITargetRule rule = _plans[1].RulesOf(noisier)[r];
                    long? At(double share) => Count(rule, _with[at][r], share);
                    return new CompetitorCount(rule.Name, Count(_plans[0].RulesOf(measure)[r], _without[at][r], 0.5), new(At(0.05), At(0.25), At(0.5), At(0.75), At(0.95)), Chain(noisier, rule, at));
                })]);
        }

        private IReadOnlyList<DerivedNumber> Chain(IMeasure measure, ITargetRule rule, int at)
        {
            if (rule.Absent is not null || _plans[1].CountsEffective(measure, rule) || _power[at].NearestRankFromTop(0.5) is not { } power || !(power > 0))
            {
                return [];
            }

            string what = measure is MatchedFilterMeasure ? "a^2 b' (C + sum of m^2/3 mean L L')^-1 b / c^2, L the leadfields of the competitors" : "(A / c)^2 over the noise of the reading with the competitors' rms in it";
            return [new("P", "power SNR of one trial with the competitors active, median over dipoles and directions", power, "", "", what, Grade.Derived), .. rule.Chain(power, 0)];
        }

        private static long? Count(ITargetRule rule, QuantileStore effective, double share) =>
            rule.Absent is null && effective.NearestRankFromTop(share) is { } power && power > 0 ? TrialCount.Ceiling(rule.Trials(power)) : null;

        private static PeakAmplitude? Rms(IMeasure measure, PeakAmplitude peak, SignalSpace without, SignalSpace with)
        {
            (double plain, double noisy) = measure switch
            {
                DerivationMeasure d => (without.DerivationSd[d.Index], with.DerivationSd[d.Index]),
                _ when measure.Modality == Modality.Eeg && without.EegNames.ToList().IndexOf(peak.Channel) is >= 0 and int k => (without.EegSd[k], with.EegSd[with.EegNames.ToList().IndexOf(peak.Channel)]),
                _ when measure.Modality == Modality.Meg && without.MegNames.ToList().IndexOf(peak.Channel) is >= 0 and int k => (without.MegSd[k], with.MegSd[k]),
                _ => (double.NaN, double.NaN),
            };
            double rms = Math.Sqrt(Math.Max(0, noisy * noisy - plain * plain));
            double perSi = peak.Unit switch { "uV" => Si.ToMicrovolts(1), "fT/cm" => Si.ToFemtoteslaPerCm(1), _ => Si.ToFemtotesla(1) };
            return double.IsNaN(rms) ? null : new PeakAmplitude(perSi * rms, peak.Unit, peak.Channel);
        }
    }
}
