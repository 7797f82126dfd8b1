using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace DeepSourceCheck.Core.Numerics;

// SingularTriple.cs - singular values and right singular vectors of eight 3 x 3 triangles at once.
//   One-sided Jacobi: the columns of R are rotated in pairs until they are orthogonal; their lengths are the singular values, the product of the
//   rotations is V. For a pair p, q: d = q.q - p.p, g = p.q, t = 2 g sgn(d)/(|d| + sqrt(d^2 + 4 g^2)), c = 1/sqrt(1 + t^2), s = c t;
//   p <- c p - s q, q <- s p + c q. R is scaled by a power of two first.
// Source: [Golub & Van Loan 2013] 8.6.3, [Demmel & Veselic 1992].

/// <summary>Singular value decomposition of eight matrices of three columns, from their R.</summary>
internal static class SingularTriple
{
    /// <summary>A pair is orthogonal when (p.q)^2 is at most this times p.p q.q: two units in the last place of p.q.</summary>
    private const double Orthogonal = 4 * 4.930380657631324e-32;

    /// <summary>Products below this, with the largest entry between 1 and 2, can no longer turn anything.</summary>
    private const double Negligible = 1e-120;

    /// <summary>Cyclic Jacobi needs 4 or 5 sweeps; the limit only ends the loop for matrices that are not finite.</summary>
    private const int MaxSweeps = 24;

