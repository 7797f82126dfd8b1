using System.Buffers;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace DeepSourceCheck.Core.Numerics;

// TriangularFactor.cs - R of the QR factorisation of several matrices of three columns at once.
//   Modified Gram-Schmidt in three read-only passes that recompute the reduced columns instead of storing them:
//     pass 1: a.a, a.b, a.c       pass 2: b' = b - (r12/r11) a, c' = c - (r13/r11) a; b'.b', b'.c'       pass 3: c'' = c' - (r23/r22) b'; c''.c''
//   Only R is kept. R of modified Gram-Schmidt is as backward stable as Householder's, so that re-orthogonalisation buys nothing
//   [Bjorck 1967]. A column that is zero gives a zero row.
//   Every sum is two, one over even and one over odd rows, so that none waits for the addition before it. The passes run up, down and up the rows:
//   what one of them read last is still near the processor when the next begins.

/// <summary>Upper triangular R, a matrix a lane: entries times <see cref="Scale"/>.</summary>
internal struct TriangularFactor<T>
    where T : struct, ILaneVector<T>
{
    /// <summary>Doubles a row takes: three columns of eight lanes.</summary>
    private const int Stride = 3 * 8;

    /// <summary>Squares are trusted between these; outside them the matrix is scaled by a power of two first.</summary>
    private const double SmallestSquare = 1e-200, LargestSquare = 1e200;

    /// <summary>First row.</summary>
    public T R11, R12, R13;

    /// <summary>Second row.</summary>
    public T R22, R23;

    /// <summary>Third row.</summary>
    public T R33;

    /// <summary>Power of two by which R must be multiplied to belong to the matrix.</summary>
    public T Scale;

    /// <summary>Factorises.</summary>
    /// <param name="matrix">[row][column][lane], 24 doubles a row, any unit.</param>
    /// <param name="rows">Number of rows; may be 0.</param>
    /// <param name="first">First of the lanes that are taken.</param>
    /// <exception cref="ArgumentException">The span is shorter than the rows ask for.</exception>
    public static TriangularFactor<T> Of(ReadOnlySpan<double> matrix, int rows, int first)
    {
        if (matrix.Length < rows * Stride)
        {
            throw new ArgumentException($"{rows} rows need {rows * Stride} values; {matrix.Length} were given.", nameof(matrix));
        }

        if (Factor(ref Unsafe.Add(ref MemoryMarshal.GetReference(matrix), first), rows, out TriangularFactor<T> result))
        {
            return result;
        }

        ref double lanes = ref Unsafe.Add(ref MemoryMarshal.GetReference(matrix), first);
        T largest = default;
        for (int at = 0; at < rows * Stride; at += 8)
        {
            largest = T.Max(largest, T.Abs(T.Load(ref lanes, (nuint)at)));
        }

        T scale = LaneVector.PowerOfTwo(largest), inverse = T.All(1) / scale;
        double[] copy = ArrayPool<double>.Shared.Rent(rows * Stride);
        for (int at = 0; at < rows * Stride; at += 8)
        {
            (T.Load(ref lanes, (nuint)at) * inverse).Store(ref MemoryMarshal.GetArrayDataReference(copy), (nuint)at);
        }

        Factor(ref MemoryMarshal.GetArrayDataReference(copy), rows, out result);
        ArrayPool<double>.Shared.Return(copy);
        result.Scale = scale;
        return result;
    }

    /// <summary>False where a lane's squares may have left the range of doubles.</summary>
    private static bool Factor(ref double matrix, int rows, out TriangularFactor<T> result)
    {
        int pairs = rows / 2;
        T aa = default, ab = default, ac = default, bb = default, cc = default;
        T aa1 = default, ab1 = default, ac1 = default, bb1 = default, cc1 = default;
        ref double row = ref matrix;
        for (int k = 0; k < pairs; k++)
        {
            T a = T.Load(ref row, 0), b = T.Load(ref row, 8), c = T.Load(ref row, 16);
            aa = T.MultiplyAdd(a, a, aa);
            ab = T.MultiplyAdd(a, b, ab);
            ac = T.MultiplyAdd(a, c, ac);
            bb = T.MultiplyAdd(b, b, bb);
            cc = T.MultiplyAdd(c, c, cc);
            a = T.Load(ref row, Stride);
            b = T.Load(ref row, Stride + 8);
            c = T.Load(ref row, Stride + 16);
            aa1 = T.MultiplyAdd(a, a, aa1);
            ab1 = T.MultiplyAdd(a, b, ab1);
            ac1 = T.MultiplyAdd(a, c, ac1);
            bb1 = T.MultiplyAdd(b, b, bb1);
            cc1 = T.MultiplyAdd(c, c, cc1);
            row = ref Unsafe.Add(ref row, 2 * Stride);
        }

        if (rows % 2 != 0)
        {
            T a = T.Load(ref row, 0), b = T.Load(ref row, 8), c = T.Load(ref row, 16);
            aa = T.MultiplyAdd(a, a, aa);
            ab = T.MultiplyAdd(a, b, ab);
            ac = T.MultiplyAdd(a, c, ac);
            bb = T.MultiplyAdd(b, b, bb);
            cc = T.MultiplyAdd(c, c, cc);
        }

        aa += aa1;
        T total = aa + (bb + bb1) + (cc + cc1);
        T f = LaneVector.Quotient(ab + ab1, aa), g = LaneVector.Quotient(ac + ac1, aa), minusF = -f, minusG = -g;
        bb = bb1 = default;
        T bc = default, bc1 = default;
        if (rows % 2 != 0)
        {
            T a = T.Load(ref row, 0), b = T.MultiplyAdd(minusF, a, T.Load(ref row, 8)), c = T.MultiplyAdd(minusG, a, T.Load(ref row, 16));
            bb = b * b;
            bc = b * c;
        }

        for (int k = 0; k < pairs; k++)
        {
            row = ref Unsafe.Subtract(ref row, 2 * Stride);
            T a = T.Load(ref row, Stride), b = T.MultiplyAdd(minusF, a, T.Load(ref row, Stride + 8)), c = T.MultiplyAdd(minusG, a, T.Load(ref row, Stride + 16));
            bb1 = T.MultiplyAdd(b, b, bb1);
            bc1 = T.MultiplyAdd(b, c, bc1);
            a = T.Load(ref row, 0);
            b = T.MultiplyAdd(minusF, a, T.Load(ref row, 8));
            c = T.MultiplyAdd(minusG, a, T.Load(ref row, 16));
            bb = T.MultiplyAdd(b, b, bb);
            bc = T.MultiplyAdd(b, c, bc);
        }

        bb += bb1;
        T h = LaneVector.Quotient(bc + bc1, bb), minusH = -h;
        cc = cc1 = default;
        for (int k = 0; k < pairs; k++)
        {
            T a = T.Load(ref row, 0), b = T.MultiplyAdd(minusF, a, T.Load(ref row, 8)), c = T.MultiplyAdd(minusG, a, T.Load(ref row, 16));
            c = T.MultiplyAdd(minusH, b, c);
            cc = T.MultiplyAdd(c, c, cc);
            a = T.Load(ref row, Stride);
            b = T.MultiplyAdd(minusF, a, T.Load(ref row, Stride + 8));
            c = T.MultiplyAdd(minusG, a, T.Load(ref row, Stride + 16));
            c = T.MultiplyAdd(minusH, b, c);
            cc1 = T.MultiplyAdd(c, c, cc1);
            row = ref Unsafe.Add(ref row, 2 * Stride);
        }

        if (rows % 2 != 0)
        {
            T a = T.Load(ref row, 0), b = T.MultiplyAdd(minusF, a, T.Load(ref row, 8)), c = T.MultiplyAdd(minusG, a, T.Load(ref row, 16));
            c = T.MultiplyAdd(minusH, b, c);
            cc = T.MultiplyAdd(c, c, cc);
        }

        result.R11 = T.Sqrt(aa);
        result.R12 = f * result.R11;
        result.R13 = g * result.R11;
        result.R22 = T.Sqrt(bb);
        result.R23 = h * result.R22;
        result.R33 = T.Sqrt(cc + cc1);
        result.Scale = T.All(1);
        // A total that is not a number passes: no scale would mend it.
        return rows == 0 || !(T.Any(T.Greater(T.All(SmallestSquare), total)) || T.Any(T.Greater(total, T.All(LargestSquare))));
    }
}
