using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;
using System.Runtime.Intrinsics.X86;

using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Detection;

/// <summary>One direction for each of eight dipoles.</summary>
public readonly record struct LaneDirection(Vector512<double> X, Vector512<double> Y, Vector512<double> Z)
{
    /// <summary>The same direction for all eight.</summary>
    public static LaneDirection Same(Vec3 u) => new(Vector512.Create(u.X), Vector512.Create(u.Y), Vector512.Create(u.Z));

    /// <summary>cos a + sin b.</summary>
    public static LaneDirection Turned(LaneDirection a, LaneDirection b, double cos, double sin)
    {
        Vector512<double> c = Vector512.Create(cos), s = Vector512.Create(sin);
        return new(c * a.X + s * b.X, c * a.Y + s * b.Y, c * a.Z + s * b.Z);
    }
}

/// <summary>Sums and maxima over rows of leadfields of eight dipoles, layout [row][axis][lane].</summary>
/// <remarks>Native maxima: the framework's own carry NaN, which costs twice as much and is not needed, since lanes of undefined directions are left out later.</remarks>
public static class Lanes
{
    /// <summary>Control of the range instruction: the larger magnitude, without its sign.</summary>
    private const byte LargestMagnitude = 0b1011;

    /// <summary>Views lanes as vectors of eight.</summary>
    public static ReadOnlySpan<Vector512<double>> View(ReadOnlySpan<double> lanes) => MemoryMarshal.Cast<double, Vector512<double>>(lanes);

    /// <summary>sum over rows of (row . u)^2: exact for weak directions, where the Gram matrix is not.</summary>
    public static Vector512<double> ProjectedPower(ReadOnlySpan<double> rows, int count, in LaneDirection u)
    {
        ReadOnlySpan<Vector512<double>> x = View(rows);
        Vector512<double> even = default, odd = default;
        int k = 0;
        for (; k + 1 < count; k += 2)
        {
            Vector512<double> a = Fma(x[3 * k], u.X, Fma(x[3 * k + 1], u.Y, x[3 * k + 2] * u.Z));
            Vector512<double> b = Fma(x[3 * k + 3], u.X, Fma(x[3 * k + 4], u.Y, x[3 * k + 5] * u.Z));
            even = Fma(a, a, even);
            odd = Fma(b, b, odd);
        }

        if (k < count)
        {
            Vector512<double> a = Fma(x[3 * k], u.X, Fma(x[3 * k + 1], u.Y, x[3 * k + 2] * u.Z));
            even = Fma(a, a, even);
        }

        return even + odd;
    }

    /// <summary>The six sums xx, yy, zz, xy, xz, yz over rows.</summary>
    public static void Gram(ReadOnlySpan<double> rows, int count, Span<Vector512<double>> gram)
    {
        ReadOnlySpan<Vector512<double>> v = View(rows);
        Vector512<double> xx = default, yy = default, zz = default, xy = default, xz = default, yz = default;
        for (int k = 0; k < count; k++)
        {
            Vector512<double> x = v[3 * k], y = v[3 * k + 1], z = v[3 * k + 2];
            xx = Fma(x, x, xx);
            yy = Fma(y, y, yy);
            zz = Fma(z, z, zz);
            xy = Fma(x, y, xy);
            xz = Fma(x, z, xz);
            yz = Fma(y, z, yz);
        }

        (gram[0], gram[1], gram[2], gram[3], gram[4], gram[5]) = (xx, yy, zz, xy, xz, yz);
    }

    /// <summary>u' G u for the six sums of <see cref="Gram"/>.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public static Vector512<double> Quadratic(ReadOnlySpan<Vector512<double>> gram, in LaneDirection u)
    {
        Vector512<double> diagonal = gram[0] * u.X * u.X + gram[1] * u.Y * u.Y + gram[2] * u.Z * u.Z;
        Vector512<double> cross = gram[3] * u.X * u.Y + gram[4] * u.X * u.Z + gram[5] * u.Y * u.Z;
        return diagonal + (cross + cross);
    }

