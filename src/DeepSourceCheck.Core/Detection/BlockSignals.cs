using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Detection;

/// <summary>How a direction is asked of <see cref="BlockSignals"/>.</summary>
public enum DirectionMode
{
    /// <summary>One direction a dipole: every row is projected, exact for directions that are nearly silent.</summary>
    Alone,

    /// <summary>One of many directions: quadratic measures use their Gram matrix.</summary>
    OfSet,

    /// <summary>The largest over all directions, each measure for itself.</summary>
    Best,
}

/// <summary>
/// The channels of one block of eight dipoles in one response: referenced, scaled to unit noise, whitened, split. Measures ask it for powers per squared moment [1/(A m)^2].
/// One a thread; figures of the current direction are computed once, however many measures ask.
/// </summary>
/// <remarks>Here: channels and the direction asked. Powers, pairs and means over sets have files of their own. Methods that every dipole passes are compiled optimised at once: most runs are over before tiers would change.</remarks>
public sealed partial class BlockSignals
{
    // Relative to the size of the terms; leadfields of the sphere are exact to some 1e-14.
    private const double CancellationRounding = 1e-12;

    private readonly (int Row, double Weight)[][] _derivationTerms;
    private readonly SignalSpace _space;
    private readonly IHead _head;
    private readonly bool _megReported;
    private readonly double[] _reference, _eegScaled, _eegAmplitude, _derivations, _eegWhite, _megScaled, _megWhite, _megAmplitude, _joint, _jointWhite, _megSplit;
    private readonly int[] _peakMeg;
    private readonly bool _eegAlike, _megAlike;
    private readonly int _eegWhiteSlot = 2, _megWhiteSlot = 3;
    private readonly double[] _eegNorms, _megNorms;
    private readonly PairSearch _pairs = new();
    private readonly Vector512<double>[][] _grams = [new Vector512<double>[6], new Vector512<double>[6], new Vector512<double>[6], new Vector512<double>[6], new Vector512<double>[6]];
    private readonly bool[] _gramReady = new bool[5];
    private readonly Vector512<double>[] _figures = new Vector512<double>[5];
    private readonly bool[] _figureReady = new bool[5];
    private readonly (Vector512<double> Power, Vector512<double> Index)[] _largest = new (Vector512<double>, Vector512<double>)[2];
    private readonly bool[] _largestReady = new bool[2];
    private DirectionMode _mode;
    private LaneDirection _direction;
    private Vector512<double> _audible;

    /// <param name="space">Channels of the response.</param>
    /// <param name="head">Head, for the conventions of the split.</param>
    /// <param name="megReported">False where the MEG rows serve the split alone.</param>
    public BlockSignals(SignalSpace space, IHead head, bool megReported)
    {
        const int width = 3 * LeadfieldBlock.Lanes;
        _space = space;
        _head = head;
        _megReported = megReported;
        int electrodes = space.Reference?.Outputs ?? 0, eeg = space.EegChannels.Length, meg = space.MegSd.Length;
        _reference = new double[electrodes * width];
        _eegScaled = new double[eeg * width];
        _eegAmplitude = new double[eeg * width];
        _eegNorms = new double[eeg * LeadfieldBlock.Lanes];
        _megNorms = new double[meg * LeadfieldBlock.Lanes];
        _derivations = new double[(space.Derivations?.Outputs ?? 0) * width];
        _derivationTerms = [.. Enumerable.Range(0, space.Derivations?.Outputs ?? 0).Select(k => space.Derivations!.Weights(k)
            .Select((w, row) => (row, Math.Abs(w))).Where(t => t.Item2 > 0).ToArray())];
        if (space.EegWhitener is { } eegWhitener && eegWhitener.OnlyScales(electrodes) && eeg == electrodes)
        {
            (_eegWhite, _eegWhiteSlot) = (_eegScaled, 0);       // independent channels: whitened is scaled
        }
        else
        {
            _eegWhite = new double[(space.EegWhitener?.Rank ?? 0) * width];
        }

        _megScaled = new double[meg * width];
        if (space.MegWhitener is { } megWhitener && megWhitener.OnlyScales(meg))
        {
            (_megWhite, _megWhiteSlot) = (_megScaled, 1);
        }
        else
        {
            _megWhite = new double[(space.MegWhitener?.Rank ?? 0) * width];
        }

        _megSplit = space.IsSpectral ? new double[meg * width] : _megScaled;
        _joint = new double[space.JointWhitener is null ? 0 : (electrodes + meg) * width];
        _jointWhite = new double[(space.JointWhitener?.Rank ?? 0) * width];

        // Peaks of T and T/m cannot be compared: magnetometers and axial gradiometers are preferred where both stand in one array.
        int[] inTesla = [.. Enumerable.Range(0, meg).Where(k => space.MegKinds[k] != CoilKind.PlanarGradiometer)];
        _peakMeg = inTesla.Length > 0 ? inTesla : [.. Enumerable.Range(0, meg)];
        _megAmplitude = new double[_peakMeg.Length * width];
        _eegAlike = Alike(space.EegSd);
        _megAlike = _peakMeg.Length == meg && Alike(space.MegSd);
    }

    /// <summary>Split of directions of the loaded block.</summary>
    public SplitBlock Split { get; } = new();

    /// <summary>The unit of MEG peaks is T/m rather than T.</summary>
    public bool MegPeakIsPlanar => _peakMeg.Length > 0 && _space.MegKinds[_peakMeg[0]] == CoilKind.PlanarGradiometer;

