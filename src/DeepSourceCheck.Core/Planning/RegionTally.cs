using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Everything that percentiles are made of, for one region: one place where dipoles and directions are counted. One a thread, merged at the end.</summary>
internal sealed class RegionTally
{
    private readonly EvaluationPlan _plan;

    /// <param name="plan">What is read.</param>
    /// <param name="dipoles">Dipoles of the region, over all threads.</param>
    public RegionTally(EvaluationPlan plan, long dipoles)
    {
        _plan = plan;
        Cells = new MeasureTally[plan.Directions.Count][];
        Peaks = new PeakTally[plan.Directions.Count][];
        for (int d = 0; d < Cells.Length; d++)
        {
            (long announced, int multiplicity) = plan.Directions[d] switch
            {
                DirectionName.Tangential => (dipoles * DirectionSets.HalfCircle.Count, 2),
                DirectionName.Isotropic => (dipoles * DirectionSets.IsotropicPoints, 1),
                _ => (dipoles, 1),
            };
            Cells[d] = [.. plan.Measures.Select(m => new MeasureTally(plan, m, announced, multiplicity))];
            Peaks[d] = [new PeakTally(announced, multiplicity), new PeakTally(announced, multiplicity)];
        }

        WeakestOverStrongest = new QuantileStore(dipoles);
        AngleToRadial = new QuantileStore(dipoles);
    }

    /// <summary>[direction][measure].</summary>
    public MeasureTally[][] Cells { get; }

    /// <summary>[direction][EEG, MEG]: largest channel.</summary>
    public PeakTally[][] Peaks { get; }

    /// <summary>s3/s1.</summary>
    public QuantileStore WeakestOverStrongest { get; }

    /// <summary>Angle between v3 and the outward direction [rad].</summary>
    public QuantileStore AngleToRadial { get; }

    /// <summary>Dipoles without a split.</summary>
    public int Undefined { get; set; }

    /// <summary>Dipoles with a degenerate split.</summary>
    public int Degenerate { get; set; }

    /// <summary>Adds another thread's counts.</summary>
    public void Merge(RegionTally other)
    {
        for (int d = 0; d < Cells.Length; d++)
        {
            for (int m = 0; m < Cells[d].Length; m++)
            {
                Cells[d][m].Merge(other.Cells[d][m]);
            }

            Peaks[d][0].Merge(other.Peaks[d][0]);
            Peaks[d][1].Merge(other.Peaks[d][1]);
        }

        WeakestOverStrongest.Merge(other.WeakestOverStrongest);
        AngleToRadial.Merge(other.AngleToRadial);
        Undefined += other.Undefined;
        Degenerate += other.Degenerate;
    }

    /// <summary>Index of a direction and measure.</summary>
    public MeasureTally Cell(DirectionName direction, IMeasure measure) =>
        Cells[_plan.Directions.ToList().IndexOf(direction)][_plan.Measures.ToList().IndexOf(measure)];
}

/// <summary>Power SNR of one trial of one direction and measure.</summary>
internal sealed class MeasureTally
{
    private readonly EvaluationPlan _plan;
    private readonly bool _artefact;

    public MeasureTally(EvaluationPlan plan, IMeasure measure, long announced, int multiplicity)
    {
        _plan = plan;
        _artefact = plan.HasArtefact(measure.Modality);
        Power = new QuantileStore(announced, multiplicity);
        if (_artefact)
        {
            Effective = [.. plan.Rules.Select(_ => new QuantileStore(announced, multiplicity))];
            Scales = [.. plan.Rules.Select(_ => new QuantileStore(announced, multiplicity))];
        }
    }

    /// <summary>Power SNR.</summary>
    public QuantileStore Power { get; }

    /// <summary>Effective power of each rule where an artefact bears on it; null otherwise.</summary>
    public QuantileStore[]? Effective { get; }

    /// <summary>1 / squared factor on the moment that the session reaches; null without artefact.</summary>
    public QuantileStore[]? Scales { get; }

