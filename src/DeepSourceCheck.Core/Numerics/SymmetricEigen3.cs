using System.Runtime.CompilerServices;
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
        Vector512<double> largest = Vector512.Max(Vector512.Abs(xx), Vector512.Max(Vector512.Abs(yy), Vector512.Abs(zz)));
        largest = Vector512.Max(largest, Vector512.Max(Vector512.Abs(xy), Vector512.Max(Vector512.Abs(xz), Vector512.Abs(yz))));
        Vector512<double> scale = TriangularFactor.PowerOfTwo(largest), inverse = Vector512<double>.One / scale;
        (xx, xy, xz) = (xx * inverse, xy * inverse, xz * inverse);
        (yy, yz, zz) = (yy * inverse, yz * inverse, zz * inverse);
        for (int sweep = 0; sweep < MaxSweeps; sweep++)
        {
            Vector512<double> off = Vector512.Max(Vector512.Abs(xy), Vector512.Max(Vector512.Abs(xz), Vector512.Abs(yz)));
            if (!Vector512.GreaterThanAny(off, Vector512.Create(Negligible)))
            {
                break;
            }

            Turn(ref xx, ref yy, ref xy, ref xz, ref yz);
            Turn(ref xx, ref zz, ref xz, ref xy, ref yz);
            Turn(ref yy, ref zz, ref yz, ref xy, ref xz);
        }

        return Vector512.Max(xx, Vector512.Max(yy, zz)) * scale;
    }

    /// <summary>Annihilates the entry between p and q; <paramref name="pr"/> and <paramref name="qr"/> lie beside them.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Turn(ref Vector512<double> pp, ref Vector512<double> qq, ref Vector512<double> pq, ref Vector512<double> pr, ref Vector512<double> qr)
    {
        Vector512<double> zero = Vector512<double>.Zero, d = qq - pp, g = pq + pq;
        Vector512<double> signedG = (g.AsUInt64() ^ (d.AsUInt64() & Vector512.Create(0x8000_0000_0000_0000UL))).AsDouble();
        Vector512<double> t = signedG / (Vector512.Abs(d) + Vector512.Sqrt(Vector512.MultiplyAddEstimate(d, d, g * g)));
        t = Vector512.ConditionalSelect(Vector512.GreaterThan(Vector512.Abs(pq), Vector512.Create(Negligible)), t, zero);
        Vector512<double> c = Vector512<double>.One / Vector512.Sqrt(Vector512.MultiplyAddEstimate(t, t, Vector512<double>.One)), s = c * t;
        pp -= t * pq;
        qq += t * pq;
        pq = Vector512.ConditionalSelect(Vector512.Equals(t, zero), pq, zero);
        (pr, qr) = (c * pr - s * qr, s * pr + c * qr);
    }
}
