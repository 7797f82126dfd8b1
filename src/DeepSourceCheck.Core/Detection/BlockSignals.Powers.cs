using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

// BlockSignals.Powers.cs - powers of one modality in the direction asked.
//   Sums over rows are u'Gu with the Gram matrix G of the rows, its largest eigenvalue for the best direction; for a direction asked alone the rows themselves
//   are projected, since G knows a weak direction only to the rounding of the strongest. Rows stand in five slots: EEG and MEG over their noise, EEG, MEG and
//   both whitened; where whitening only scales, it is the slot of the scaled rows.

/// <content>Powers of one modality.</content>
public sealed partial class BlockSignals
{
    /// <summary>Mean over channels of (channel / noise)^2.</summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public Vector512<double> ChannelMean(Modality modality)
    {
        int slot = modality == Modality.Eeg ? 0 : 1, count = modality == Modality.Eeg ? _space.EegChannels.Length : _space.MegSd.Length;
        return Sum(slot, modality == Modality.Eeg ? _eegScaled : _megScaled, count) / Vector512.Create((double)count);
    }

    /// <summary>b' C^-1 b, with the correction for an estimated covariance.</summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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
        return _mode == DirectionMode.Best ? Lanes.LargestNorm(row, 1, default, out _) : Lanes.ProjectedPower(row, 1, _direction);
    }

    /// <summary>Largest (channel / noise)^2 and its channel, counted among the used ones.</summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public Vector512<double> BestChannel(Modality modality, out Vector512<double> index)
    {
        int slot = modality == Modality.Eeg ? 0 : 1;
        if (!_largestReady[slot])
        {
            double[] rows = slot == 0 ? _eegScaled : _megScaled;
            int count = slot == 0 ? _space.EegChannels.Length : _space.MegSd.Length;
            Vector512<double> at;
            Vector512<double> power = _mode == DirectionMode.Best ? Lanes.LargestNorm(rows, count, slot == 0 ? _eegNorms : _megNorms, out at) : Lanes.Largest(rows, count, _direction, out at);
            _largest[slot] = (slot == 1 ? power & _audible : power, at);
            _largestReady[slot] = true;
        }

        index = _largest[slot].Index;
        return _largest[slot].Power;
    }

    /// <summary>Largest |channel|^2 [(V/(A m))^2, (T/(A m))^2 or per metre] and its channel.</summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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
        Vector512<double> power = _mode == DirectionMode.Best ? Lanes.LargestNorm(rows, count, default, out index) : Lanes.Largest(rows, count, _direction, out index);
        return eeg ? power : power & _audible;
    }

    /// <summary>Name of a channel counted by <see cref="PeakPower"/>.</summary>
    public string PeakChannelName(Modality modality, int index) =>
        modality == Modality.Eeg ? _space.EegNames[index] : _space.MegNames[_megAlike ? index : _peakMeg[index]];

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private Vector512<double> Sum(int slot, double[] rows, int count, bool megOnly = true)
    {
        if (_figureReady[slot])
        {
            return _figures[slot];
        }

        Vector512<double> power = _mode switch
        {
            DirectionMode.Alone => Lanes.ProjectedPower(rows, count, _direction),
            DirectionMode.OfSet => Lanes.Quadratic(Gram(slot, rows, count), _direction),
            _ => LargestEigenvalue(Gram(slot, rows, count)),
        };
        power = megOnly && slot is 1 or 3 ? power & _audible : power;
        _figures[slot] = power;
        _figureReady[slot] = true;
        return power;
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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
}
