using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace DeepSourceCheck.Core.Detection;

// PairSearch.cs - the best pair of one EEG and one MEG channel, over all directions of the dipole, for independent noise.
//   A pair of rows e, m reads (e.u)^2 + (m.u)^2 in direction u; its largest value over unit vectors u is the largest eigenvalue of the pair's Gram matrix,
//     L = (e.e + m.m + sqrt((e.e - m.m)^2 + 4 (e.m)^2)) / 2.
//   For b not below e.e and m.m: L > b exactly where (e.m)^2 > (b - e.e)(b - m.m), that is where m.m + (E.m)^2 > b with E = e / sqrt(b - e.e).
//   So one root a row, not one a pair, decides against the best so far.
//   Order of search: the strongest MEG row against every EEG row, the best of these against every MEG row, that one against every EEG row again. This finds the
//   best pair nearly always. The proof follows: where w is a direction to which all MEG rows are orthogonal, (e.m)^2 <= t m.m with t = e.e - (e.w)^2, else t = e.e.
//   EEG rows that cannot beat the best with the strongest MEG row are left out, then MEG rows that cannot beat it with the strongest of the EEG rows left;
//   for the rest the largest (E.m)^2 over the EEG rows left is held against b - m.m, row by row.
//   Eight dipoles a vector; a row is left out only where it is beaten in all eight. The plain double loop stands in the tests.

/// <summary>Largest power of a pair of one EEG and one MEG channel over all directions. One a thread: keeps its buffers.</summary>
public sealed class PairSearch
{
    /// <summary>b - e.e counts as at least this share of b: what a pair gains below it is less than half a unit in the last place.</summary>
    private const double LeastRoom = 1.0 / (1L << 55);

