using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Directions;

// DirectionSplit.cs - the directions that an array sees most and least.
//   Whitened leadfield L (m x 3) = U S V'; v3, the weakest, is the quasi-radial direction, v1 and v2 span the tangential plane.
//   QR to R, then one-sided Jacobi on R: never L'L, which loses singular values below 1e-8 s1.
//   Signs: v1's largest component positive; v3 away from the head's centre, or, where the head defines no outside, its largest component positive;
//   v2 = v3 x v1.
// Source: [Huang et al. 2007].

/// <summary>Splits the directions at each dipole by what an array sees of them.</summary>
public static class DirectionSplit
{
    /// <summary>Neighbouring singular values closer than this share of the largest leave their directions arbitrary in their plane.</summary>
    public const double DegenerateGap = 1e-8;

    /// <summary>Distance from 1 to the next double.</summary>
    private const double Epsilon = 2.220446049250313e-16;

    /// <summary>Splits one block.</summary>
    /// <param name="whitened">MEG rows divided by their noise standard deviations [1/(A m)], [row][axis][lane].</param>
    /// <param name="rows">Number of rows m; 0 gives undefined splits.</param>
    /// <param name="block">The block that the rows belong to, for its positions.</param>
    /// <param name="head">Head, for its centre and outside.</param>
    /// <param name="result">Overwritten in all eight lanes.</param>
    public static void Compute(ReadOnlySpan<double> whitened, int rows, LeadfieldBlock block, IHead head, SplitBlock result)
    {
        Span<double> outward = stackalloc double[3 * LeadfieldBlock.Lanes];
        outward.Clear();
        int undefined = 0;
        for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
        {
            Vec3 position = block.Positions[lane];
            if (head.Outward(position) is { } normal)
            {
                (outward[lane], outward[LeadfieldBlock.Lanes + lane], outward[2 * LeadfieldBlock.Lanes + lane]) = normal;
            }
            else if (head.IsSymmetryCentre(position))
            {
                undefined |= 1 << lane;
            }
        }

        switch (LaneWidth.Lanes)
        {
            case 8:
                Compute<EightLanes>(whitened, rows, outward, result);
                break;
            case 4:
                Compute<FourLanes>(whitened, rows, outward, result);
                break;
            default:
                Compute<TwoLanes>(whitened, rows, outward, result);
                break;
        }

        for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
        {
            double s1 = result.S(0, lane), s2 = result.S(1, lane), s3 = result.S(2, lane);
            if (s1 > 0 && (undefined >> lane & 1) == 0)
            {
                result.States[lane] = Math.Min(s1 - s2, s2 - s3) < DegenerateGap * s1 ? SplitState.Degenerate : SplitState.Ok;
                continue;
            }

            result.States[lane] = SplitState.Undefined;
            Vec3 none = new(double.NaN, double.NaN, double.NaN);
            result.Set(0, lane, none);
            result.Set(1, lane, none);
            result.Set(2, lane, none);
        }
    }

    /// <summary>Singular values, silent ones exactly 0, and directions with their signs, as if all lanes were defined.</summary>
    /// <param name="whitened">As above.</param>
    /// <param name="rows">As above.</param>
    /// <param name="outward">Outward unit vectors, [axis][lane]; 0 where there is none.</param>
    /// <param name="result">Overwritten but for its states.</param>
    internal static void Compute<T>(ReadOnlySpan<double> whitened, int rows, ReadOnlySpan<double> outward, SplitBlock result)
        where T : struct, ILaneVector<T>
    {
        ref double singular = ref MemoryMarshal.GetArrayDataReference(result.SingularValues);
        ref double v = ref MemoryMarshal.GetArrayDataReference(result.Directions);
        ref double normal = ref MemoryMarshal.GetReference(outward);
        for (int first = 0; first < LeadfieldBlock.Lanes; first += T.Count)
        {
            TriangularFactor<T> r = TriangularFactor<T>.Of(whitened, rows, first);
            SingularTriple<T>.Of(r, result.SingularValues, result.Directions, first);
            nuint at = (nuint)first;
            T silence = T.All(Math.Max(rows, 3) * Epsilon) * T.Load(ref singular, at), s2 = T.Load(ref singular, at + 8), s3 = T.Load(ref singular, at + 16);
            T.Select(T.Greater(silence, s2), default, s2).Store(ref singular, at + 8);
            T.Select(T.Greater(silence, s3), default, s3).Store(ref singular, at + 16);

            T x1 = T.Load(ref v, at), y1 = T.Load(ref v, at + 8), z1 = T.Load(ref v, at + 16), sign = LargestComponent(x1, y1, z1);
            (x1, y1, z1) = (LaneVector.TurnedBy(x1, sign), LaneVector.TurnedBy(y1, sign), LaneVector.TurnedBy(z1, sign));
            T x3 = T.Load(ref v, at + 48), y3 = T.Load(ref v, at + 56), z3 = T.Load(ref v, at + 64);
            T away = x3 * T.Load(ref normal, at) + y3 * T.Load(ref normal, at + 8) + z3 * T.Load(ref normal, at + 16);
            sign = T.Select(T.Same(away, default), LargestComponent(x3, y3, z3), away);
            (x3, y3, z3) = (LaneVector.TurnedBy(x3, sign), LaneVector.TurnedBy(y3, sign), LaneVector.TurnedBy(z3, sign));
            x1.Store(ref v, at);
            y1.Store(ref v, at + 8);
            z1.Store(ref v, at + 16);
            (y3 * z1 - z3 * y1).Store(ref v, at + 24);          // v2 = v3 x v1
            (z3 * x1 - x3 * z1).Store(ref v, at + 32);
            (x3 * y1 - y3 * x1).Store(ref v, at + 40);
            x3.Store(ref v, at + 48);
            y3.Store(ref v, at + 56);
            z3.Store(ref v, at + 64);
        }
    }

    /// <summary>The component of largest size, the first among equals.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T LargestComponent<T>(T x, T y, T z)
        where T : struct, ILaneVector<T>
    {
        T size = T.Abs(x), second = T.Abs(y), third = T.Abs(z), yLarger = T.Greater(second, size);
        T largest = T.Select(yLarger, y, x);
        return T.Select(T.Greater(third, T.Select(yLarger, second, size)), z, largest);
    }
}
