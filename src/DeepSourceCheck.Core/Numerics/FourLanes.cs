using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;
using System.Runtime.Intrinsics.X86;

namespace DeepSourceCheck.Core.Numerics;

/// <summary>Four of a block's eight dipoles in a register of 256 bits.</summary>
internal readonly struct FourLanes(Vector256<double> value) : ILaneVector<FourLanes>
{
    private readonly Vector256<double> _value = value;

    /// <inheritdoc/>
    public static int Count => 4;

    /// <inheritdoc/>
    public static bool ManyRegisters => Avx512F.VL.IsSupported;

    /// <summary>The register.</summary>
    public Vector256<double> Value => _value;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes operator +(FourLanes a, FourLanes b) => new(a._value + b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes operator -(FourLanes a, FourLanes b) => new(a._value - b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes operator -(FourLanes a) => new(-a._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes operator *(FourLanes a, FourLanes b) => new(a._value * b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes operator /(FourLanes a, FourLanes b) => new(a._value / b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes operator &(FourLanes a, FourLanes b) => new(a._value & b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes operator |(FourLanes a, FourLanes b) => new(a._value | b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes operator ^(FourLanes a, FourLanes b) => new(a._value ^ b._value);

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes All(double value) => new(Vector256.Create(value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes Load(ref double from, nuint at) => new(Vector256.LoadUnsafe(ref from, at));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes MultiplyAdd(FourLanes a, FourLanes b, FourLanes c) => new(Vector256.MultiplyAddEstimate(a._value, b._value, c._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes FusedMultiplyAdd(FourLanes a, FourLanes b, FourLanes c) => new(Vector256.FusedMultiplyAdd(a._value, b._value, c._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes Sqrt(FourLanes a) => new(Vector256.Sqrt(a._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes Abs(FourLanes a) => new(Vector256.Abs(a._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes Max(FourLanes a, FourLanes b) => new(Vector256.Max(a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes Greater(FourLanes a, FourLanes b) => new(Vector256.GreaterThan(a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes Same(FourLanes a, FourLanes b) => new(Vector256.Equals(a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static FourLanes Select(FourLanes mask, FourLanes a, FourLanes b) => new(Vector256.ConditionalSelect(mask._value, a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static bool Any(FourLanes mask) => !Vector256.EqualsAll(mask._value.AsUInt64(), Vector256<ulong>.Zero);

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Store(ref double to, nuint at) => _value.StoreUnsafe(ref to, at);
}
