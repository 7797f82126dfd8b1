using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Planning;

/// <summary>Reads all directions and measures of one block of dipoles into a tally and, where asked, into a chunk of dipole results.</summary>
/// <remarks>
/// All directions of a set are read first, measure by measure, into a buffer of [measure][direction][lane]; then each measure's tally takes its values in one run, so that the classes
/// of one measure stay near the processor. Lanes that do not count are NaN, which tallies leave out. In huge regions the tally takes every n-th direction of a set; the mean of a
/// dipole, which dipoles.csv holds, always runs over the whole set.
/// </remarks>
internal sealed class BlockReader
{
    private const int Lanes = LeadfieldBlock.Lanes;

    private static readonly LaneDirection[] Isotropic = [.. DirectionSets.Isotropic.Select(LaneDirection.Same)];

    private readonly EvaluationPlan _plan;
    private readonly int[] _column;
    private readonly bool _noise;
    private readonly MeasureTally.Reading[][] _readings;
    private readonly LaneDirection[] _one = new LaneDirection[1], _tangential = new LaneDirection[DirectionSets.HalfCircle.Count];
    private readonly double[][] _powers, _artefacts, _inverses, _peaks, _peakChannels;

    public BlockReader(EvaluationPlan plan)
    {
        const int most = DirectionSets.IsotropicPoints * Lanes;
        _plan = plan;
        _noise = plan.ReadsNoise;
        _powers = [.. plan.Measures.Select(_ => new double[most])];
        _artefacts = [.. plan.Measures.Select(_ => new double[_noise ? most : 0])];
        _inverses = [.. plan.Measures.Select(_ => new double[_noise ? most : 0])];
        _readings = [.. plan.Measures.Select((m, k) => plan.Fallbacks(m).Select(f => plan.Measures.ToList().IndexOf(f)).Prepend(k)
            .Select(r => new MeasureTally.Reading(_powers[r], _artefacts[r], _inverses[r])).ToArray())];
        _peaks = [new double[plan.EegMeasure is null ? 0 : most], new double[plan.MegReported ? most : 0]];
        _peakChannels = [new double[_peaks[0].Length], new double[_peaks[1].Length]];
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
    /// <param name="block">Index of the block in its region.</param>
    /// <param name="tally">Receives every figure.</param>
    /// <param name="snrDb">[column][dipole]: mean over the direction's set [dB], or null.</param>
    /// <param name="offset">Index of the block's first dipole in <paramref name="snrDb"/>.</param>
    public void Read(BlockSignals signals, int lanes, long block, RegionTally tally, double[][]? snrDb, int offset)
    {
        for (int d = 0; d < _plan.Directions.Count; d++)
        {
            DirectionName name = _plan.Directions[d];
            Vector512<double> counted = Counted(signals, lanes, name is DirectionName.QuasiRadial or DirectionName.Tangential or DirectionName.StrongestTangential);
            (DirectionMode mode, LaneDirection[] directions) = DirectionsOf(name, signals);
            int stride = tally.Strides[d], start = DirectionSets.Start(block, stride), taken = directions.Length / stride;
            ReadAll(signals, mode, directions, start, stride, counted);
            for (int m = 0; snrDb is not null && m < _plan.Measures.Count; m++)
            {
                Span<double> column = snrDb[_column[d * _plan.Measures.Count + m]].AsSpan(offset, lanes);
                if (stride == 1)
                {
                    Decibels(Mean(_powers[m].AsSpan(0, directions.Length * Lanes)), column);
                }
                else
                {
                    if (m == 0)
                    {
                        signals.AskSet(directions);
                    }

                    Vector512<double> mean = _plan.Measures[m].Mean(signals) * Vector512.Create(_plan.Gain);
                    Decibels(Vector512.ConditionalSelect(counted, mean, Vector512.Create(double.NaN)), column);
                }
            }

            int length = taken * Lanes;
            for (int m = 0; m < _plan.Measures.Count; m++)
            {
                tally.Cells[d][m].Add(_readings[m], length);
            }

            for (int k = 0; k < 2; k++)
            {
                if (_peaks[k].Length > 0)
                {
                    tally.Peaks[d][k].Add(_peaks[k].AsSpan(0, length), _peakChannels[k].AsSpan(0, length));
                }
            }
        }
    }

    private void ReadAll(BlockSignals signals, DirectionMode mode, LaneDirection[] directions, int start, int stride, Vector512<double> counted)
    {
        for (int u = start, at = 0; u < directions.Length; u += stride, at += Lanes)
        {
            signals.Ask(mode, directions[u]);
            ReadOne(signals, at, counted);
        }
    }

    /// <summary>The directions that stand behind a name, and how they are asked.</summary>
    public (DirectionMode Mode, LaneDirection[] Directions) DirectionsOf(DirectionName name, BlockSignals signals)
    {
        switch (name)
        {
            case DirectionName.Isotropic:
                return (DirectionMode.OfSet, Isotropic);
            case DirectionName.Tangential:
                LaneDirection v1 = signals.Axis(0), v2 = signals.Axis(1);
                for (int k = 0; k < _tangential.Length; k++)
                {
                    (double cos, double sin) = DirectionSets.HalfCircle[k];
                    _tangential[k] = LaneDirection.Turned(v1, v2, cos, sin);
                }

                return (DirectionMode.OfSet, _tangential);
            default:
                _one[0] = name switch
                {
                    DirectionName.QuasiRadial => signals.Axis(2),
                    DirectionName.StrongestTangential => signals.Axis(0),
                    DirectionName.Best => default,
                    _ => LaneDirection.Same(_plan.GivenVector),
                };
                return (name == DirectionName.Best ? DirectionMode.Best : DirectionMode.Alone, _one);
        }
    }

    /// <summary>Artefact power over the noise power of the convention.</summary>
    public Vector512<double> ArtefactPower(ArtefactScale scale)
    {
        double e = _plan.Response.LockedArtefactEeg, m = _plan.Response.LockedArtefactMeg;
        Vector512<double> eeg = e == 0 ? default : Vector512.Create(e * e / _plan.NoiseFactor) * scale.Eeg;
        Vector512<double> meg = m == 0 ? default : Vector512.Create(m * m / _plan.NoiseFactor) * scale.Meg;
        return eeg + meg;
    }

    private void ReadOne(BlockSignals signals, int at, Vector512<double> counted)
    {
        Vector512<double> gain = Vector512.Create(_plan.Gain), skipped = Vector512.Create(double.NaN);
        for (int m = 0; m < _plan.Measures.Count; m++)
        {
            IMeasure measure = _plan.Measures[m];
            Vector512.ConditionalSelect(counted, measure.Power(signals) * gain, skipped).CopyTo(_powers[m], at);
            if (_noise)
            {
                ArtefactScale scale = measure.InverseVariance(signals);
                ArtefactPower(scale).CopyTo(_artefacts[m], at);
                scale.Eeg.CopyTo(_inverses[m], at);
            }
        }

        for (int k = 0; k < 2; k++)
        {
            if (_peaks[k].Length > 0)
            {
                Vector512<double> peak = signals.PeakPower(k == 0 ? Modality.Eeg : Modality.Meg, out Vector512<double> channel);
                Vector512.ConditionalSelect(counted, peak, skipped).CopyTo(_peaks[k], at);
                channel.CopyTo(_peakChannels[k], at);
            }
        }
    }

    // All bits set in lanes that hold a dipole and, where a split is asked for, have one.
    private static Vector512<double> Counted(BlockSignals signals, int lanes, bool splitAsked)
    {
        Span<long> mask = stackalloc long[Lanes];
        for (int lane = 0; lane < lanes; lane++)
        {
            mask[lane] = splitAsked && signals.Split.States[lane] == SplitState.Undefined ? 0 : -1;
        }

        return MemoryMarshal.Cast<long, Vector512<long>>(mask)[0].AsDouble();
    }

    private static Vector512<double> Mean(ReadOnlySpan<double> powers)
    {
        ReadOnlySpan<Vector512<double>> values = MemoryMarshal.Cast<double, Vector512<double>>(powers);
        Vector512<double> sum = default;
        foreach (Vector512<double> value in values)
        {
            sum += value;
        }

        return sum / Vector512.Create((double)values.Length);
    }

    private static void Decibels(Vector512<double> powers, Span<double> decibels)
    {
        for (int lane = 0; lane < decibels.Length; lane++)
        {
            decibels[lane] = 10 * Math.Log10(powers[lane]);
        }
    }
}
