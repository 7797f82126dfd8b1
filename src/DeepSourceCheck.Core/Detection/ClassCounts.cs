using System.Numerics;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace DeepSourceCheck.Core.Detection;

// ClassCounts.cs - how many of the values that streamed in fall into each of some 16 million classes.
//   A class is the leading 24 bits of a non-negative double after its sign: 11 of exponent, 13 of mantissa. Positive doubles order like their bits.
//   A page of classes (32 kB) serves one binary exponent; pages stand only where values fell.
//   The pages of one store are some 200 kB, those of a region's fifty stores 10 MB: counting value by value waits for memory at every count. So classes are
//   collected first, in order (64 kB a store), and counted when there are many: then a store's pages are fetched once for thousands of counts.
//   Classes of eight values at a time: shift, narrow, store. NaN has classes above that of infinity and is dropped while counting.
// The plain twin, one count a value, stands in the tests.

/// <summary>Counts of non-negative doubles by class: 2^-13 wide, relative to the binary exponent.</summary>
internal sealed class ClassCounts
{
    /// <summary>Bits of a double that do not enter its class.</summary>
    private const int Shift = 52 - MantissaBits;

    private const int MantissaBits = 13;
    private const int ClassesAPage = 1 << MantissaBits;
    private const int Exponents = 1 << 11;
    private const uint Infinity = (Exponents - 1) << MantissaBits;

    /// <summary>Classes that are collected before they are counted: several for each line of the pages that they fall on.</summary>
    private const int Collected = 1 << 14;

    /// <summary>Classes that are passed over at once while a rank is sought.</summary>
    private const int Stretch = 64;

    private readonly uint[]?[] _pages = new uint[Exponents][];
    private long[]? _pageCounts;
    private uint[] _classes = [];
    private int _collected;
    private long _count;

    /// <summary>Values other than NaN.</summary>
    public long Count
    {
        get
        {
            Settle();
            return _count;
        }
    }

    /// <summary>No values will follow: from here on several threads may read.</summary>
    public void Complete()
    {
        Settle();
        _classes = [];
        _pageCounts = [.. _pages.Select(page => page is null ? 0L : Sum(page))];
    }

    /// <summary>The class of a value of at least 0.</summary>
    public static long ClassOf(double value) => (BitConverter.DoubleToInt64Bits(value) & long.MaxValue) >> Shift;      // -0 is 0

    /// <summary>Adds values of at least 0, or NaN.</summary>
    public void Add(ReadOnlySpan<double> values)
    {
        if (_classes.Length == 0)
        {
            _classes = GC.AllocateUninitializedArray<uint>(Collected);
        }

        while (!values.IsEmpty)
        {
            int taken = Math.Min(values.Length, Collected - _collected);
            Collect(values[..taken], _classes.AsSpan(_collected, taken));
            _collected += taken;
            values = values[taken..];
            if (_collected == Collected)
            {
                Settle();
            }
        }
    }

    /// <summary>Adds all that another one holds.</summary>
    public void Merge(ClassCounts other)
    {
        Settle();
        other.Settle();
        _count += other._count;
        _pageCounts = null;
        for (int exponent = 0; exponent < Exponents; exponent++)
        {
            if (other._pages[exponent] is { } page)
            {
                if (_pages[exponent] is not { } own)
                {
                    _pages[exponent] = page.AsSpan().ToArray();
                    continue;
                }

                Span<Vector<uint>> sums = MemoryMarshal.Cast<uint, Vector<uint>>(own.AsSpan());
                ReadOnlySpan<Vector<uint>> more = MemoryMarshal.Cast<uint, Vector<uint>>(page.AsSpan());
                for (int k = 0; k < sums.Length; k++)
                {
                    sums[k] += more[k];
                }
            }
        }
    }

    /// <summary>The value at a rank, 0 the smallest: inside the class that holds it, as if the class were evenly filled.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The rank is not below <see cref="Count"/>.</exception>
    public double AtRank(long rank)
    {
        if (_pageCounts is null)
        {
            Complete();
        }

        ArgumentOutOfRangeException.ThrowIfNegative(rank);
        ArgumentOutOfRangeException.ThrowIfGreaterThanOrEqual(rank, _count);
        long exponent = 0;
        for (; rank >= _pageCounts![exponent]; exponent++)
        {
            rank -= _pageCounts[exponent];
        }

        uint[] page = _pages[exponent]!;
        int k = 0;
        for (uint passed; rank >= (passed = Sum(page.AsSpan(k, Stretch))); k += Stretch)
        {
            rank -= passed;
        }

        for (; rank >= page[k]; k++)
        {
            rank -= page[k];
        }

        long lowest = (exponent << 52) | ((long)k << Shift);
        double low = BitConverter.Int64BitsToDouble(lowest), high = BitConverter.Int64BitsToDouble(lowest + (1L << Shift));
        return low == 0 ? 0 : low + (high - low) * (rank + 0.5) / page[k];
    }

    private static void Collect(ReadOnlySpan<double> values, Span<uint> classes)
    {
        ReadOnlySpan<Vector512<ulong>> eights = MemoryMarshal.Cast<double, Vector512<ulong>>(values);
        Vector512<ulong> sign = Vector512.Create((ulong)long.MaxValue);
        for (int k = 0; k < eights.Length; k++)
        {
            Vector512<ulong> bits = Vector512.ShiftRightLogical(eights[k] & sign, Shift);
            Vector256.Narrow(bits.GetLower(), bits.GetUpper()).CopyTo(classes[(8 * k)..]);
        }

        for (int k = 8 * eights.Length; k < values.Length; k++)
        {
            classes[k] = (uint)ClassOf(values[k]);
        }
    }

    // Counts what was collected.
    private void Settle()
    {
        if (_collected == 0)
        {
            return;
        }

        uint[]?[] pages = _pages;
        int none = 0;
        foreach (uint c in _classes.AsSpan(0, _collected))
        {
            if (c > Infinity)
            {
                none++;
                continue;
            }

            uint[] page = pages[c >> MantissaBits] ?? NewPage(c >> MantissaBits);
            page[c & (ClassesAPage - 1)]++;
        }

        _count += _collected - none;
        _collected = 0;
        _pageCounts = null;
    }

    private uint[] NewPage(uint exponent) => _pages[exponent] = new uint[ClassesAPage];

    // No sum overflows: a region has at most 2^31 dipoles, and beyond 2^22 values each of them adds one direction.
    private static uint Sum(ReadOnlySpan<uint> counts)
    {
        Vector<uint> sum = default;
        foreach (Vector<uint> several in MemoryMarshal.Cast<uint, Vector<uint>>(counts))
        {
            sum += several;
        }

        return Vector.Sum(sum);
    }
}