    public void Add(double power, double artefact)
    {
        Power.Add(power);
        if (!_artefact || double.IsNaN(power))
        {
            return;
        }

        for (int r = 0; r < Effective!.Length; r++)
        {
            ITargetRule rule = _plan.Rules[r];
            Effective[r].Add(double.IsNaN(artefact) ? double.NaN : rule.EffectivePower(power, artefact));
            if (_plan.SessionTrials is { } session && session > 0 && !double.IsNaN(artefact))
            {
                double scale = rule.SmallestScale(power, artefact, session);
                Scales![r].Add(1 / (scale * scale));
            }
        }
    }

    public void Merge(MeasureTally other)
    {
        Power.Merge(other.Power);
        for (int r = 0; _artefact && r < Effective!.Length; r++)
        {
            Effective[r].Merge(other.Effective![r]);
            Scales![r].Merge(other.Scales![r]);
        }
    }
}

/// <summary>Largest channel of one direction.</summary>
internal sealed class PeakTally(long announced, int multiplicity)
{
    private readonly SortedDictionary<int, long> _channels = [];

    /// <summary>Squared amplitude per squared moment.</summary>
    public QuantileStore Power { get; } = new(announced, multiplicity);

    /// <summary>The channel that is most often the largest, the first among equals; -1 where none was.</summary>
    public int MostOften => _channels.Count == 0 ? -1 : _channels.MaxBy(p => (p.Value, -p.Key)).Key;

    public void Add(Vector512<double> power, Vector512<double> index, int lanes, ReadOnlySpan<bool> skip)
    {
        for (int lane = 0; lane < lanes; lane++)
        {
            if (skip[lane])
            {
                continue;
            }

            Power.Add(power[lane]);
            if (power[lane] > 0)
            {
                int k = (int)index[lane];
                _channels[k] = _channels.GetValueOrDefault(k) + 1;
            }
        }
    }

    public void Merge(PeakTally other)
    {
        Power.Merge(other.Power);
        foreach ((int k, long n) in other._channels)
        {
            _channels[k] = _channels.GetValueOrDefault(k) + n;
        }
    }
}

/// <summary>Reads all directions and measures of one block into a tally and, where asked, into a chunk of dipole results.</summary>
internal sealed class BlockReader
{
    private readonly EvaluationPlan _plan;
    private readonly double[] _artefactLevels;
    private readonly int[] _column;

    public BlockReader(EvaluationPlan plan)
    {
        _plan = plan;
        _artefactLevels = [plan.Response.LockedArtefactEeg, plan.Response.LockedArtefactMeg];
        IReadOnlyList<DipoleColumn> columns = plan.Columns;
        _column = new int[plan.Directions.Count * plan.Measures.Count];
        for (int d = 0; d < plan.Directions.Count; d++)
        {
            for (int m = 0; m < plan.Measures.Count; m++)
            {
                IMeasure measure = plan.Measures[m];
                _column[d * plan.Measures.Count + m] = columns.ToList().IndexOf(new DipoleColumn(measure.Modality, Names.Of(plan.Directions[d]), measure.Name));
            }
        }
    }

