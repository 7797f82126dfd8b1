using System.Buffers;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace DeepSourceCheck.Core.Numerics;

// TriangularFactor.cs - R of the QR factorisation of eight matrices of three columns at once.
//   Modified Gram-Schmidt in three read-only passes that recompute the reduced columns instead of storing them:
//     pass 1: a.a, a.b, a.c       pass 2: b' = b - (r12/r11) a, c' = c - (r13/r11) a; b'.b', b'.c'       pass 3: c'' = c' - (r23/r22) b'; c''.c''
//   Only R is kept. R of modified Gram-Schmidt is as backward stable as Householder's, so that re-orthogonalisation buys nothing
//   [Bjorck 1967]. A column that is zero gives a zero row.

/// <summary>Upper triangular R, eight matrices in the lanes: entries times 2^exponent, see <see cref="Scale"/>.</summary>
internal struct TriangularFactor
{
    /// <summary>Squares are trusted between these; outside them the matrix is scaled by a power of two first.</summary>
    private const double SmallestSquare = 1e-200, LargestSquare = 1e200;

    private const double SmallestNormal = 2.2250738585072014e-308;

    /// <summary>First row.</summary>
    public Vector512<double> R11, R12, R13;

    /// <summary>Second row.</summary>
    public Vector512<double> R22, R23;

    /// <summary>Third row.</summary>
    public Vector512<double> R33;

    /// <summary>Power of two by which R must be multiplied to belong to the matrix.</summary>
    public Vector512<double> Scale;

    /// <summary>Factorises.</summary>
    /// <param name="matrix">[row][column][lane], 24 doubles a row, any unit.</param>
    /// <param name="rows">Number of rows; may be 0.</param>
    /// <exception cref="ArgumentException">The span is shorter than the rows ask for.</exception>
    public static TriangularFactor Of(ReadOnlySpan<double> matrix, int rows)
    {
        const int stride = 3 * 8;
        if (matrix.Length < rows * stride)
        {
            throw new ArgumentException($"{rows} rows need {rows * stride} values; {matrix.Length} were given.", nameof(matrix));
        }

        if (Factor(ref MemoryMarshal.GetReference(matrix), rows, out TriangularFactor result))
        {
            return result;
        }

        Vector512<double> largest = Vector512<double>.Zero;
        for (int at = 0; at < rows * stride; at += 8)
        {
            largest = Vector512.Max(largest, Vector512.Abs(Vector512.Create(matrix[at..])));
        }

        Vector512<double> scale = PowerOfTwo(largest), inverse = Vector512<double>.One / scale;
        double[] copy = ArrayPool<double>.Shared.Rent(rows * stride);
        for (int at = 0; at < rows * stride; at += 8)
        {
            (Vector512.Create(matrix[at..]) * inverse).CopyTo(copy, at);
        }

        Factor(ref MemoryMarshal.GetArrayDataReference(copy), rows, out result);
        ArrayPool<double>.Shared.Return(copy);
        result.Scale = scale;
        return result;
    }

    /// <summary>The power of two at or below each value; 1 for 0, 2^-1022 for subnormal numbers, the value itself where it is not finite.</summary>
    internal static Vector512<double> PowerOfTwo(Vector512<double> value)
    {
        Vector512<double> power = (value.AsUInt64() & Vector512.Create(0x7FF0_0000_0000_0000UL)).AsDouble();
        power = Vector512.Max(power, Vector512.Create(SmallestNormal));
        return Vector512.ConditionalSelect(Vector512.Equals(value, Vector512<double>.Zero), Vector512<double>.One, power);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Fma(Vector512<double> a, Vector512<double> b, Vector512<double> c) => Vector512.MultiplyAddEstimate(a, b, c);

    /// <summary>Quotient, 0 where the divisor is 0.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Quotient(Vector512<double> a, Vector512<double> b) =>
        Vector512.ConditionalSelect(Vector512.Equals(b, Vector512<double>.Zero), Vector512<double>.Zero, a / b);

    /// <summary>False where a lane's squares may have left the range of doubles.</summary>
    private static bool Factor(ref double matrix, int rows, out TriangularFactor result)
    {
        const nuint stride = 3 * 8;
        nuint end = (nuint)rows * stride;
        Vector512<double> zero = Vector512<double>.Zero, aa = zero, ab = zero, ac = zero, bb = zero, bc = zero, cc = zero, ofB = zero, ofC = zero;
        for (nuint at = 0; at < end; at += stride)
        {
            Vector512<double> a = Vector512.LoadUnsafe(ref matrix, at), b = Vector512.LoadUnsafe(ref matrix, at + 8), c = Vector512.LoadUnsafe(ref matrix, at + 16);
            aa = Fma(a, a, aa);
            ab = Fma(a, b, ab);
            ac = Fma(a, c, ac);
            ofB = Fma(b, b, ofB);                               // a sum each: one sum of both would wait twice a row
            ofC = Fma(c, c, ofC);
        }

        Vector512<double> total = aa + ofB + ofC;
        Vector512<double> f = Quotient(ab, aa), g = Quotient(ac, aa);
        for (nuint at = 0; at < end; at += stride)
        {
            Vector512<double> a = Vector512.LoadUnsafe(ref matrix, at);
            Vector512<double> b = Vector512.LoadUnsafe(ref matrix, at + 8) - f * a, c = Vector512.LoadUnsafe(ref matrix, at + 16) - g * a;
            bb = Fma(b, b, bb);
            bc = Fma(b, c, bc);
        }

        Vector512<double> h = Quotient(bc, bb);
        for (nuint at = 0; at < end; at += stride)
        {
            Vector512<double> a = Vector512.LoadUnsafe(ref matrix, at);
            Vector512<double> b = Vector512.LoadUnsafe(ref matrix, at + 8) - f * a, c = Vector512.LoadUnsafe(ref matrix, at + 16) - g * a - h * b;
            cc = Fma(c, c, cc);
        }

        result.R11 = Vector512.Sqrt(aa);
        result.R12 = f * result.R11;
        result.R13 = g * result.R11;
        result.R22 = Vector512.Sqrt(bb);
        result.R23 = h * result.R22;
        result.R33 = Vector512.Sqrt(cc);
        result.Scale = Vector512<double>.One;
        return rows == 0
            || Vector512.GreaterThanAll(total, Vector512.Create(SmallestSquare)) && Vector512.LessThanAll(total, Vector512.Create(LargestSquare));
    }
}