    private double[] _megPower = [], _eegPower = [], _scaled = [];
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
        Prepare(eegCount, megCount);
        Lanes.LargestNorm(MemoryMarshal.Cast<Vector512<double>, double>(eeg), eegCount, _eegPower, out Vector512<double> chosen);
        Lanes.LargestNorm(MemoryMarshal.Cast<Vector512<double>, double>(meg), megCount, _megPower, out Vector512<double> strongest);
        return Largest(new NormedRows(eeg, eegCount, Lanes.View(_eegPower), chosen), new NormedRows(meg, megCount, Lanes.View(_megPower), strongest), unseen);
    }

    /// <summary>The same for rows whose powers are known.</summary>
    /// <param name="eeg">EEG rows.</param>
    /// <param name="meg">MEG rows.</param>
    /// <param name="unseen">Unit vector to which all MEG rows are orthogonal to rounding; zero in lanes where there is none.</param>
    public Vector512<double> Largest(in NormedRows eeg, in NormedRows meg, in LaneDirection unseen)
    {
        int eegCount = eeg.Count, megCount = meg.Count;
        Prepare(eegCount, megCount);
        ref Vector512<double> e = ref MemoryMarshal.GetReference(eeg.Rows), m = ref MemoryMarshal.GetReference(meg.Rows);
        ref Vector512<double> ee = ref MemoryMarshal.GetReference(eeg.Powers), mm = ref MemoryMarshal.GetReference(meg.Powers);
        Row strongest = Row.OfEach(ref m, meg.Strongest), chosen = Row.OfEach(ref e, eeg.Strongest);
        Vector512<double> most = strongest.Power, best = Vector512.MaxNative(most, chosen.Power);

        best = Vector512.MaxNative(best, Larger(chosen, strongest));
        chosen = Improve(ref e, ref ee, eegCount, strongest, chosen, ref best);
        strongest = Improve(ref m, ref mm, megCount, chosen, strongest, ref best);
        Improve(ref e, ref ee, eegCount, strongest, chosen, ref best);

        int eegLeft = LeaveOutEeg(ref e, ref ee, eegCount, most, best, unseen, out Vector512<double> eegMost, out Vector512<double> tangentialMost);
        int megLeft = eegLeft == 0 ? 0 : LeaveOutMeg(ref mm, megCount, best, eegMost, tangentialMost);
        ref Vector512<double> scaled = ref First(_scaled);
        foreach (int k in _megLeft.AsSpan(0, megLeft))
        {
            ref Vector512<double> row = ref Unsafe.Add(ref m, 3 * k);
            Vector512<double> x = row, y = Unsafe.Add(ref row, 1), z = Unsafe.Add(ref row, 2), even = default, odd = default;
            for (int i = 0; i < eegLeft; i += 2)
            {
                ref Vector512<double> pair = ref Unsafe.Add(ref scaled, 3 * i);
                even = Vector512.MaxNative(even, Vector512.Abs(Fma(x, pair, Fma(y, Unsafe.Add(ref pair, 1), z * Unsafe.Add(ref pair, 2)))));
                odd = Vector512.MaxNative(odd, Vector512.Abs(Fma(x, Unsafe.Add(ref pair, 3), Fma(y, Unsafe.Add(ref pair, 4), z * Unsafe.Add(ref pair, 5)))));
            }

            Vector512<double> most2 = Vector512.MaxNative(even, odd);
            if (Vector512.GreaterThanAny(Fma(most2, most2, Unsafe.Add(ref mm, k)), best))
            {
                Row found = Row.At(ref m, k);
                foreach (int i in _eegLeft.AsSpan(0, eegLeft))
                {
                    best = Vector512.MaxNative(best, Larger(Row.At(ref e, i), found));
                }
            }
        }

        return best;
    }

    private void Prepare(int eegCount, int megCount)
    {
        if (_megLeft.Length < megCount)
        {
            _megPower = GC.AllocateUninitializedArray<double>(megCount * 8);   // of rows that come without powers
            _megLeft = new int[megCount];
        }

        if (_eegLeft.Length < eegCount)
        {
            _eegPower = GC.AllocateUninitializedArray<double>(eegCount * 8);
            _scaled = new double[(eegCount + 1) * 3 * 8];        // one more: rows are read in twos
            _eegLeft = new int[eegCount];
        }
    }

    /// <summary>EEG rows that may still win with the strongest MEG row, divided by sqrt(b - e.e) in those lanes and zero in the others; per dipole the largest power of them.</summary>
    private int LeaveOutEeg(
        ref Vector512<double> e, ref Vector512<double> ee, int count, Vector512<double> most, Vector512<double> best, in LaneDirection unseen,
        out Vector512<double> eegMost, out Vector512<double> tangentialMost)
    {
        int left = 0;
        Vector512<double> room = best - most, least = best * Vector512.Create(LeastRoom), powerMost = default, acrossMost = default;
        ref Vector512<double> scaled = ref First(_scaled);
        for (int i = 0; i < count; i++)
        {
            ref Vector512<double> row = ref Unsafe.Add(ref e, 3 * i);
            Vector512<double> x = row, y = Unsafe.Add(ref row, 1), z = Unsafe.Add(ref row, 2), power = Unsafe.Add(ref ee, i);
            Vector512<double> along = x * unseen.X + y * unseen.Y + z * unseen.Z, tangential = power - along * along, own = best - power;
            Vector512<double> may = Vector512.GreaterThan(tangential * most, room * own);
            if (Vector512.EqualsAll(may.AsUInt64(), Vector512<ulong>.Zero))
            {
                continue;
            }

            powerMost = Vector512.MaxNative(powerMost, power & may);
            acrossMost = Vector512.MaxNative(acrossMost, tangential & may);
            Vector512<double> scale = (Vector512<double>.One / Vector512.Sqrt(Vector512.MaxNative(own, least))) & may;
            ref Vector512<double> to = ref Unsafe.Add(ref scaled, 3 * left);
            (to, Unsafe.Add(ref to, 1), Unsafe.Add(ref to, 2)) = (scale * x, scale * y, scale * z);
            _eegLeft[left++] = i;
        }

        ref Vector512<double> beyond = ref Unsafe.Add(ref scaled, 3 * left);
        (beyond, Unsafe.Add(ref beyond, 1), Unsafe.Add(ref beyond, 2)) = (default, default, default);
        (eegMost, tangentialMost) = (powerMost, acrossMost);
        return left;
    }

    /// <summary>MEG rows that may win with the strongest of the EEG rows left.</summary>
    private int LeaveOutMeg(ref Vector512<double> mm, int count, Vector512<double> best, Vector512<double> eegMost, Vector512<double> tangentialMost)
    {
        int left = 0;
        Vector512<double> room = best - eegMost;
        ref int to = ref MemoryMarshal.GetArrayDataReference(_megLeft);
        for (int k = 0; k < count; k++)
        {
            Vector512<double> power = Unsafe.Add(ref mm, k);
            Unsafe.Add(ref to, left) = k;
            left += Vector512.GreaterThanAny(tangentialMost * power, room * (best - power)) ? 1 : 0;
        }

        return left;
    }

    /// <summary>Tries the row that most exceeds the best with one partner; returns the row of the best pair, or the one given where none is better.</summary>
    private static Row Improve(ref Vector512<double> rows, ref Vector512<double> powers, int count, in Row partner, Row chosen, ref Vector512<double> best)
    {
        Vector512<double> scale = Vector512<double>.One / Vector512.Sqrt(Vector512.MaxNative(best - partner.Power, best * Vector512.Create(LeastRoom)));
        Vector512<double> px = scale * partner.X, py = scale * partner.Y, pz = scale * partner.Z;
        Vector512<double> most0 = Vector512.Create(-1.0), most1 = most0, at0 = default, at1 = default, number = default, two = Vector512.Create(2.0);
        int k = 0;
        for (; k + 1 < count; k += 2)
        {
            ref Vector512<double> row = ref Unsafe.Add(ref rows, 3 * k);
            Vector512<double> a = Fma(px, row, Fma(py, Unsafe.Add(ref row, 1), pz * Unsafe.Add(ref row, 2)));
            Vector512<double> b = Fma(px, Unsafe.Add(ref row, 3), Fma(py, Unsafe.Add(ref row, 4), pz * Unsafe.Add(ref row, 5)));
            a = Fma(a, a, Unsafe.Add(ref powers, k));
            b = Fma(b, b, Unsafe.Add(ref powers, k + 1));
            at0 = Vector512.ConditionalSelect(Vector512.GreaterThan(a, most0), number, at0);
            at1 = Vector512.ConditionalSelect(Vector512.GreaterThan(b, most1), number, at1);
            most0 = Vector512.MaxNative(most0, a);
            most1 = Vector512.MaxNative(most1, b);
            number += two;
        }

        at0 = Vector512.ConditionalSelect(Vector512.GreaterThan(most1, most0), at1 + Vector512<double>.One, at0);
        most0 = Vector512.MaxNative(most0, most1);
        if (k < count)
        {
            ref Vector512<double> row = ref Unsafe.Add(ref rows, 3 * k);
            Vector512<double> a = Fma(px, row, Fma(py, Unsafe.Add(ref row, 1), pz * Unsafe.Add(ref row, 2)));
            at0 = Vector512.ConditionalSelect(Vector512.GreaterThan(Fma(a, a, Unsafe.Add(ref powers, k)), most0), Vector512.Create((double)k), at0);
        }

        Row found = Row.OfEach(ref rows, at0);
        Vector512<double> larger = Larger(found, partner);
        chosen.Take(Vector512.GreaterThan(larger, best), found);
        best = Vector512.MaxNative(best, larger);
        return chosen;
    }

    /// <summary>L of a pair.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Larger(in Row a, in Row b)
    {
        Vector512<double> cross = a.X * b.X + a.Y * b.Y + a.Z * b.Z, difference = a.Power - b.Power;
        return Vector512.Create(0.5) * (a.Power + b.Power + Vector512.Sqrt(difference * difference + Vector512.Create(4.0) * cross * cross));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Fma(Vector512<double> a, Vector512<double> b, Vector512<double> c) => Vector512.MultiplyAddEstimate(a, b, c);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static ref Vector512<double> First(double[] lanes) => ref Unsafe.As<double, Vector512<double>>(ref MemoryMarshal.GetArrayDataReference(lanes));

    /// <summary>Rows of one modality with their powers.</summary>
    /// <param name="rows">[row][axis], eight dipoles a vector.</param>
    /// <param name="count">Number of rows, at least 1.</param>
    /// <param name="powers">Every |row|^2.</param>
    /// <param name="strongest">Row of the largest power of each dipole, as a double.</param>
    public readonly ref struct NormedRows(ReadOnlySpan<Vector512<double>> rows, int count, ReadOnlySpan<Vector512<double>> powers, Vector512<double> strongest)
    {
        /// <summary>Rows.</summary>
        public ReadOnlySpan<Vector512<double>> Rows { get; } = rows;

        /// <summary>Number of rows.</summary>
        public int Count { get; } = count;

        /// <summary>Powers.</summary>
        public ReadOnlySpan<Vector512<double>> Powers { get; } = powers;

        /// <summary>The strongest row of each dipole.</summary>
        public Vector512<double> Strongest { get; } = strongest;
    }

    private struct Row
    {
        public Vector512<double> X, Y, Z, Power;

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public static Row At(ref Vector512<double> rows, int index)
        {
            ref Vector512<double> row = ref Unsafe.Add(ref rows, 3 * index);
            return Of(row, Unsafe.Add(ref row, 1), Unsafe.Add(ref row, 2));
        }

        /// <summary>Another row in each lane.</summary>
        public static Row OfEach(ref Vector512<double> rows, Vector512<double> index)
        {
            ref double first = ref Unsafe.As<Vector512<double>, double>(ref rows);
            Span<double> picked = stackalloc double[3 * 8];
            for (int lane = 0; lane < 8; lane++)
            {
                int at = (int)index[lane] * 3 * 8 + lane;
                (picked[lane], picked[8 + lane], picked[16 + lane]) = (Unsafe.Add(ref first, at), Unsafe.Add(ref first, at + 8), Unsafe.Add(ref first, at + 16));
            }

            return Of(Vector512.Create<double>(picked), Vector512.Create<double>(picked[8..]), Vector512.Create<double>(picked[16..]));
        }

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public void Take(Vector512<double> where, in Row other)
        {
            X = Vector512.ConditionalSelect(where, other.X, X);
            Y = Vector512.ConditionalSelect(where, other.Y, Y);
            Z = Vector512.ConditionalSelect(where, other.Z, Z);
            Power = Vector512.ConditionalSelect(where, other.Power, Power);
        }

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        private static Row Of(Vector512<double> x, Vector512<double> y, Vector512<double> z) => new() { X = x, Y = y, Z = z, Power = Fma(x, x, Fma(y, y, z * z)) };
    }
}
