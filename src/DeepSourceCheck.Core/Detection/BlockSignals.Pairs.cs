using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

// BlockSignals.Pairs.cs - one EEG reading and one MEG channel together, on the 2 x 2 covariance of their noise.
//   In a direction: x' R^-1 x = (x^2 + y^2 - 2 r x y)/(1 - r^2) for readings x, y in units of their noise with correlation r; x^2 + y^2 where it is independent.
//   Over all directions: the largest eigenvalue of the Gram matrix of e and (m - r e)/sqrt(1 - r^2), over all channels that may be chosen.

/// <content>Both modalities on one reading each.</content>
public sealed partial class BlockSignals
{
    /// <summary>Both readings together: x' R^-1 x for the chosen EEG reading and the best MEG channel, R their 2 x 2 correlation.</summary>
    /// <param name="derivation">Index of the derivation, or -1 for the best EEG channel.</param>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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

    /// <summary>Weights u and w of the pair's form (u x)^2 + (w (y - r x))^2.</summary>
    public (double U, double W) PairWeights(int derivation, int eegIndex, int megIndex)
    {
        (double U, double W)[]? table = derivation >= 0 ? _space.DerivationPairs : _space.ChannelPairs;
        double rho = Correlation(derivation, eegIndex, megIndex);
        return table is null ? (1, 1 / Math.Sqrt(1 - rho * rho)) : table[(derivation >= 0 ? derivation : eegIndex) * _space.MegSd.Length + megIndex];
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
            if (y == 0 || !_space.IsSpectral)
            {
                power[lane] = y == 0 ? x * x : (x * x + y * y - 2 * rho * x * y) / (1 - rho * rho);
                continue;
            }

            (double u, double w) = PairWeights(derivation, (int)eegIndex[lane], k);
            power[lane] = u * u * x * x + w * w * (y - rho * x) * (y - rho * x);
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
            LaneDirection unseen = new(weakest.X & known, weakest.Y & known, weakest.Z & known);
            if (derivation >= 0)
            {
                return _pairs.Largest(rows, count, meg, _space.MegSd.Length, unseen);
            }

            BestChannel(Modality.Eeg, out Vector512<double> strongestEeg);      // fills the powers of all rows
            BestChannel(Modality.Meg, out Vector512<double> strongestMeg);
            return _pairs.Largest(new(rows, count, Lanes.View(_eegNorms), strongestEeg), new(meg, _space.MegSd.Length, Lanes.View(_megNorms), strongestMeg), unseen);
        }

        Vector512<double> best = default, half = Vector512.Create(0.5), four = Vector512.Create(4.0);
        for (int i = 0; i < count; i++)
        {
            Vector512<double> ex = rows[3 * i], ey = rows[3 * i + 1], ez = rows[3 * i + 2], ee = ex * ex + ey * ey + ez * ez;
            for (int k = 0; k < _space.MegSd.Length; k++)
            {
                (double own, double weight) = PairWeights(derivation, i, k);
                Vector512<double> r = Vector512.Create(Correlation(derivation, i, k)), w = Vector512.Create(weight), u = Vector512.Create(own);
                Vector512<double> x = w * (meg[3 * k] - r * ex), y = w * (meg[3 * k + 1] - r * ey), z = w * (meg[3 * k + 2] - r * ez);
                Vector512<double> mm = x * x + y * y + z * z, one = u * u * ee;
                if (Vector512.LessThanAll(one + mm, best))
                {
                    continue;                                   // the largest eigenvalue never exceeds the trace
                }

                Vector512<double> em = u * (ex * x + ey * y + ez * z), difference = one - mm;
                best = Vector512.Max(best, half * (one + mm + Vector512.Sqrt(difference * difference + four * em * em)));
            }
        }

        return best;
    }
}
