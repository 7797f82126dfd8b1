using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace DeepSourceCheck.Core.Detection;

// PairSearch.cs - the best pair of one EEG and one MEG channel, over all directions of the dipole, for independent noise.
//   A pair of rows e, m reads (e.u)^2 + (m.u)^2 in direction u; its largest value over unit vectors u is the largest eigenvalue of the pair's Gram matrix,
//     L = (e.e + m.m + sqrt((e.e - m.m)^2 + 4 (e.m)^2)) / 2.
//   For b not below e.e and m.m: L > b exactly where (e.m)^2 > (b - e.e)(b - m.m). So no root is taken for pairs that are no better than the best so far.
//   Order of search: the strongest MEG row against every EEG row, the best of these against every MEG row, that one against every EEG row again. This finds the
//   best pair nearly always. The proof follows: where w is a direction to which all MEG rows are orthogonal, (e.m)^2 <= t m.m with t = e.e - (e.w)^2, else t = e.e.
//   EEG rows that cannot beat the best with the strongest MEG row are left out, then MEG rows that cannot beat it with the strongest of the EEG rows left;
//   the rest are compared pair by pair.
//   Eight dipoles a vector; a row is left out only where it is beaten in all eight. The plain double loop stands in the tests.

/// <summary>Largest power of a pair of one EEG and one MEG channel over all directions. One a thread: keeps its buffers.</summary>
public sealed class PairSearch
{
    private double[] _megPower = [];
    private int[] _eegLeft = [], _megLeft = [];

    /// <summary>The largest (e.u)^2 + (m.u)^2 over EEG rows e, MEG rows m and unit vectors u, in the rows' unit squared.</summary>
    /// <param name="eeg">[row][axis], eight dipoles a vector.</param>
    /// <param name="eegCount">EEG rows, at least 1.</param>
    /// <param name="meg">Likewise.</param>
    /// <param name="megCount">MEG rows, at least 1.</param>
    /// <param name="unseen">Unit vector to which all MEG rows are orthogonal to rounding; zero in lanes where there is none.</param>
    public Vector512<double> Largest(
        ReadOnlySpan<Vector512<double>> eeg, int eegCount, ReadOnlySpan<Vector512<double>> meg, int megCount, in LaneDirection unseen)
    {
        if (_megLeft.Length < megCount)
        {
            _megPower = GC.AllocateUninitializedArray<double>(megCount * 8);
            _megLeft = new int[megCount];
        }

        if (_eegLeft.Length < eegCount)
        {
            _eegLeft = new int[eegCount];
        }

        ref Vector512<double> e = ref MemoryMarshal.GetReference(eeg), m = ref MemoryMarshal.GetReference(meg);
        ref Vector512<double> mm = ref Unsafe.As<double, Vector512<double>>(ref MemoryMarshal.GetArrayDataReference(_megPower));
        Row strongest = default;
        for (int k = 0; k < megCount; k++)
        {
            Row row = Row.At(ref m, k);
            Unsafe.Add(ref mm, k) = row.Power;
            strongest.Take(Vector512.GreaterThan(row.Power, strongest.Power), row);
        }

        Vector512<double> most = strongest.Power, best = most, eegMost, tangentialMost;
        Row chosen = default;
        for (int i = 0; i < eegCount; i++)
        {
            Row row = Row.At(ref e, i);
            best = Vector512.Max(best, row.Power);
            chosen.Take(Vector512.GreaterThan(row.Power, chosen.Power), row);
        }

        best = Vector512.Max(best, Larger(chosen, strongest));
        chosen = Improve(ref e, eegCount, strongest, chosen, ref best);
        strongest = Improve(ref m, megCount, chosen, strongest, ref best);
        Improve(ref e, eegCount, strongest, chosen, ref best);

        // EEG rows that may still win with the strongest MEG row, and per dipole the strongest of them; then MEG rows that may win with those.
        int megLeft = 0, eegLeft = 0;
        Vector512<double> room = best - most;
        eegMost = tangentialMost = default;
        for (int i = 0; i < eegCount; i++)
        {
            Row row = Row.At(ref e, i);
            Vector512<double> tangential = Tangential(row, unseen), may = Vector512.GreaterThan(tangential * most, room * (best - row.Power));
            eegMost = Vector512.Max(eegMost, row.Power & may);
            tangentialMost = Vector512.Max(tangentialMost, tangential & may);
            _eegLeft[eegLeft] = i;
            eegLeft += Vector512.EqualsAll(may.AsUInt64(), Vector512<ulong>.Zero) ? 0 : 1;
        }

        room = best - eegMost;
        for (int k = 0; k < megCount && eegLeft > 0; k++)
        {
            Vector512<double> power = Unsafe.Add(ref mm, k);
            _megLeft[megLeft] = k;
            megLeft += Vector512.GreaterThanAny(tangentialMost * power, room * (best - power)) ? 1 : 0;
        }

        foreach (int i in _eegLeft.AsSpan(0, eegLeft))
        {
            Row row = Row.At(ref e, i);
            Vector512<double> eegRoom = best - row.Power;
            foreach (int k in _megLeft.AsSpan(0, megLeft))
            {
                Vector512<double> cross = row.Dot(ref Unsafe.Add(ref m, 3 * k));
                if (Vector512.GreaterThanAny(cross * cross, eegRoom * (best - Unsafe.Add(ref mm, k))))
                {
                    best = Vector512.Max(best, Larger(row, Row.At(ref m, k)));
                    eegRoom = best - row.Power;
                }
            }
        }

        return best;
    }

