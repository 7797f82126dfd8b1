using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

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

/// <summary>Sums over rows of leadfields of eight dipoles, layout [row][axis][lane].</summary>
public static class Lanes
{
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
            Vector512<double> a = x[3 * k] * u.X + x[3 * k + 1] * u.Y + x[3 * k + 2] * u.Z;
            Vector512<double> b = x[3 * k + 3] * u.X + x[3 * k + 4] * u.Y + x[3 * k + 5] * u.Z;
            even += a * a;
            odd += b * b;
        }

        if (k < count)
        {
            Vector512<double> a = x[3 * k] * u.X + x[3 * k + 1] * u.Y + x[3 * k + 2] * u.Z;
            even += a * a;
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
            xx += x * x;
            yy += y * y;
            zz += z * z;
            xy += x * y;
            xz += x * z;
            yz += y * z;
        }

        (gram[0], gram[1], gram[2], gram[3], gram[4], gram[5]) = (xx, yy, zz, xy, xz, yz);
    }

    /// <summary>u' G u for the six sums of <see cref="Gram"/>.</summary>
    public static Vector512<double> Quadratic(ReadOnlySpan<Vector512<double>> gram, in LaneDirection u)
    {
        Vector512<double> diagonal = gram[0] * u.X * u.X + gram[1] * u.Y * u.Y + gram[2] * u.Z * u.Z;
        Vector512<double> cross = gram[3] * u.X * u.Y + gram[4] * u.X * u.Z + gram[5] * u.Y * u.Z;
        return diagonal + (cross + cross);
    }

    /// <summary>Largest (row . u)^2 and the row that has it.</summary>
    /// <param name="rows">[row][axis][lane].</param>
    /// <param name="count">Number of rows, at least 1.</param>
    /// <param name="u">Direction of each lane.</param>
    /// <param name="index">Row of the largest value, as a double; the first among equals.</param>
    public static Vector512<double> Largest(ReadOnlySpan<double> rows, int count, in LaneDirection u, out Vector512<double> index)
    {
        ReadOnlySpan<Vector512<double>> x = View(rows);
        Vector512<double> best = Vector512.Create(-1.0), at = default, number = default, one = Vector512.Create(1.0);
        for (int k = 0; k < count; k++)
        {
            Vector512<double> a = x[3 * k] * u.X + x[3 * k + 1] * u.Y + x[3 * k + 2] * u.Z;
            a *= a;
            Vector512<double> larger = Vector512.GreaterThan(a, best);
            best = Vector512.ConditionalSelect(larger, a, best);
            at = Vector512.ConditionalSelect(larger, number, at);
            number += one;
        }

        index = at;
        return best;
    }

    /// <summary>Largest |row|^2 and the row that has it: the best channel over all directions.</summary>
    public static Vector512<double> LargestNorm(ReadOnlySpan<double> rows, int count, out Vector512<double> index)
    {
        ReadOnlySpan<Vector512<double>> x = View(rows);
        Vector512<double> best = Vector512.Create(-1.0), at = default, number = default, one = Vector512.Create(1.0);
        for (int k = 0; k < count; k++)
        {
            Vector512<double> a = x[3 * k] * x[3 * k] + x[3 * k + 1] * x[3 * k + 1] + x[3 * k + 2] * x[3 * k + 2];
            Vector512<double> larger = Vector512.GreaterThan(a, best);
            best = Vector512.ConditionalSelect(larger, a, best);
            at = Vector512.ConditionalSelect(larger, number, at);
            number += one;
        }

        index = at;
        return best;
    }
}
