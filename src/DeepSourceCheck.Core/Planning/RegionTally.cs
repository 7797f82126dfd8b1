using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Everything that percentiles are made of, for one region: one place where dipoles and directions are counted. One a thread, merged at the end.</summary>
internal sealed class RegionTally
{
    private readonly EvaluationPlan _plan;

    /// <param name="plan">What is read.</param>
    /// <param name="readings">Dipoles of the region, over all threads, as often as each is read.</param>
    public RegionTally(EvaluationPlan plan, long readings)
    {
        _plan = plan;
        Cells = new MeasureTally[plan.Directions.Count][];
        Peaks = new PeakTally[plan.Directions.Count][];
        Strides = new int[plan.Directions.Count];
        for (int d = 0; d < Cells.Length; d++)
        {
            int size = SetSize(plan.Directions[d]), multiplicity = plan.Directions[d] == DirectionName.Tangential ? 2 : 1;
            Strides[d] = DirectionSets.Stride(readings, size);
            long announced = readings * (size / Strides[d]);
            Cells[d] = [.. plan.Measures.Select(m => new MeasureTally(plan, m, announced, multiplicity))];
            Peaks[d] =
            [
                new PeakTally(announced, multiplicity, plan.Space.EegChannels.Length),
                new PeakTally(announced, multiplicity, plan.MegReported ? plan.Space.MegSd.Length : 0),
            ];
        }

        WeakestOverStrongest = new QuantileStore(readings);
        AngleToRadial = new QuantileStore(readings);
    }

    /// <summary>[direction][measure].</summary>
    public MeasureTally[][] Cells { get; }

    /// <summary>[direction][EEG, MEG]: largest channel.</summary>
    public PeakTally[][] Peaks { get; }

    /// <summary>Every n-th direction of each set enters the percentiles.</summary>
    public int[] Strides { get; }

    /// <summary>s3/s1.</summary>
    public QuantileStore WeakestOverStrongest { get; }

    /// <summary>Angle between v3 and the outward direction [rad].</summary>
    public QuantileStore AngleToRadial { get; }

    /// <summary>The cortical comparison; null where the region is no folded cortex.</summary>
    public ProfileTally? Profile { get; init; }

    /// <summary>Dipoles without a split.</summary>
    public int Undefined { get; set; }

    /// <summary>Dipoles with a degenerate split.</summary>
    public int Degenerate { get; set; }

    /// <summary>Adds up the counts of all threads, on all threads.</summary>
    /// <param name="tallies">At least one; the first becomes the sum.</param>
    /// <param name="cancellation">Stops between cells.</param>
    public static RegionTally Sum(IReadOnlyList<RegionTally> tallies, CancellationToken cancellation)
    {
        RegionTally total = tallies[0];
        var options = new ParallelOptions { CancellationToken = cancellation };
        Parallel.For(0, total.Cells.Length * (total._plan.Measures.Count + 1), options, job =>
        {
            int d = job / (total._plan.Measures.Count + 1), m = job % (total._plan.Measures.Count + 1);
            if (m < total._plan.Measures.Count)
            {
                total.Cells[d][m].Take(tallies.Skip(1).Select(t => t.Cells[d][m]));
                return;
            }

            for (int k = 0; k < 2; k++)
            {
                total.Peaks[d][k].Take(tallies.Skip(1).Select(t => t.Peaks[d][k]));
            }
        });
        foreach (RegionTally other in tallies.Skip(1))
        {
            total.WeakestOverStrongest.Merge(other.WeakestOverStrongest);
            total.AngleToRadial.Merge(other.AngleToRadial);
            total.Profile?.Merge(other.Profile!);
            total.Undefined += other.Undefined;
            total.Degenerate += other.Degenerate;
        }

        return total;
    }

    private static int SetSize(DirectionName direction) => direction switch
    {
        DirectionName.Tangential => DirectionSets.HalfCircle.Count,
        DirectionName.Isotropic => DirectionSets.IsotropicPoints,
        _ => 1,
    };

    /// <summary>Index of a direction and measure.</summary>
    public MeasureTally Cell(DirectionName direction, IMeasure measure) =>
        Cells[_plan.Directions.ToList().IndexOf(direction)][_plan.Measures.ToList().IndexOf(measure)];
}

/// <summary>Power SNR of one trial of one direction and measure.</summary>
internal sealed class MeasureTally
{
    private readonly EvaluationPlan _plan;
    private readonly IReadOnlyList<ITargetRule> _rules;

