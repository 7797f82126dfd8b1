using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>The sixteen lanes of a node in one vector; on processors with narrower vectors the runtime splits it into halves or quarters.</summary>
internal static unsafe class LaneMath
{
    public const int Lanes = ILoadBlocks.Lanes;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Vector512<float> Load(float* at) => Vector512.Load(at);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Vector512<float> All(float* value) => Vector512.Create(*value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Vector512<float> Fma(Vector512<float> a, Vector512<float> b, Vector512<float> c) => Vector512.MultiplyAddEstimate(a, b, c);

    /// <summary>sum + c0 v(x-1) + c1 v(x) + c2 v(x+1).</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Vector512<float> Three(float* c, float* v, Vector512<float> sum) =>
        Fma(All(c), Load(v - Lanes), Fma(All(c + 1), Load(v), Fma(All(c + 2), Load(v + Lanes), sum)));

    /// <summary>sum + c0 (p - v(x-1)) + c1 (p - v(x)) + c2 (p - v(x+1)).</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Vector512<float> ThreeDifferences(float* c, float* v, Vector512<float> p, Vector512<float> sum) =>
        Fma(All(c), p - Load(v - Lanes), Fma(All(c + 1), p - Load(v), Fma(All(c + 2), p - Load(v + Lanes), sum)));
}

/// <summary>Sixteen sums in double precision.</summary>
internal struct LaneSums
{
    public Vector512<double> Low, High;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Add(Vector512<float> values)
    {
        (Vector512<double> low, Vector512<double> high) = Vector512.Widen(values);
        Low += low;
        High += high;
    }

    public readonly void CopyTo(Span<double> sums)
    {
        Low.CopyTo(sums);
        High.CopyTo(sums[8..]);
    }
}