    /// <summary>Largest (row . u)^2 and the row that has it.</summary>
    /// <remarks>Four rows at a time, each with a running maximum of its own: one maximum alone would wait for every comparison in turn.</remarks>
    /// <param name="rows">[row][axis][lane].</param>
    /// <param name="count">Number of rows, at least 1.</param>
    /// <param name="u">Direction of each lane.</param>
    /// <param name="index">Row of the largest value, as a double; the first among equals.</param>
    public static Vector512<double> Largest(ReadOnlySpan<double> rows, int count, in LaneDirection u, out Vector512<double> index)
    {
        ref Vector512<double> x = ref MemoryMarshal.GetReference(View(rows));
        Vector512<double> ux = u.X, uy = u.Y, uz = u.Z, none = Vector512.Create(-1.0), four = Vector512.Create(4.0);
        Vector512<double> best0 = none, best1 = none, best2 = none, best3 = none, at0 = default, at1 = default, at2 = default, at3 = default;
        Vector512<double> number = default;                     // rows k, k + 1, k + 2, k + 3 share it: their offsets are added at the end
        int k = 0;
        for (; k + 3 < count; k += 4)
        {
            ref Vector512<double> row = ref Unsafe.Add(ref x, 3 * k);
            Vector512<double> a = Square(ref row, ux, uy, uz), b = Square(ref Unsafe.Add(ref row, 3), ux, uy, uz);
            Vector512<double> c = Square(ref Unsafe.Add(ref row, 6), ux, uy, uz), d = Square(ref Unsafe.Add(ref row, 9), ux, uy, uz);
            at0 = Vector512.ConditionalSelect(Vector512.GreaterThan(a, best0), number, at0);
            at1 = Vector512.ConditionalSelect(Vector512.GreaterThan(b, best1), number, at1);
            at2 = Vector512.ConditionalSelect(Vector512.GreaterThan(c, best2), number, at2);
            at3 = Vector512.ConditionalSelect(Vector512.GreaterThan(d, best3), number, at3);
            best0 = Vector512.MaxNative(best0, a);
            best1 = Vector512.MaxNative(best1, b);
            best2 = Vector512.MaxNative(best2, c);
            best3 = Vector512.MaxNative(best3, d);
            number += four;
        }

        for (; k < count; k++)
        {
            Vector512<double> a = Square(ref Unsafe.Add(ref x, 3 * k), ux, uy, uz);
            at0 = Vector512.ConditionalSelect(Vector512.GreaterThan(a, best0), Vector512.Create((double)k), at0);
            best0 = Vector512.MaxNative(best0, a);
        }

        (best0, at0) = Larger(best0, at0, best1, at1 + Vector512.Create(1.0));
        (best2, at2) = Larger(best2, at2 + Vector512.Create(2.0), best3, at3 + Vector512.Create(3.0));
        (best0, index) = Larger(best0, at0, best2, at2);
        return best0;
    }

