using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning.Unknowns;

// PerturbedReadings.cs - the verdicts' readings of one region under another head.
//   Noise, whitening and the axes of the split are those of the nominal head: noise is a measured fact, and a source keeps its direction whatever the head is taken for. A direction that
//   is silent in the nominal sphere may so be heard in a shifted one. Of a large region at most MostDipoles dipoles are read, evenly picked.

/// <summary>Powers of the verdicts' measures in one region for any head.</summary>
internal sealed class PerturbedReadings
{
    /// <summary>Most dipoles of a region that are read for each draw.</summary>
    public const int MostDipoles = 256;

    private readonly EvaluationPlan _plan;
    private readonly IHead _head;
    private readonly FilledRegion _region;
    private readonly int[] _picked;
    private readonly DirectionName _direction;
    private readonly Axes[] _axes;

    /// <param name="plan">What is read.</param>
    /// <param name="head">Nominal head.</param>
    /// <param name="nominal">Its leadfields.</param>
    /// <param name="region">The region.</param>
    /// <param name="measures">Measures that are read.</param>
    public PerturbedReadings(EvaluationPlan plan, IHead head, ILeadfieldSource nominal, FilledRegion region, IReadOnlyList<IMeasure> measures)
    {
        _plan = plan;
        _head = head;
        _region = region;
        Measures = measures;
        _direction = plan.VerdictDirection;
        int n = region.Positions.Length, taken = Math.Min(n, MostDipoles);
        _picked = [.. Enumerable.Range(0, taken).Select(k => (int)((long)k * n / taken))];
        _axes = ReadAxes(nominal);
    }

    /// <summary>Measures that are read.</summary>
    public IReadOnlyList<IMeasure> Measures { get; }

    /// <summary>Reads the region.</summary>
    /// <param name="source">Leadfields of any head, rows as nominal.</param>
    /// <returns>[measure]: power per squared moment over the noise power of the convention [1/(A m)^2] and artefact power, value by value; undefined values are left out.</returns>
    public MeasureReadings[] Read(ILeadfieldSource source)
    {
        var block = new LeadfieldBlock(source.EegRows, source.MegRows);
        var signals = new BlockSignals(_plan.Space, _head, _plan.MegReported);
        var reader = new BlockReader(_plan);
        bool noise = _plan.ReadsNoise;
        MeasureReadings[] readings = [.. Measures.Select(_ => new MeasureReadings())];
        for (int b = 0; b < _axes.Length; b++)
        {
            int n = Load(block, source, b);
            signals.Load(block);
            Axes axes = _axes[b];
            IReadOnlyList<LaneDirection> directions = axes.Directions.Count > 0 ? axes.Directions : reader.DirectionsOf(_direction, signals).Directions;
            foreach (LaneDirection u in directions)
            {
                signals.Ask(axes.Mode, u);
                for (int m = 0; m < Measures.Count; m++)
                {
                    Vector512<double> power = Measures[m].Power(signals) / Vector512.Create(_plan.NoiseFactor);
                    ArtefactScale scale = noise ? Measures[m].InverseVariance(signals) : default;
                    Vector512<double> buried = noise ? reader.ArtefactPower(scale) : default;
                    for (int lane = 0; lane < n; lane++)
                    {
                        if (axes.Defined[lane])
                        {
                            readings[m].Add(power[lane], buried[lane], scale.Eeg[lane]);
                        }
                    }
                }
            }
        }

        return readings;
    }

    private Axes[] ReadAxes(ILeadfieldSource nominal)
    {
        var block = new LeadfieldBlock(nominal.EegRows, nominal.MegRows);
        var signals = new BlockSignals(_plan.Space, _head, _plan.MegReported);
        var reader = new BlockReader(_plan);
        bool split = _direction is DirectionName.QuasiRadial or DirectionName.Tangential or DirectionName.StrongestTangential;
        var axes = new Axes[(_picked.Length + LeadfieldBlock.Lanes - 1) / LeadfieldBlock.Lanes];
        for (int b = 0; b < axes.Length; b++)
        {
            Load(block, nominal, b);
            signals.Load(block);
            (DirectionMode mode, LaneDirection[] directions) = reader.DirectionsOf(_direction, signals);
            axes[b] = new Axes(mode, split ? [.. directions] : [], [.. signals.Split.States.Select(s => !split || s != SplitState.Undefined)]);
        }

        return axes;
    }

    private int Load(LeadfieldBlock block, ILeadfieldSource source, int b)
    {
        int from = b * LeadfieldBlock.Lanes, n = Math.Min(LeadfieldBlock.Lanes, _picked.Length - from);
        Span<Geometry.Vec3> positions = stackalloc Geometry.Vec3[LeadfieldBlock.Lanes];
        Span<int> indices = stackalloc int[LeadfieldBlock.Lanes];
        for (int k = 0; k < n; k++)
        {
            positions[k] = _region.Positions[_picked[from + k]];
            indices[k] = _region.SourceIndices.Length > 0 ? _region.SourceIndices[_picked[from + k]] : -1;
        }

        block.Load(positions[..n], _region.SourceIndices.Length > 0 ? indices[..n] : default);
        source.Fill(block);
        return n;
    }

    /// <summary>Directions of one block: those of the nominal split, or none where they do not depend on the head.</summary>
    private sealed record Axes(DirectionMode Mode, IReadOnlyList<LaneDirection> Directions, bool[] Defined);
}

/// <summary>Readings of one measure.</summary>
internal sealed class MeasureReadings
{
    private readonly List<double> _powers = [], _artefacts = [], _inverseVariances = [];
    private bool _buried;
    private double[]? _sorted;

    /// <summary>Adds a value; NaN is left out.</summary>
    /// <param name="power">Power per squared moment over the noise power of the convention [1/(A m)^2].</param>
    /// <param name="artefact">Artefact power over the same.</param>
    /// <param name="inverseVariance">1/s^2 of the EEG channel that was read [1/V^2]; 0 where no rule asks.</param>
    public void Add(double power, double artefact, double inverseVariance)
    {
        if (!double.IsNaN(power) && !double.IsNaN(artefact))
        {
            _powers.Add(power);
            _artefacts.Add(artefact);
            _inverseVariances.Add(inverseVariance);
            _buried |= artefact > 0;
        }
    }

    /// <summary>Median of the effective power under a rule, by nearest rank; 0 where silent, buried or undefined.</summary>
    /// <param name="rule">Rule.</param>
    /// <param name="squaredMoment">Squared moment [(A m)^2].</param>
    /// <param name="noisePower">Squared factor on the noise, without unit.</param>
    public double Effective(ITargetRule rule, double squaredMoment, double noisePower)
    {
        if (_powers.Count == 0)
        {
            return 0;
        }

        if (!_buried && !rule.StandsOnNoise)
        {
            return Median(_sorted ??= [.. _powers.Order()]) * squaredMoment / noisePower;
        }

        double[] effective = [.. _powers.Select((p, k) => rule.EffectivePower(p * squaredMoment / noisePower, _artefacts[k] / noisePower, _inverseVariances[k] / noisePower)).Order()];
        return Median(effective);
    }

    /// <summary>Median power per squared moment, by nearest rank [1/(A m)^2].</summary>
    public double MedianPower => _powers.Count == 0 ? 0 : Median(_sorted ??= [.. _powers.Order()]);

    // Counted from the largest downwards, as counts of trials are.
    private static double Median(double[] ascending) => ascending[ascending.Length - Math.Clamp((int)Math.Ceiling(0.5 * ascending.Length - 1e-9), 1, ascending.Length)];
}