    /// <summary>Reads the block that <paramref name="signals"/> holds.</summary>
    /// <param name="signals">Channels of the block.</param>
    /// <param name="lanes">Dipoles in the block.</param>
    /// <param name="tally">Receives every figure.</param>
    /// <param name="snrDb">[column][dipole]: mean over the direction's set [dB], or null.</param>
    /// <param name="offset">Index of the block's first dipole in <paramref name="snrDb"/>.</param>
    public void Read(BlockSignals signals, int lanes, RegionTally tally, double[][]? snrDb, int offset)
    {
        Span<bool> undefined = stackalloc bool[LeadfieldBlock.Lanes];
        for (int lane = 0; lane < lanes; lane++)
        {
            undefined[lane] = signals.Split.States[lane] == SplitState.Undefined;
        }

        Span<bool> skip = stackalloc bool[LeadfieldBlock.Lanes];
        for (int d = 0; d < _plan.Directions.Count; d++)
        {
            DirectionName name = _plan.Directions[d];
            skip.Clear();
            if (name is DirectionName.QuasiRadial or DirectionName.Tangential or DirectionName.StrongestTangential)
            {
                undefined.CopyTo(skip);
            }

            var sums = new Vector512<double>[_plan.Measures.Count];
            int directions = 0;
            foreach ((DirectionMode mode, LaneDirection u) in DirectionsOf(name, signals))
            {
                signals.Ask(mode, u);
                directions++;
                for (int m = 0; m < _plan.Measures.Count; m++)
                {
                    Vector512<double> power = _plan.Measures[m].Power(signals, out ArtefactScale scale) * Vector512.Create(_plan.Gain);
                    sums[m] += power;
                    Vector512<double> artefact = ArtefactPower(scale);
                    MeasureTally cell = tally.Cells[d][m];
                    for (int lane = 0; lane < lanes; lane++)
                    {
                        if (!skip[lane])
                        {
                            cell.Add(power[lane], artefact[lane]);
                        }
                    }
                }

                if (_plan.EegMeasure is not null)
                {
                    tally.Peaks[d][0].Add(signals.PeakPower(Modality.Eeg, out Vector512<double> index), index, lanes, skip);
                }

                if (_plan.MegReported)
                {
                    tally.Peaks[d][1].Add(signals.PeakPower(Modality.Meg, out Vector512<double> index), index, lanes, skip);
                }
            }

            for (int m = 0; snrDb is not null && m < sums.Length; m++)
            {
                double[] column = snrDb[_column[d * sums.Length + m]];
                for (int lane = 0; lane < lanes; lane++)
                {
                    column[offset + lane] = skip[lane] ? double.NaN : 10 * Math.Log10(sums[m][lane] / directions);
                }
            }
        }
    }

    /// <summary>The directions that stand behind a name, and how they are asked.</summary>
    public IEnumerable<(DirectionMode Mode, LaneDirection Direction)> DirectionsOf(DirectionName name, BlockSignals signals) => name switch
    {
        DirectionName.QuasiRadial => [(DirectionMode.Alone, signals.Axis(2))],
        DirectionName.StrongestTangential => [(DirectionMode.Alone, signals.Axis(0))],
        DirectionName.Tangential => Tangential(signals),
        DirectionName.Isotropic => Isotropic,
        DirectionName.Best => [(DirectionMode.Best, default)],
        _ => [(DirectionMode.Alone, LaneDirection.Same(_plan.GivenVector))],
    };

    private static readonly (DirectionMode Mode, LaneDirection Direction)[] Isotropic =
        [.. DirectionSets.Isotropic.Select(u => (DirectionMode.OfSet, LaneDirection.Same(u)))];

    private static IEnumerable<(DirectionMode Mode, LaneDirection Direction)> Tangential(BlockSignals signals)
    {
        LaneDirection v1 = signals.Axis(0), v2 = signals.Axis(1);
        foreach ((double cos, double sin) in DirectionSets.HalfCircle)
        {
            yield return (DirectionMode.OfSet, LaneDirection.Turned(v1, v2, cos, sin));
        }
    }

    /// <summary>Artefact power over the noise power of the convention.</summary>
    public Vector512<double> ArtefactPower(ArtefactScale scale)
    {
        double e = _artefactLevels[0], m = _artefactLevels[1];
        if (e == 0 && m == 0)
        {
            return default;
        }

        Vector512<double> eeg = e == 0 ? default : Vector512.Create(e * e / _plan.NoiseFactor) * scale.Eeg;
        Vector512<double> meg = m == 0 ? default : Vector512.Create(m * m / _plan.NoiseFactor) * scale.Meg;
        return eeg + meg;
    }
}