    /// <summary>Tries every row with one partner; returns the row of the best pair, or the one given where none is better.</summary>
    private static Row Improve(ref Vector512<double> rows, int count, Row partner, Row chosen, ref Vector512<double> best)
    {
        Vector512<double> room = best - partner.Power;
        for (int k = 0; k < count; k++)
        {
            Row row = Row.At(ref rows, k);
            Vector512<double> cross = partner.Dot(ref Unsafe.Add(ref rows, 3 * k));
            if (Vector512.GreaterThanAny(cross * cross, room * (best - row.Power)))
            {
                Vector512<double> larger = Larger(row, partner);
                chosen.Take(Vector512.GreaterThan(larger, best), row);
                best = Vector512.Max(best, larger);
                room = best - partner.Power;
            }
        }

        return chosen;
    }

    /// <summary>Power of an EEG row within the plane of the MEG rows.</summary>
    private static Vector512<double> Tangential(in Row row, in LaneDirection unseen)
    {
        Vector512<double> across = row.X * unseen.X + row.Y * unseen.Y + row.Z * unseen.Z;
        return row.Power - across * across;
    }

    /// <summary>L of a pair.</summary>
    private static Vector512<double> Larger(in Row a, in Row b)
    {
        Vector512<double> cross = a.X * b.X + a.Y * b.Y + a.Z * b.Z, difference = a.Power - b.Power;
        return Vector512.Create(0.5) * (a.Power + b.Power + Vector512.Sqrt(difference * difference + Vector512.Create(4.0) * cross * cross));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Fma(Vector512<double> a, Vector512<double> b, Vector512<double> c) => Vector512.MultiplyAddEstimate(a, b, c);

    private struct Row
    {
        public Vector512<double> X, Y, Z, Power;

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public static Row At(ref Vector512<double> rows, int index)
        {
            ref Vector512<double> row = ref Unsafe.Add(ref rows, 3 * index);
            Vector512<double> x = row, y = Unsafe.Add(ref row, 1), z = Unsafe.Add(ref row, 2);
            return new Row { X = x, Y = y, Z = z, Power = Fma(x, x, Fma(y, y, z * z)) };
        }

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public readonly Vector512<double> Dot(ref Vector512<double> row) =>
            Fma(X, row, Fma(Y, Unsafe.Add(ref row, 1), Z * Unsafe.Add(ref row, 2)));

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public void Take(Vector512<double> where, in Row other)
        {
            X = Vector512.ConditionalSelect(where, other.X, X);
            Y = Vector512.ConditionalSelect(where, other.Y, Y);
            Z = Vector512.ConditionalSelect(where, other.Z, Z);
            Power = Vector512.ConditionalSelect(where, other.Power, Power);
        }
    }
}