    public MeasureTally(EvaluationPlan plan, IMeasure measure, long announced, int multiplicity)
    {
        _plan = plan;
        _rules = plan.RulesOf(measure);
        Power = new QuantileStore(announced, multiplicity);
        Effective = [.. _rules.Select(r => plan.CountsEffective(measure, r) ? new QuantileStore(announced, multiplicity) : null)];
        Scales = [.. Effective.Select(e => e is null ? null : new QuantileStore(announced, multiplicity))];
    }

    /// <summary>Power SNR.</summary>
    public QuantileStore Power { get; }

    /// <summary>Effective power of each rule; null for a rule whose effective power is <see cref="Power"/>.</summary>
    public QuantileStore?[] Effective { get; }

    /// <summary>1 / squared factor on the moment that the session reaches; null likewise.</summary>
    public QuantileStore?[] Scales { get; }

    /// <summary>The powers that a rule counts on.</summary>
    public QuantileStore Counted(int rule) => Effective[rule] ?? Power;

    /// <summary>Adds powers and, where an artefact bears on the measure, its powers; NaN powers are left out.</summary>
    /// <param name="readings">The measure itself, then the single readings that it may fall back to: two modalities together are never worse than one of them alone.</param>
    /// <param name="length">Number of values in use.</param>
    public void Add(Reading[] readings, int length)
    {
        Power.Add(readings[0].Powers.AsSpan(0, length));
        for (int r = 0; r < _rules.Count; r++)
        {
            ITargetRule rule = _rules[r];
            if (Effective[r] is not { } counted)
            {
                continue;
            }

            for (int k = 0; k < length; k++)
            {
                double effective = double.NaN, scale = double.NaN;
                foreach (Reading reading in readings)
                {
                    double power = reading.Powers[k], artefact = reading.Artefacts[k];
                    if (!double.IsNaN(power) && !double.IsNaN(artefact))
                    {
                        double own = rule.EffectivePower(power, artefact, reading.InverseVariances[k]);
                        effective = double.IsNaN(effective) ? own : Math.Max(effective, own);
                        double smallest = _plan.SessionTrials is > 0 and { } session ? rule.SmallestScale(power, artefact, session) : double.NaN;
                        scale = double.IsNaN(scale) ? smallest : Math.Min(scale, smallest);
                    }
                }

                counted.Add(effective);
                Scales[r]!.Add(1 / (scale * scale));
            }
        }
    }

    /// <summary>Powers, artefact powers and 1/s^2 of the EEG channel [1/V^2] of one measure, value by value.</summary>
    internal sealed record Reading(double[] Powers, double[] Artefacts, double[] InverseVariances);

    /// <summary>Adds other threads' counts; no values will follow.</summary>
    public void Take(IEnumerable<MeasureTally> others)
    {
        foreach (MeasureTally other in others)
        {
            Power.Merge(other.Power);
            for (int r = 0; r < Effective.Length; r++)
            {
                Effective[r]?.Merge(other.Effective[r]!);
                Scales[r]?.Merge(other.Scales[r]!);
            }
        }

        Power.Complete();
        for (int r = 0; r < Effective.Length; r++)
        {
            Effective[r]?.Complete();
            Scales[r]?.Complete();
        }
    }
}

/// <summary>Largest channel of one direction.</summary>
internal sealed class PeakTally(long announced, int multiplicity, int channels)
{
    private readonly long[] _channels = new long[channels];

    /// <summary>Squared amplitude per squared moment.</summary>
    public QuantileStore Power { get; } = new(announced, multiplicity);

    /// <summary>The channel that is most often the largest, the first among equals; -1 where none was.</summary>
    public int MostOften => _channels.Length > 0 && _channels.Max() is > 0 and { } most ? Array.IndexOf(_channels, most) : -1;

    /// <summary>Adds squared amplitudes and the channels that had them; NaN is left out.</summary>
    public void Add(ReadOnlySpan<double> powers, ReadOnlySpan<double> indices)
    {
        Power.Add(powers);
        for (int k = 0; k < powers.Length; k++)
        {
            if (powers[k] > 0)
            {
                _channels[(int)indices[k]]++;
            }
        }
    }

    /// <summary>Adds other threads' counts; no values will follow.</summary>
    public void Take(IEnumerable<PeakTally> others)
    {
        foreach (PeakTally other in others)
        {
            Power.Merge(other.Power);
            for (int k = 0; k < _channels.Length; k++)
            {
                _channels[k] += other._channels[k];
            }
        }

        Power.Complete();
    }
}
