using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace DeepSourceCheck.Core.Numerics;

/// <summary>Some of the eight dipoles of a block in one register: what a kernel is written in, once for every width.</summary>
/// <remarks>
/// Blocks hold eight values side by side. A kernel over <typeparamref name="TSelf"/> takes <see cref="Count"/> of them from a first lane on and runs again for the next ones: once where
/// registers are 512 bits wide, twice at 256, four times at 128. The compiler makes a kernel of its own for each width, with the same operations on a lane in the same order, so that
/// widths that multiply and add in one rounding give the same bits. Vectors that are wider than the registers would do too, but live in memory as pairs: two to fifteen times slower.
/// Masks have all bits set in the lanes that are meant, none in the others.
/// </remarks>
internal interface ILaneVector<TSelf>
    where TSelf : struct, ILaneVector<TSelf>
{
    /// <summary>Lanes in a register.</summary>
    static abstract int Count { get; }

    /// <summary>True where a loop may keep more than some fourteen values in registers: sums in flight are chosen by it.</summary>
    static abstract bool ManyRegisters { get; }

    /// <summary>The same value in every lane.</summary>
    static abstract TSelf All(double value);

    /// <summary>Loads <see cref="Count"/> values.</summary>
    /// <param name="from">Start of an array of lanes.</param>
    /// <param name="at">Values to skip.</param>
    static abstract TSelf Load(ref double from, nuint at);

    /// <summary>Stores <see cref="Count"/> values.</summary>
    /// <param name="to">Start of an array of lanes.</param>
    /// <param name="at">Values to skip.</param>
    void Store(ref double to, nuint at);

    static abstract TSelf operator +(TSelf a, TSelf b);

    static abstract TSelf operator -(TSelf a, TSelf b);

    static abstract TSelf operator -(TSelf a);

    static abstract TSelf operator *(TSelf a, TSelf b);

    static abstract TSelf operator /(TSelf a, TSelf b);

    /// <summary>Bits of both: a mask leaves the lanes that it means and zeroes the others.</summary>
    static abstract TSelf operator &(TSelf a, TSelf b);

    static abstract TSelf operator |(TSelf a, TSelf b);

    static abstract TSelf operator ^(TSelf a, TSelf b);

    /// <summary>a b + c, in one rounding where the processor can, else in two.</summary>
    static abstract TSelf MultiplyAdd(TSelf a, TSelf b, TSelf c);

    /// <summary>a b + c in one rounding, whatever it costs.</summary>
    static abstract TSelf FusedMultiplyAdd(TSelf a, TSelf b, TSelf c);

    static abstract TSelf Sqrt(TSelf a);

    static abstract TSelf Abs(TSelf a);

    static abstract TSelf Max(TSelf a, TSelf b);

    /// <summary>Mask of lanes with a above b.</summary>
    static abstract TSelf Greater(TSelf a, TSelf b);

    /// <summary>Mask of equal lanes.</summary>
    static abstract TSelf Same(TSelf a, TSelf b);

    /// <summary>a where the mask is set, b elsewhere.</summary>
    static abstract TSelf Select(TSelf mask, TSelf a, TSelf b);

    /// <summary>True where the mask is set in some lane.</summary>
    static abstract bool Any(TSelf mask);
}

/// <summary>The width that kernels run in on this processor.</summary>
internal static class LaneWidth
{
    /// <summary>8, 4 or 2 lanes: <see cref="EightLanes"/>, <see cref="FourLanes"/> or <see cref="TwoLanes"/>. A constant once compiled.</summary>
    public static int Lanes => Vector512.IsHardwareAccelerated ? 8 : Vector256.IsHardwareAccelerated ? 4 : 2;
}

/// <summary>What every width has in common.</summary>
internal static class LaneVector
{
    private const double SmallestNormal = 2.2250738585072014e-308;

    /// <summary>a with its sign turned where b is negative.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T TurnedBy<T>(T a, T b)
        where T : struct, ILaneVector<T> => a ^ (b & T.All(-0.0));

    /// <summary>Quotient, 0 where the divisor is 0.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T Quotient<T>(T a, T b)
        where T : struct, ILaneVector<T> => T.Select(T.Same(b, default), default, a / b);

    /// <summary>The power of two at or below each value; 1 for 0, 2^-1022 for subnormal numbers, the value itself where it is not finite.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static T PowerOfTwo<T>(T value)
        where T : struct, ILaneVector<T>
    {
        T power = T.Max(value & T.All(double.PositiveInfinity), T.All(SmallestNormal));     // infinity: all bits of the exponent
        return T.Select(T.Same(value, default), T.All(1), power);
    }
}
