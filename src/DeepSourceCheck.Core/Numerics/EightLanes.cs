using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace DeepSourceCheck.Core.Numerics;

/// <summary>All eight dipoles of a block in a register of 512 bits.</summary>
internal readonly struct EightLanes(Vector512<double> value) : ILaneVector<EightLanes>
{
    private readonly Vector512<double> _value = value;

    /// <inheritdoc/>
    public static int Count => 8;

    /// <inheritdoc/>
    public static bool ManyRegisters => true;

    /// <summary>The register.</summary>
    public Vector512<double> Value => _value;

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes operator +(EightLanes a, EightLanes b) => new(a._value + b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes operator -(EightLanes a, EightLanes b) => new(a._value - b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes operator -(EightLanes a) => new(-a._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes operator *(EightLanes a, EightLanes b) => new(a._value * b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes operator /(EightLanes a, EightLanes b) => new(a._value / b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes operator &(EightLanes a, EightLanes b) => new(a._value & b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes operator |(EightLanes a, EightLanes b) => new(a._value | b._value);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes operator ^(EightLanes a, EightLanes b) => new(a._value ^ b._value);

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes All(double value) => new(Vector512.Create(value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes Load(ref double from, nuint at) => new(Vector512.LoadUnsafe(ref from, at));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes MultiplyAdd(EightLanes a, EightLanes b, EightLanes c) => new(Vector512.MultiplyAddEstimate(a._value, b._value, c._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes FusedMultiplyAdd(EightLanes a, EightLanes b, EightLanes c) => new(Vector512.FusedMultiplyAdd(a._value, b._value, c._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes Sqrt(EightLanes a) => new(Vector512.Sqrt(a._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes Abs(EightLanes a) => new(Vector512.Abs(a._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes Max(EightLanes a, EightLanes b) => new(Vector512.Max(a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes Greater(EightLanes a, EightLanes b) => new(Vector512.GreaterThan(a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes Same(EightLanes a, EightLanes b) => new(Vector512.Equals(a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static EightLanes Select(EightLanes mask, EightLanes a, EightLanes b) => new(Vector512.ConditionalSelect(mask._value, a._value, b._value));

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static bool Any(EightLanes mask) => !Vector512.EqualsAll(mask._value.AsUInt64(), Vector512<ulong>.Zero);

    /// <inheritdoc/>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Store(ref double to, nuint at) => _value.StoreUnsafe(ref to, at);
}
