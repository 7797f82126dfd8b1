using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

// BlockSignals.Sets.cs - means over a set of directions, without reading the directions one by one where that can be avoided.
//   A quadratic measure is u'Gu; its mean over the set is sum_ab G_ab M_ab, M = mean of u u' over the set.
//   The best channel is no quadratic form: its largest row is sought in every direction, but nobody asks which row it was.
//   The pair of independent readings is their sum.

/// <content>Means over sets of directions.</content>
public sealed partial class BlockSignals
{
    private readonly Vector512<double>[] _moments = new Vector512<double>[6];
    private readonly Vector512<double>[] _meanLargest = new Vector512<double>[2];
    private readonly bool[] _meanLargestReady = new bool[2];
    private LaneDirection[] _set = [];

    /// <summary>The set of directions over which means are asked.</summary>
    public ReadOnlySpan<LaneDirection> Set => _set;

    /// <summary>Sets the directions over which means are asked next.</summary>
    /// <param name="set">At least one; not copied.</param>
    public void AskSet(LaneDirection[] set)
    {
        _set = set;
        Array.Clear(_meanLargestReady);
        Vector512<double> xx = default, yy = default, zz = default, xy = default, xz = default, yz = default, share = Vector512.Create(1.0 / set.Length);
        foreach (LaneDirection u in set)
        {
            xx += u.X * u.X;
            yy += u.Y * u.Y;
            zz += u.Z * u.Z;
            xy += u.X * u.Y;
            xz += u.X * u.Z;
            yz += u.Y * u.Z;
        }

        // Entries beside the diagonal stand twice in the sum over the Gram matrix.
        (_moments[0], _moments[1], _moments[2]) = (xx * share, yy * share, zz * share);
        (_moments[3], _moments[4], _moments[5]) = ((xy + xy) * share, (xz + xz) * share, (yz + yz) * share);
    }

    /// <summary>Mean over the set of <see cref="ChannelMean"/>.</summary>
    public Vector512<double> MeanChannelMean(Modality modality)
    {
        bool eeg = modality == Modality.Eeg;
        int count = eeg ? _space.EegChannels.Length : _space.MegSd.Length;
        return OverSet(Gram(eeg ? 0 : 1, eeg ? _eegScaled : _megScaled, count)) / Vector512.Create((double)count);
    }

    /// <summary>Mean over the set of <see cref="MatchedFilter"/>.</summary>
    public Vector512<double> MeanMatchedFilter(Modality modality) => modality switch
    {
        Modality.Eeg => OverSet(Gram(_eegWhiteSlot, _eegWhite, _space.EegWhitener!.Rank)) * Vector512.Create(_space.EegCorrection),
        Modality.Meg => OverSet(Gram(_megWhiteSlot, _megWhite, _space.MegWhitener!.Rank)) * Vector512.Create(_space.MegCorrection),
        _ => _space.JointWhitener is { } joint ? OverSet(Gram(4, _jointWhite, joint.Rank)) : MeanMatchedFilter(Modality.Eeg) + MeanMatchedFilter(Modality.Meg),
    };

    /// <summary>Mean over the set of <see cref="Derivation"/>.</summary>
    public Vector512<double> MeanDerivation(int index)
    {
        Span<Vector512<double>> gram = stackalloc Vector512<double>[6];
        Lanes.Gram(_derivations.AsSpan(LeadfieldBlock.At(index, 0), 3 * LeadfieldBlock.Lanes), 1, gram);
        return OverSet(gram);
    }

    /// <summary>Mean over the set of <see cref="BestChannel"/>.</summary>
    public Vector512<double> MeanBestChannel(Modality modality)
    {
        int slot = modality == Modality.Eeg ? 0 : 1;
        if (!_meanLargestReady[slot])
        {
            Vector512<double> sum = Lanes.SumOfLargest(slot == 0 ? _eegScaled : _megScaled, slot == 0 ? _space.EegChannels.Length : _space.MegSd.Length, _set);
            _meanLargest[slot] = sum / Vector512.Create((double)_set.Length);
            _meanLargestReady[slot] = true;
        }

        return _meanLargest[slot];
    }

    /// <summary>Mean over the set of <see cref="Pair"/>; null where the readings' noise is correlated, so that the sum does not stand.</summary>
    /// <param name="derivation">Index of the derivation, or -1 for the best EEG channel.</param>
    public Vector512<double>? MeanPair(int derivation) => _space.ChannelCorrelation is null
        ? (derivation >= 0 ? MeanDerivation(derivation) : MeanBestChannel(Modality.Eeg)) + MeanBestChannel(Modality.Meg)
        : null;

    private Vector512<double> OverSet(ReadOnlySpan<Vector512<double>> gram)
    {
        Vector512<double> sum = default;
        for (int k = 0; k < 6; k++)
        {
            sum += gram[k] * _moments[k];
        }

        return sum;
    }
}