    /// <summary>Decomposes.</summary>
    /// <param name="r">R of the matrices.</param>
    /// <param name="singularValues">Descending, [k][lane], 24 values, unit of the matrix; overwritten.</param>
    /// <param name="vectors">Right singular vectors, [k][axis][lane], 72 values, orthonormal, signs as they fall; overwritten.</param>
    public static void Of(in TriangularFactor r, Span<double> singularValues, Span<double> vectors)
    {
        Vector512<double> zero = Vector512<double>.Zero, one = Vector512<double>.One;
        Vector512<double> largest = Vector512.Max(Vector512.Max(r.R11, r.R22), Vector512.Max(r.R33, Vector512.Abs(r.R12)));
        largest = Vector512.Max(largest, Vector512.Max(Vector512.Abs(r.R13), Vector512.Abs(r.R23)));
        Vector512<double> scale = TriangularFactor.PowerOfTwo(largest), inverse = one / scale;

        Vector512<double> p0 = r.R11 * inverse, p1 = zero, p2 = zero;
        Vector512<double> q0 = r.R12 * inverse, q1 = r.R22 * inverse, q2 = zero;
        Vector512<double> s0 = r.R13 * inverse, s1 = r.R23 * inverse, s2 = r.R33 * inverse;
        Vector512<double> vp0 = one, vp1 = zero, vp2 = zero, vq0 = zero, vq1 = one, vq2 = zero, vs0 = zero, vs1 = zero, vs2 = one;
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

        Vector512<double> p = Vector512.Sqrt(Dot(p0, p1, p2, p0, p1, p2));
        Vector512<double> q = Vector512.Sqrt(Dot(q0, q1, q2, q0, q1, q2));
        Vector512<double> s = Vector512.Sqrt(Dot(s0, s1, s2, s0, s1, s2));
        Order(ref p, ref vp0, ref vp1, ref vp2, ref q, ref vq0, ref vq1, ref vq2);
        Order(ref p, ref vp0, ref vp1, ref vp2, ref s, ref vs0, ref vs1, ref vs2);
        Order(ref q, ref vq0, ref vq1, ref vq2, ref s, ref vs0, ref vs1, ref vs2);

        (p * scale * r.Scale).CopyTo(singularValues);
        (q * scale * r.Scale).CopyTo(singularValues[8..]);
        (s * scale * r.Scale).CopyTo(singularValues[16..]);
        vp0.CopyTo(vectors);
        vp1.CopyTo(vectors[8..]);
        vp2.CopyTo(vectors[16..]);
        vq0.CopyTo(vectors[24..]);
        vq1.CopyTo(vectors[32..]);
        vq2.CopyTo(vectors[40..]);
        vs0.CopyTo(vectors[48..]);
        vs1.CopyTo(vectors[56..]);
        vs2.CopyTo(vectors[64..]);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Dot(
        Vector512<double> a0, Vector512<double> a1, Vector512<double> a2, Vector512<double> b0, Vector512<double> b1, Vector512<double> b2) =>
        Vector512.MultiplyAddEstimate(a0, b0, Vector512.MultiplyAddEstimate(a1, b1, a2 * b2));

    /// <summary>Makes columns p and q orthogonal; false when they are in every lane.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static bool Turn(
        ref Vector512<double> p0, ref Vector512<double> p1, ref Vector512<double> p2, ref Vector512<double> q0, ref Vector512<double> q1, ref Vector512<double> q2,
        ref Vector512<double> vp0, ref Vector512<double> vp1, ref Vector512<double> vp2, ref Vector512<double> vq0, ref Vector512<double> vq1, ref Vector512<double> vq2)
    {
        Vector512<double> pp = Dot(p0, p1, p2, p0, p1, p2), qq = Dot(q0, q1, q2, q0, q1, q2), pq = Dot(p0, p1, p2, q0, q1, q2);
        Vector512<double> turns = Vector512.GreaterThan(pq * pq, Vector512.Max(pp * qq * Orthogonal, Vector512.Create(Negligible)));
        if (Vector512.EqualsAll(turns.AsUInt64(), Vector512<ulong>.Zero))
        {
            return false;
        }

        Vector512<double> d = qq - pp, g = pq + pq;
        Vector512<double> signedG = (g.AsUInt64() ^ (d.AsUInt64() & Vector512.Create(0x8000_0000_0000_0000UL))).AsDouble();
        Vector512<double> t = signedG / (Vector512.Abs(d) + Vector512.Sqrt(Vector512.MultiplyAddEstimate(d, d, g * g)));
        t = Vector512.ConditionalSelect(turns, t, Vector512<double>.Zero);
        Vector512<double> c = Vector512<double>.One / Vector512.Sqrt(Vector512.MultiplyAddEstimate(t, t, Vector512<double>.One)), s = c * t;
        (p0, q0) = (c * p0 - s * q0, s * p0 + c * q0);
        (p1, q1) = (c * p1 - s * q1, s * p1 + c * q1);
        (p2, q2) = (c * p2 - s * q2, s * p2 + c * q2);
        (vp0, vq0) = (c * vp0 - s * vq0, s * vp0 + c * vq0);
        (vp1, vq1) = (c * vp1 - s * vq1, s * vp1 + c * vq1);
        (vp2, vq2) = (c * vp2 - s * vq2, s * vp2 + c * vq2);
        return true;
    }

    /// <summary>Exchanges lanes in which the first value is the smaller.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Order(
        ref Vector512<double> p, ref Vector512<double> vp0, ref Vector512<double> vp1, ref Vector512<double> vp2,
        ref Vector512<double> q, ref Vector512<double> vq0, ref Vector512<double> vq1, ref Vector512<double> vq2)
    {
        Vector512<double> swap = Vector512.LessThan(p, q);
        (p, q) = (Vector512.ConditionalSelect(swap, q, p), Vector512.ConditionalSelect(swap, p, q));
        (vp0, vq0) = (Vector512.ConditionalSelect(swap, vq0, vp0), Vector512.ConditionalSelect(swap, vp0, vq0));
        (vp1, vq1) = (Vector512.ConditionalSelect(swap, vq1, vp1), Vector512.ConditionalSelect(swap, vp1, vq1));
        (vp2, vq2) = (Vector512.ConditionalSelect(swap, vq2, vp2), Vector512.ConditionalSelect(swap, vp2, vq2));
    }
}