    /// <summary>Sum over directions of the largest (row . u)^2: what <see cref="Largest"/> gives, without the row, four directions a pass.</summary>
    /// <param name="rows">[row][axis][lane].</param>
    /// <param name="count">Number of rows, at least 1.</param>
    /// <param name="set">Directions of each lane.</param>
    public static Vector512<double> SumOfLargest(ReadOnlySpan<double> rows, int count, ReadOnlySpan<LaneDirection> set)
    {
        ref Vector512<double> x = ref MemoryMarshal.GetReference(View(rows));
        Vector512<double> sum = default;
        int at = 0;
        for (; at + 3 < set.Length; at += 4)
        {
            Vector512<double> ax = set[at].X, ay = set[at].Y, az = set[at].Z, bx = set[at + 1].X, by = set[at + 1].Y, bz = set[at + 1].Z;
            Vector512<double> cx = set[at + 2].X, cy = set[at + 2].Y, cz = set[at + 2].Z, dx = set[at + 3].X, dy = set[at + 3].Y, dz = set[at + 3].Z;
            Vector512<double> a = default, b = default, c = default, d = default;
            for (int k = 0; k < count; k++)
            {
                ref Vector512<double> row = ref Unsafe.Add(ref x, 3 * k);
                Vector512<double> x0 = row, x1 = Unsafe.Add(ref row, 1), x2 = Unsafe.Add(ref row, 2);
                a = Further(a, x0, x1, x2, ax, ay, az);
                b = Further(b, x0, x1, x2, bx, by, bz);
                c = Further(c, x0, x1, x2, cx, cy, cz);
                d = Further(d, x0, x1, x2, dx, dy, dz);
            }

            sum += a * a + b * b + c * c + d * d;
        }

        for (; at < set.Length; at++)
        {
            sum += Largest(rows, count, set[at], out _);
        }

        return sum;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Fma(Vector512<double> a, Vector512<double> b, Vector512<double> c) => Vector512.MultiplyAddEstimate(a, b, c);

    // max(best, |row . u|)
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Further(
        Vector512<double> best, Vector512<double> x0, Vector512<double> x1, Vector512<double> x2, Vector512<double> ux, Vector512<double> uy, Vector512<double> uz)
    {
        Vector512<double> a = Fma(x0, ux, Fma(x1, uy, x2 * uz));
        return Avx512DQ.IsSupported ? Avx512DQ.Range(best, a, LargestMagnitude) : Vector512.MaxNative(best, Vector512.Abs(a));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Projected(ref Vector512<double> row, Vector512<double> ux, Vector512<double> uy, Vector512<double> uz) =>
        Fma(row, ux, Fma(Unsafe.Add(ref row, 1), uy, Unsafe.Add(ref row, 2) * uz));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Square(ref Vector512<double> row, Vector512<double> ux, Vector512<double> uy, Vector512<double> uz)
    {
        Vector512<double> a = Projected(ref row, ux, uy, uz);
        return a * a;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<double> Norm(ref Vector512<double> row)
    {
        Vector512<double> x = row, y = Unsafe.Add(ref row, 1), z = Unsafe.Add(ref row, 2);
        return Fma(x, x, Fma(y, y, z * z));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static (Vector512<double> Value, Vector512<double> Index) Larger(
        Vector512<double> a, Vector512<double> atA, Vector512<double> b, Vector512<double> atB)
    {
        Vector512<double> second = Vector512.GreaterThan(b, a) | (Vector512.Equals(a, b) & Vector512.LessThan(atB, atA));
        return (Vector512.ConditionalSelect(second, b, a), Vector512.ConditionalSelect(second, atB, atA));
    }

    /// <summary>What <see cref="ProjectedPower"/> and <see cref="Largest"/> give, in one pass over the rows.</summary>
    /// <param name="rows">[row][axis][lane].</param>
    /// <param name="count">Number of rows, at least 1.</param>
    /// <param name="u">Direction of each lane.</param>
    /// <param name="largest">Largest (row . u)^2.</param>
    /// <param name="index">Its row, as a double; the first among equals.</param>
    public static Vector512<double> PowerAndLargest(ReadOnlySpan<double> rows, int count, in LaneDirection u, out Vector512<double> largest, out Vector512<double> index)
    {
        ref Vector512<double> x = ref MemoryMarshal.GetReference(View(rows));
        Vector512<double> ux = u.X, uy = u.Y, uz = u.Z, none = Vector512.Create(-1.0), two = Vector512.Create(2.0);
        Vector512<double> best0 = none, best1 = none, at0 = default, at1 = default, number = default, even = default, odd = default;
        int k = 0;
        for (; k + 1 < count; k += 2)
        {
            ref Vector512<double> row = ref Unsafe.Add(ref x, 3 * k);
            Vector512<double> a = Projected(ref row, ux, uy, uz), b = Projected(ref Unsafe.Add(ref row, 3), ux, uy, uz);
            even = Fma(a, a, even);
            odd = Fma(b, b, odd);
            a *= a;
            b *= b;
            at0 = Vector512.ConditionalSelect(Vector512.GreaterThan(a, best0), number, at0);
            at1 = Vector512.ConditionalSelect(Vector512.GreaterThan(b, best1), number, at1);
            best0 = Vector512.MaxNative(best0, a);
            best1 = Vector512.MaxNative(best1, b);
            number += two;
        }

        if (k < count)
        {
            Vector512<double> a = Projected(ref Unsafe.Add(ref x, 3 * k), ux, uy, uz);
            even = Fma(a, a, even);
            a *= a;
            at0 = Vector512.ConditionalSelect(Vector512.GreaterThan(a, best0), Vector512.Create((double)k), at0);
            best0 = Vector512.MaxNative(best0, a);
        }

        (largest, index) = Larger(best0, at0, best1, at1 + Vector512<double>.One);
        return even + odd;
    }

    /// <summary>Largest |row|^2 and the row that has it: the best channel over all directions.</summary>
    /// <param name="rows">[row][axis][lane].</param>
    /// <param name="count">Number of rows, at least 1.</param>
    /// <param name="powers">[row][lane]: receives every |row|^2; empty where they are not wanted.</param>
    /// <param name="index">Row of the largest value, as a double; the first among equals.</param>
    public static Vector512<double> LargestNorm(ReadOnlySpan<double> rows, int count, Span<double> powers, out Vector512<double> index)
    {
        ref Vector512<double> x = ref MemoryMarshal.GetReference(View(rows));
        Span<Vector512<double>> norms = MemoryMarshal.Cast<double, Vector512<double>>(powers);
        Vector512<double> best0 = Vector512.Create(-1.0), best1 = best0, at0 = default, at1 = default, number = default, two = Vector512.Create(2.0);
        int k = 0;
        for (; k + 1 < count; k += 2)
        {
            ref Vector512<double> row = ref Unsafe.Add(ref x, 3 * k);
            Vector512<double> a = Norm(ref row), b = Norm(ref Unsafe.Add(ref row, 3));
            at0 = Vector512.ConditionalSelect(Vector512.GreaterThan(a, best0), number, at0);
            at1 = Vector512.ConditionalSelect(Vector512.GreaterThan(b, best1), number, at1);
            best0 = Vector512.MaxNative(best0, a);
            best1 = Vector512.MaxNative(best1, b);
            number += two;
            if (k + 1 < norms.Length)
            {
                (norms[k], norms[k + 1]) = (a, b);
            }
        }

        if (k < count)
        {
            Vector512<double> a = Norm(ref Unsafe.Add(ref x, 3 * k));
            at0 = Vector512.ConditionalSelect(Vector512.GreaterThan(a, best0), Vector512.Create((double)k), at0);
            best0 = Vector512.MaxNative(best0, a);
            if (k < norms.Length)
            {
                norms[k] = a;
            }
        }

        (best0, index) = Larger(best0, at0, best1, at1 + Vector512<double>.One);
        return best0;
    }
}
