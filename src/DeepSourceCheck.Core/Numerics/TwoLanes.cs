using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;
using System.Runtime.Intrinsics.X86;

namespace DeepSourceCheck.Core.Numerics;

/// <summary>Two of a block's eight dipoles in a register of 128 bits; lane by lane where the processor has none.</summary>
internal readonly struct TwoLanes(Vector128<double> value) : ILaneVector<TwoLanes>
{
    private readonly Vector128<double> _value = value;

    /// <inheritdoc/>
    public static int Count => 2;

    /// <inheritdoc/>
    public static bool ManyRegisters => !X86Base.IsSupported || Avx512F.VL.IsSupported;

    /// <summary>The register.</summary>
    public Vector128<double> Value => _value;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes operator +(TwoLanes a, TwoLanes b) => new(a._value + b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes operator -(TwoLanes a, TwoLanes b) => new(a._value - b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes operator -(TwoLanes a) => new(-a._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes operator *(TwoLanes a, TwoLanes b) => new(a._value * b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes operator /(TwoLanes a, TwoLanes b) => new(a._value / b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes operator &(TwoLanes a, TwoLanes b) => new(a._value & b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes operator |(TwoLanes a, TwoLanes b) => new(a._value | b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes operator ^(TwoLanes a, TwoLanes b) => new(a._value ^ b._value);

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes All(double value) => new(Vector128.Create(value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes Load(ref double from, nuint at) => new(Vector128.LoadUnsafe(ref from, at));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes MultiplyAdd(TwoLanes a, TwoLanes b, TwoLanes c) => new(Vector128.MultiplyAddEstimate(a._value, b._value, c._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes FusedMultiplyAdd(TwoLanes a, TwoLanes b, TwoLanes c) => new(Vector128.FusedMultiplyAdd(a._value, b._value, c._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes Sqrt(TwoLanes a) => new(Vector128.Sqrt(a._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes Abs(TwoLanes a) => new(Vector128.Abs(a._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes Max(TwoLanes a, TwoLanes b) => new(Vector128.Max(a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes Greater(TwoLanes a, TwoLanes b) => new(Vector128.GreaterThan(a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes Same(TwoLanes a, TwoLanes b) => new(Vector128.Equals(a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static TwoLanes Select(TwoLanes mask, TwoLanes a, TwoLanes b) => new(Vector128.ConditionalSelect(mask._value, a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static bool Any(TwoLanes mask) => !Vector128.EqualsAll(mask._value.AsUInt64(), Vector128<ulong>.Zero);

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Store(ref double to, nuint at) => _value.StoreUnsafe(ref to, at);
}
