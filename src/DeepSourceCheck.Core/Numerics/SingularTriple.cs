using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace DeepSourceCheck.Core.Numerics;

// SingularTriple.cs - singular values and right singular vectors of several 3 x 3 triangles at once.
//   One-sided Jacobi: the columns of R are rotated in pairs until they are orthogonal; their lengths are the singular values, the product of the
//   rotations is V. For a pair p, q: d = q.q - p.p, g = p.q, t = 2 g sgn(d)/(|d| + sqrt(d^2 + 4 g^2)), c = 1/sqrt(1 + t^2), s = c t;
//   p <- c p - s q, q <- s p + c q. R is scaled by a power of two first.
// Source: [Golub & Van Loan 2013] 8.6.3, [Demmel & Veselic 1992].

/// <summary>Singular value decomposition of several matrices of three columns, from their R.</summary>
internal static class SingularTriple<T>
    where T : struct, ILaneVector<T>
{
    /// <summary>A pair is orthogonal when (p.q)^2 is at most this times p.p q.q: two units in the last place of p.q.</summary>
    private const double Orthogonal = 4 * 4.930380657631324e-32;

    /// <summary>Products below this, with the largest entry between 1 and 2, can no longer turn anything.</summary>
    private const double Negligible = 1e-120;

    /// <summary>Cyclic Jacobi needs 4 or 5 sweeps; the limit only ends the loop for matrices that are not finite.</summary>
    private const int MaxSweeps = 24;

    /// <summary>Decomposes.</summary>
    /// <param name="r">R of the matrices.</param>
    /// <param name="singularValues">Descending, [k][lane], 24 values, unit of the matrix; the lanes of r are overwritten.</param>
    /// <param name="vectors">Right singular vectors, [k][axis][lane], 72 values, orthonormal, signs as they fall; the lanes of r are overwritten.</param>
    /// <param name="first">First of the lanes that are written.</param>
    public static void Of(in TriangularFactor<T> r, Span<double> singularValues, Span<double> vectors, int first)
    {
        T zero = default, one = T.All(1);
        T scale = SizeOf(r), inverse = one / scale;
        T p0 = r.R11 * inverse, p1 = zero, p2 = zero;
        T q0 = r.R12 * inverse, q1 = r.R22 * inverse, q2 = zero;
        T s0 = r.R13 * inverse, s1 = r.R23 * inverse, s2 = r.R33 * inverse;
        T vp0 = one, vp1 = zero, vp2 = zero, vq0 = zero, vq1 = one, vq2 = zero, vs0 = zero, vs1 = zero, vs2 = one;
        for (int sweep = 0; sweep < MaxSweeps; sweep++)
        {
            bool turned = Turn(ref p0, ref p1, ref p2, ref q0, ref q1, ref q2, ref vp0, ref vp1, ref vp2, ref vq0, ref vq1, ref vq2);
            turned |= Turn(ref p0, ref p1, ref p2, ref s0, ref s1, ref s2, ref vp0, ref vp1, ref vp2, ref vs0, ref vs1, ref vs2);
            turned |= Turn(ref q0, ref q1, ref q2, ref s0, ref s1, ref s2, ref vq0, ref vq1, ref vq2, ref vs0, ref vs1, ref vs2);
            if (!turned)
            {
                break;
            }
        }

        ref double values = ref Unsafe.Add(ref MemoryMarshal.GetReference(singularValues), first), axes = ref Unsafe.Add(ref MemoryMarshal.GetReference(vectors), first);
        (T.Sqrt(Dot(p0, p1, p2, p0, p1, p2)) * scale * r.Scale).Store(ref values, 0);
        (T.Sqrt(Dot(q0, q1, q2, q0, q1, q2)) * scale * r.Scale).Store(ref values, 8);
        (T.Sqrt(Dot(s0, s1, s2, s0, s1, s2)) * scale * r.Scale).Store(ref values, 16);
        vp0.Store(ref axes, 0);
        vp1.Store(ref axes, 8);
        vp2.Store(ref axes, 16);
        vq0.Store(ref axes, 24);
        vq1.Store(ref axes, 32);
        vq2.Store(ref axes, 40);
        vs0.Store(ref axes, 48);
        vs1.Store(ref axes, 56);
        vs2.Store(ref axes, 64);
        Sort(ref values, ref axes);
    }

    /// <summary>Power of two at or below the largest entry.</summary>
    [MethodImpl(MethodImplOptions.NoInlining | MethodImplOptions.AggressiveOptimization)]
    private static T SizeOf(in TriangularFactor<T> r) => LaneVector.PowerOfTwo(
        T.Max(T.Max(T.Max(r.R11, r.R22), T.Max(r.R33, T.Abs(r.R12))), T.Max(T.Abs(r.R13), T.Abs(r.R23))));

    /// <summary>Puts the largest first. It and the one above stand apart, since the compiler inlines only so much into one method, and have no loop that would have them optimised at once.</summary>
    [MethodImpl(MethodImplOptions.NoInlining | MethodImplOptions.AggressiveOptimization)]
    private static void Sort(ref double values, ref double axes)
    {
        Order(ref values, ref axes, 0, 1);
        Order(ref values, ref axes, 0, 2);
        Order(ref values, ref axes, 1, 2);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T Dot(
        T a0, T a1, T a2, T b0, T b1, T b2) =>
        T.MultiplyAdd(a0, b0, T.MultiplyAdd(a1, b1, a2 * b2));

    /// <summary>Makes columns p and q orthogonal; false when they are in every lane.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static bool Turn(
        ref T p0, ref T p1, ref T p2, ref T q0, ref T q1, ref T q2,
        ref T vp0, ref T vp1, ref T vp2, ref T vq0, ref T vq1, ref T vq2)
    {
        T pp = Dot(p0, p1, p2, p0, p1, p2), qq = Dot(q0, q1, q2, q0, q1, q2), pq = Dot(p0, p1, p2, q0, q1, q2);
        T turns = T.Greater(pq * pq, pp * qq * T.All(Orthogonal)) & T.Greater(pq * pq, T.All(Negligible));
        if (!T.Any(turns))
        {
            return false;
        }

        T d = qq - pp, g = pq + pq;
        T t = LaneVector.TurnedBy(g, d) / (T.Abs(d) + T.Sqrt(T.MultiplyAdd(d, d, g * g)));
        t = turns & t;
        T c = T.All(1) / T.Sqrt(T.MultiplyAdd(t, t, T.All(1))), s = c * t;
        (p0, q0) = (c * p0 - s * q0, s * p0 + c * q0);
        (p1, q1) = (c * p1 - s * q1, s * p1 + c * q1);
        (p2, q2) = (c * p2 - s * q2, s * p2 + c * q2);
        (vp0, vq0) = (c * vp0 - s * vq0, s * vp0 + c * vq0);
        (vp1, vq1) = (c * vp1 - s * vq1, s * vp1 + c * vq1);
        (vp2, vq2) = (c * vp2 - s * vq2, s * vp2 + c * vq2);
        return true;
    }

    /// <summary>Exchanges the lanes in which value i is smaller than value j.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Order(ref double values, ref double axes, nuint i, nuint j)
    {
        T p = T.Load(ref values, 8 * i), q = T.Load(ref values, 8 * j), swap = T.Greater(q, p);
        T.Select(swap, q, p).Store(ref values, 8 * i);
        T.Select(swap, p, q).Store(ref values, 8 * j);
        for (nuint axis = 0; axis < 24; axis += 8)
        {
            p = T.Load(ref axes, 24 * i + axis);
            q = T.Load(ref axes, 24 * j + axis);
            T.Select(swap, q, p).Store(ref axes, 24 * i + axis);
            T.Select(swap, p, q).Store(ref axes, 24 * j + axis);
        }
    }
}
