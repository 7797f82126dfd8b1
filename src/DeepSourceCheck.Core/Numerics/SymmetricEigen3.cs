using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace DeepSourceCheck.Core.Numerics;

// SymmetricEigen3.cs - largest eigenvalue of symmetric 3 x 3 matrices, eight at once.
//   Cyclic Jacobi: for the pair p, q with off-diagonal entry g, t = 2 g sgn(d)/(|d| + sqrt(d^2 + 4 g^2)), d = a_qq - a_pp;
//   a_pp <- a_pp - t g, a_qq <- a_qq + t g; the entries beside them turn with c = 1/sqrt(1 + t^2), s = c t.
//   Scaled by a power of two first. The closed formula with an arc cosine would lose half the digits where eigenvalues nearly coincide.
// Source: [Golub & Van Loan 2013] 8.5.

/// <summary>Largest eigenvalue of a symmetric 3 x 3 matrix: the best direction of a quadratic measure.</summary>
/// <remarks>Error within a few units in the last place of the largest eigenvalue in size. Any unit, any scale whose largest entry is a normal number.</remarks>
public static class SymmetricEigen3
{
    private const int MaxSweeps = 16;

    /// <summary>Off-diagonal entries below this, with the largest entry between 1 and 2, change no digit of an eigenvalue (their square enters).</summary>
    private const double Negligible = 1e-20;

    /// <summary>Largest eigenvalue of one matrix, in the unit of the matrix.</summary>
    public static double Largest(double xx, double xy, double xz, double yy, double yz, double zz) => Largest(
        Vector512.Create(xx), Vector512.Create(xy), Vector512.Create(xz), Vector512.Create(yy), Vector512.Create(yz), Vector512.Create(zz))[0];

    /// <summary>Largest eigenvalues of eight matrices, one a lane.</summary>
    public static Vector512<double> Largest(
        Vector512<double> xx, Vector512<double> xy, Vector512<double> xz, Vector512<double> yy, Vector512<double> yz, Vector512<double> zz)
    {
        if (LaneWidth.Lanes == 8)
        {
            return Largest(new EightLanes(xx), new(xy), new(xz), new(yy), new(yz), new(zz)).Value;
        }

        Span<double> entries = stackalloc double[6 * 8];
        xx.CopyTo(entries);
        xy.CopyTo(entries[8..]);
        xz.CopyTo(entries[16..]);
        yy.CopyTo(entries[24..]);
        yz.CopyTo(entries[32..]);
        zz.CopyTo(entries[40..]);
        if (LaneWidth.Lanes == 4)
        {
            Replace<FourLanes>(entries);
        }
        else
        {
            Replace<TwoLanes>(entries);
        }

        return Vector512.Create<double>(entries);
    }

    /// <summary>Largest eigenvalues of as many matrices as there are lanes.</summary>
    internal static T Largest<T>(T xx, T xy, T xz, T yy, T yz, T zz)
        where T : struct, ILaneVector<T>
    {
        T largest = T.Max(T.Abs(xx), T.Max(T.Abs(yy), T.Abs(zz)));
        largest = T.Max(largest, T.Max(T.Abs(xy), T.Max(T.Abs(xz), T.Abs(yz))));
        T scale = LaneVector.PowerOfTwo(largest), inverse = T.All(1) / scale;
        (xx, xy, xz) = (xx * inverse, xy * inverse, xz * inverse);
        (yy, yz, zz) = (yy * inverse, yz * inverse, zz * inverse);
        for (int sweep = 0; sweep < MaxSweeps; sweep++)
        {
            T off = T.Max(T.Abs(xy), T.Max(T.Abs(xz), T.Abs(yz)));
            if (!T.Any(T.Greater(off, T.All(Negligible))))
            {
                break;
            }

            Turn(ref xx, ref yy, ref xy, ref xz, ref yz);
            Turn(ref xx, ref zz, ref xz, ref xy, ref yz);
            Turn(ref yy, ref zz, ref yz, ref xy, ref xz);
        }

        return T.Max(xx, T.Max(yy, zz)) * scale;
    }

    /// <summary>Writes the eigenvalues over the first entries, [entry][lane].</summary>
    private static void Replace<T>(Span<double> entries)
        where T : struct, ILaneVector<T>
    {
        ref double e = ref MemoryMarshal.GetReference(entries);
        for (nuint k = 0; k < 8; k += (nuint)T.Count)
        {
            Largest(T.Load(ref e, k), T.Load(ref e, k + 8), T.Load(ref e, k + 16), T.Load(ref e, k + 24), T.Load(ref e, k + 32), T.Load(ref e, k + 40)).Store(ref e, k);
        }
    }

    /// <summary>Annihilates the entry between p and q; <paramref name="pr"/> and <paramref name="qr"/> lie beside them.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Turn<T>(ref T pp, ref T qq, ref T pq, ref T pr, ref T qr)
        where T : struct, ILaneVector<T>
    {
        T d = qq - pp, g = pq + pq;
        T t = LaneVector.TurnedBy(g, d) / (T.Abs(d) + T.Sqrt(T.MultiplyAdd(d, d, g * g)));
        t = T.Greater(T.Abs(pq), T.All(Negligible)) & t;
        T c = T.All(1) / T.Sqrt(T.MultiplyAdd(t, t, T.All(1))), s = c * t;
        pp -= t * pq;
        qq += t * pq;
        pq = T.Same(t, default) & pq;
        (pr, qr) = (c * pr - s * qr, s * pr + c * qr);
    }
}
