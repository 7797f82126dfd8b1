using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Results;
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
public sealed partial class BlockSignals
{
    private readonly SignalSpace _space;
    private readonly IHead _head;
    private readonly bool _megReported;
    private readonly double[] _reference, _eegScaled, _eegAmplitude, _derivations, _eegWhite, _megScaled, _megWhite, _megAmplitude, _joint, _jointWhite;
    private readonly int[] _peakMeg;
    private readonly bool _eegAlike, _megAlike;
    private readonly int _eegWhiteSlot = 2, _megWhiteSlot = 3;
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
        _derivations = new double[(space.Derivations?.Outputs ?? 0) * width];
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
                Scale(_derivations, null, _space.DerivationSd, _derivations);
            }
        }

        if (_space.MegWhitener is { } megWhitener)
        {
            Scale(block.Meg, null, _space.MegSd, _megScaled);
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

        DirectionSplit.Compute(_megScaled, _space.MegSd.Length, block, _head, Split);
    }

    /// <summary>v1, v2 or v3 (k = 0, 1, 2) of each dipole.</summary>
    public LaneDirection Axis(int k)
    {
        ReadOnlySpan<Vector512<double>> v = MemoryMarshal.Cast<double, Vector512<double>>(Split.Directions.AsSpan(k * 3 * LeadfieldBlock.Lanes, 3 * LeadfieldBlock.Lanes));
        return new(v[0], v[1], v[2]);
    }

    /// <summary>Sets the direction for which figures are asked next.</summary>
    public void Ask(DirectionMode mode, in LaneDirection direction)
    {
        _mode = mode;
        _direction = direction;
        Array.Clear(_figureReady);
        Array.Clear(_largestReady);
        if (mode == DirectionMode.Alone && _megReported)
        {
            // Below the rounding of the strongest direction a field is no field: silent is exactly zero.
            Vector512<double> s1 = Lanes.View(Split.SingularValues)[0];
            double tolerance = Math.Max(_space.MegSd.Length, 3) * Math.BitIncrement(1.0) - Math.Max(_space.MegSd.Length, 3);
            Vector512<double> limit = s1 * Vector512.Create(tolerance);
            Vector512<double> power = Lanes.ProjectedPower(_megScaled, _space.MegSd.Length, direction);
            _audible = Vector512.GreaterThan(power, limit * limit);
            _figures[1] = power & _audible;
            _figureReady[1] = true;
        }
        else
        {
            _audible = Vector512<double>.AllBitsSet;
        }
    }

    /// <summary>Mean over channels of (channel / noise)^2.</summary>
    public Vector512<double> ChannelMean(Modality modality)
    {
        int slot = modality == Modality.Eeg ? 0 : 1, count = modality == Modality.Eeg ? _space.EegChannels.Length : _space.MegSd.Length;
        return Sum(slot, modality == Modality.Eeg ? _eegScaled : _megScaled, count) / Vector512.Create((double)count);
    }

    /// <summary>b' C^-1 b, with the correction for an estimated covariance.</summary>
    public Vector512<double> MatchedFilter(Modality modality)
    {
        if (modality == Modality.Both)
        {
            if (_space.JointWhitener is { } joint)
            {
                return Sum(4, _jointWhite, joint.Rank, megOnly: false);
            }

            if (_mode == DirectionMode.Best)
            {
                Span<Vector512<double>> total = stackalloc Vector512<double>[6];
                ReadOnlySpan<Vector512<double>> e = Gram(_eegWhiteSlot, _eegWhite, _space.EegWhitener!.Rank), m = Gram(_megWhiteSlot, _megWhite, _space.MegWhitener!.Rank);
                for (int k = 0; k < 6; k++)
                {
                    total[k] = Vector512.Create(_space.EegCorrection) * e[k] + Vector512.Create(_space.MegCorrection) * m[k];
                }

                return LargestEigenvalue(total);
            }

            return MatchedFilter(Modality.Eeg) + MatchedFilter(Modality.Meg);
        }

        return modality == Modality.Eeg
            ? Sum(_eegWhiteSlot, _eegWhite, _space.EegWhitener!.Rank) * Vector512.Create(_space.EegCorrection)
            : Sum(_megWhiteSlot, _megWhite, _space.MegWhitener!.Rank) * Vector512.Create(_space.MegCorrection);
    }

    /// <summary>(derivation / noise)^2.</summary>
    public Vector512<double> Derivation(int index)
    {
        ReadOnlySpan<double> row = _derivations.AsSpan(LeadfieldBlock.At(index, 0), 3 * LeadfieldBlock.Lanes);
        return _mode == DirectionMode.Best ? Lanes.LargestNorm(row, 1, out _) : Lanes.ProjectedPower(row, 1, _direction);
    }

    /// <summary>Largest (channel / noise)^2 and its channel, counted among the used ones.</summary>
    public Vector512<double> BestChannel(Modality modality, out Vector512<double> index)
    {
        int slot = modality == Modality.Eeg ? 0 : 1;
        if (!_largestReady[slot])
        {
            double[] rows = slot == 0 ? _eegScaled : _megScaled;
            int count = slot == 0 ? _space.EegChannels.Length : _space.MegSd.Length;
            Vector512<double> at;
            Vector512<double> power = _mode == DirectionMode.Best ? Lanes.LargestNorm(rows, count, out at) : Lanes.Largest(rows, count, _direction, out at);
            _largest[slot] = (slot == 1 ? power & _audible : power, at);
            _largestReady[slot] = true;
        }

        index = _largest[slot].Index;
        return _largest[slot].Power;
    }

    /// <summary>Largest |channel|^2 [(V/(A m))^2, (T/(A m))^2 or per metre] and its channel.</summary>
    public Vector512<double> PeakPower(Modality modality, out Vector512<double> index)
    {
        bool eeg = modality == Modality.Eeg;
        if (eeg ? _eegAlike : _megAlike)
        {
            double sd = eeg ? _space.EegSd[0] : _space.MegSd[0];
            return BestChannel(modality, out index) * Vector512.Create(sd * sd);
        }

        double[] rows = eeg ? _eegAmplitude : _megAmplitude;
        int count = eeg ? _space.EegChannels.Length : _peakMeg.Length;
        Vector512<double> power = _mode == DirectionMode.Best ? Lanes.LargestNorm(rows, count, out index) : Lanes.Largest(rows, count, _direction, out index);
        return eeg ? power : power & _audible;
    }

    /// <summary>Name of a channel counted by <see cref="PeakPower"/>.</summary>
    public string PeakChannelName(Modality modality, int index) =>
        modality == Modality.Eeg ? _space.EegNames[index] : _space.MegNames[_megAlike ? index : _peakMeg[index]];

    /// <summary>Both readings together: x' R^-1 x for the chosen EEG reading and the best MEG channel, R their 2 x 2 correlation.</summary>
    /// <param name="derivation">Index of the derivation, or -1 for the best EEG channel.</param>
    public Vector512<double> Pair(int derivation)
    {
        if (_mode == DirectionMode.Best)
        {
            return BestPair(derivation);
        }

        Vector512<double> eegIndex = default;
        Vector512<double> e = derivation >= 0 ? Derivation(derivation) : BestChannel(Modality.Eeg, out eegIndex);
        Vector512<double> m = BestChannel(Modality.Meg, out Vector512<double> megIndex);
        return _space.ChannelCorrelation is null ? e + m : CorrelatedPair(derivation, eegIndex, megIndex);
    }

    /// <summary>Noise correlation between an EEG reading and a MEG channel.</summary>
    public double Correlation(int derivation, int eegIndex, int megIndex)
    {
        double[]? table = derivation >= 0 ? _space.DerivationCorrelation : _space.ChannelCorrelation;
        return table is null ? 0 : table[(derivation >= 0 ? derivation : eegIndex) * _space.MegSd.Length + megIndex];
    }

    /// <summary>Value of a row, in units of its noise, for one lane of the current direction.</summary>
    /// <param name="modality">EEG or MEG.</param>
    /// <param name="derivation">Index of the derivation, or -1 for a channel.</param>
    /// <param name="index">Channel, counted among the used ones.</param>
    /// <param name="lane">Lane.</param>
    public double Reading(Modality modality, int derivation, int index, int lane)
    {
        Vec3 row = ReadingRow(modality, derivation, index, lane);
        return row.X * _direction.X[lane] + row.Y * _direction.Y[lane] + row.Z * _direction.Z[lane];
    }

    /// <summary>Leadfield row behind <see cref="Reading"/>, in units of its noise per moment [1/(A m)]: one value an axis.</summary>
    public Vec3 ReadingRow(Modality modality, int derivation, int index, int lane)
    {
        double[] rows = modality == Modality.Meg ? _megScaled : derivation >= 0 ? _derivations : _eegScaled;
        int row = derivation >= 0 && modality == Modality.Eeg ? derivation : index;
        return new(rows[LeadfieldBlock.At(row, 0) + lane], rows[LeadfieldBlock.At(row, 1) + lane], rows[LeadfieldBlock.At(row, 2) + lane]);
    }

    private Vector512<double> CorrelatedPair(int derivation, Vector512<double> eegIndex, Vector512<double> megIndex)
    {
        Span<double> power = stackalloc double[LeadfieldBlock.Lanes];
        for (int lane = 0; lane < power.Length; lane++)
        {
            int k = (int)megIndex[lane];
            double x = Reading(Modality.Eeg, derivation, (int)eegIndex[lane], lane);
            double y = double.IsNaN(_audible[lane]) ? Reading(Modality.Meg, -1, k, lane) : 0;   // all bits set reads as NaN
            double rho = Correlation(derivation, (int)eegIndex[lane], k);
            power[lane] = y == 0 ? x * x : (x * x + y * y - 2 * rho * x * y) / (1 - rho * rho);
        }

        return Vector512.Create<double>(power);
    }

    // The largest eigenvalue of the two readings' 2 x 2 Gram matrix, over all channels that may be chosen.
    private Vector512<double> BestPair(int derivation)
    {
        ReadOnlySpan<Vector512<double>> eeg = Lanes.View(derivation >= 0 ? _derivations : _eegScaled), meg = Lanes.View(_megScaled);
        int first = Math.Max(derivation, 0), count = derivation >= 0 ? 1 : _space.EegChannels.Length;
        ReadOnlySpan<Vector512<double>> rows = eeg.Slice(3 * first, 3 * count);
        if (_space.ChannelCorrelation is null)
        {
            // A direction that the array does not see at all is one to which every MEG row is orthogonal: the search may use it.
            LaneDirection weakest = Axis(2);
            Vector512<double> known = Vector512.Equals(Lanes.View(Split.SingularValues)[2], default) & Vector512.Equals(weakest.X, weakest.X);
            return _pairs.Largest(rows, count, meg, _space.MegSd.Length, new(weakest.X & known, weakest.Y & known, weakest.Z & known));
        }

        Vector512<double> best = default, half = Vector512.Create(0.5), four = Vector512.Create(4.0);
        for (int i = 0; i < count; i++)
        {
            Vector512<double> ex = rows[3 * i], ey = rows[3 * i + 1], ez = rows[3 * i + 2], ee = ex * ex + ey * ey + ez * ez;
            for (int k = 0; k < _space.MegSd.Length; k++)
            {
                double rho = Correlation(derivation, i, k);
                Vector512<double> r = Vector512.Create(rho), w = Vector512.Create(1 / Math.Sqrt(1 - rho * rho));
                Vector512<double> x = w * (meg[3 * k] - r * ex), y = w * (meg[3 * k + 1] - r * ey), z = w * (meg[3 * k + 2] - r * ez);
                Vector512<double> mm = x * x + y * y + z * z;
                if (Vector512.LessThanAll(ee + mm, best))
                {
                    continue;                                   // the largest eigenvalue never exceeds the trace
                }

                Vector512<double> em = ex * x + ey * y + ez * z, difference = ee - mm;
                best = Vector512.Max(best, half * (ee + mm + Vector512.Sqrt(difference * difference + four * em * em)));
            }
        }

        return best;
    }

    private Vector512<double> Sum(int slot, double[] rows, int count, bool megOnly = true)
    {
        if (_mode == DirectionMode.Best)
        {
            return LargestEigenvalue(Gram(slot, rows, count));
        }

        if (_figureReady[slot])
        {
            return _figures[slot];
        }

        Vector512<double> power = _mode == DirectionMode.Alone ? Lanes.ProjectedPower(rows, count, _direction) : Lanes.Quadratic(Gram(slot, rows, count), _direction);
        power = megOnly && slot is 1 or 3 ? power & _audible : power;
        _figures[slot] = power;
        _figureReady[slot] = true;
        return power;
    }

    private ReadOnlySpan<Vector512<double>> Gram(int slot, double[] rows, int count)
    {
        if (!_gramReady[slot])
        {
            Lanes.Gram(rows, count, _grams[slot]);
            _gramReady[slot] = true;
        }

        return _grams[slot];
    }

    private static Vector512<double> LargestEigenvalue(ReadOnlySpan<Vector512<double>> gram) =>
        SymmetricEigen3.Largest(gram[0], gram[3], gram[4], gram[1], gram[5], gram[2]);

    private static void Scale(double[] from, int[]? rows, double[]? sd, double[] to)
    {
        ReadOnlySpan<Vector512<double>> x = Lanes.View(from);
        Span<Vector512<double>> y = MemoryMarshal.Cast<double, Vector512<double>>(to.AsSpan());
        int count = y.Length / 3;
        for (int k = 0; k < count; k++)
        {
            Vector512<double> w = Vector512.Create(sd is null ? 1.0 : 1.0 / sd[k]);
            int source = 3 * (rows is null ? k : rows[k]);
            y[3 * k] = w * x[source];
            y[3 * k + 1] = w * x[source + 1];
            y[3 * k + 2] = w * x[source + 2];
        }
    }

    private static bool Alike(double[] sd) => sd.Length > 0 && sd.Max() - sd.Min() <= 1e-13 * sd.Max();
}