    /// <summary>Prepares a block: channels, filters, split.</summary>
    public void Load(LeadfieldBlock block)
    {
        Array.Clear(_gramReady);
        if (_space.Reference is { } reference)
        {
            reference.Apply(block.Eeg, _reference);
            Scale(_reference, _space.EegChannels, _space.EegSd, _eegScaled);
            if (!_eegAlike)
            {
                Scale(_reference, _space.EegChannels, null, _eegAmplitude);
            }

            if (_eegWhiteSlot != 0)
            {
                _space.EegWhitener!.Apply(_reference, _eegWhite);
            }

            if (_space.Derivations is { } derivations)
            {
                derivations.Apply(block.Eeg, _derivations);
                SilenceCancelled(block.Eeg);
                Scale(_derivations, null, _space.DerivationSd, _derivations);
            }
        }

        if (_space.MegWhitener is { } megWhitener)
        {
            Scale(block.Meg, null, _space.MegSd, _megScaled);
            if (_space.IsSpectral)
            {
                Scale(block.Meg, null, _space.SplitSd, _megSplit);
            }

            if (_megReported)
            {
                if (!_megAlike)
                {
                    Scale(block.Meg, _peakMeg, null, _megAmplitude);
                }

                if (_megWhiteSlot != 1)
                {
                    megWhitener.Apply(block.Meg, _megWhite);
                }
            }
        }

        if (_space.JointWhitener is { } jointWhitener)
        {
            _reference.CopyTo(_joint, 0);
            block.Meg.CopyTo(_joint, _reference.Length);
            jointWhitener.Apply(_joint, _jointWhite);
        }

        DirectionSplit.Compute(_megSplit, _space.MegSd.Length, block, _head, Split);
    }

    /// <summary>v1, v2 or v3 (k = 0, 1, 2) of each dipole.</summary>
    public LaneDirection Axis(int k)
    {
        ReadOnlySpan<Vector512<double>> v = MemoryMarshal.Cast<double, Vector512<double>>(Split.Directions.AsSpan(k * 3 * LeadfieldBlock.Lanes, 3 * LeadfieldBlock.Lanes));
        return new(v[0], v[1], v[2]);
    }

    /// <summary>Sets the direction for which figures are asked next.</summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public void Ask(DirectionMode mode, in LaneDirection direction)
    {
        _mode = mode;
        _direction = direction;
        Array.Clear(_figureReady);
        Array.Clear(_largestReady);
        _audible = Vector512<double>.AllBitsSet;
        if (mode != DirectionMode.Alone)
        {
            return;
        }

        // Every row is projected: its power and its maximum in one pass.
        if (_space.EegChannels.Length > 0)
        {
            Hold(0, Lanes.PowerAndLargest(_eegScaled, _space.EegChannels.Length, direction, out Vector512<double> largest, out Vector512<double> index), largest, index);
        }

        if (_megReported)
        {
            // Below the rounding of the strongest direction a field is no field: silent is exactly zero.
            Vector512<double> s1 = Lanes.View(Split.SingularValues)[0];
            double tolerance = Math.Max(_space.MegSd.Length, 3) * Math.BitIncrement(1.0) - Math.Max(_space.MegSd.Length, 3);
            Vector512<double> limit = s1 * Vector512.Create(tolerance);
            Vector512<double> power = Lanes.PowerAndLargest(_megScaled, _space.MegSd.Length, direction, out Vector512<double> largest, out Vector512<double> index);
            Vector512<double> heard = _space.IsSpectral ? Lanes.PowerAndLargest(_megSplit, _space.MegSd.Length, direction, out _, out _) : power;
            _audible = Vector512.GreaterThan(heard, limit * limit);
            Hold(1, power & _audible, largest & _audible, index);
        }
    }

    private void Hold(int slot, Vector512<double> power, Vector512<double> largest, Vector512<double> index)
    {
        _figures[slot] = power;
        _largest[slot] = (largest, index);
        _figureReady[slot] = _largestReady[slot] = true;
    }

    // What a derivation leaves of potentials that cancel, below their rounding, is no reading: a midline source across Cz against both mastoids reads exactly nothing.
    private void SilenceCancelled(double[] eeg)
    {
        const int axes = 3;
        ReadOnlySpan<Vector512<double>> rows = Lanes.View(eeg);
        Span<Vector512<double>> readings = MemoryMarshal.Cast<double, Vector512<double>>(_derivations.AsSpan());
        for (int k = 0; k < _derivationTerms.Length; k++)
        {
            for (int axis = 0; axis < axes; axis++)
            {
                Vector512<double> size = default;
                foreach ((int row, double weight) in _derivationTerms[k])
                {
                    size += Vector512.Abs(rows[axes * row + axis]) * Vector512.Create(weight);
                }

                ref Vector512<double> reading = ref readings[axes * k + axis];
                reading &= Vector512.GreaterThan(Vector512.Abs(reading), size * Vector512.Create(CancellationRounding));
            }
        }
    }

    private static void Scale(double[] from, int[]? rows, double[]? sd, double[] to)
    {
        ReadOnlySpan<Vector512<double>> x = Lanes.View(from);
        Span<Vector512<double>> y = MemoryMarshal.Cast<double, Vector512<double>>(to.AsSpan());
        int count = y.Length / 3;
        for (int k = 0; k < count; k++)
        {
            Vector512<double> w = Vector512.Create(sd is null ? 1.0 : 1.0 / sd[k]);
            ReadOnlySpan<Vector512<double>> row = x.Slice(3 * (rows is null ? k : rows[k]), 3);
            Span<Vector512<double>> scaled = y.Slice(3 * k, 3);
            (scaled[0], scaled[1], scaled[2]) = (w * row[0], w * row[1], w * row[2]);
        }
    }

    private static bool Alike(double[] sd) => sd.Length > 0 && sd.Max() - sd.Min() <= 1e-13 * sd.Max();
}
