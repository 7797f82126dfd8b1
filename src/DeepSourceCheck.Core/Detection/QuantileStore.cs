using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>
/// Percentiles of non-negative values that stream in. Exact up to <see cref="ExactLimit"/> values; beyond that, counts in classes 1.2e-4 wide (relative), so that memory does not grow
/// with the number of dipoles. Which of the two is decided by the announced total, so that the number of threads never changes a byte.
/// </summary>
/// <remarks>
/// Classes are the leading 13 bits of the mantissa: positive doubles order like their bits. A percentile is then off by at most 0.0006 dB. A page of classes (32 kB) serves one binary exponent;
/// a class counts up to 4e9 values, twice what an array of dipoles can hold.
/// One store a thread; <see cref="Merge"/> adds stores in any order with the same result. NaN is left out, zero stands for "silent".
/// </remarks>
public sealed class QuantileStore
{
    /// <summary>Largest number of values that are kept one by one.</summary>
    public const long ExactLimit = 1 << 18;

    private const int Shift = 52 - 13;
    private const int ClassesAnExponent = 1 << 13;
    private const int Exponents = 1 << 11;

    private readonly List<double>? _values;
    private readonly uint[]?[]? _pages;
    private double[]? _sorted;
    private long[]? _pageCounts;
    private long _counted;

    /// <param name="announced">Number of values that all threads together will add.</param>
    /// <param name="multiplicity">How often each value counts.</param>
    public QuantileStore(long announced, int multiplicity = 1)
    {
        Multiplicity = multiplicity;
        if (announced <= ExactLimit)
        {
            _values = [];
        }
        else
        {
            _pages = new uint[Exponents][];
        }
    }

    /// <summary>True when every value is kept.</summary>
    public bool IsExact => _values is not null;

    /// <summary>How often each value counts.</summary>
    public int Multiplicity { get; }

    /// <summary>Number of values, with multiplicity.</summary>
    public long Count { get; private set; }

    /// <summary>Adds a value of at least 0; NaN is ignored.</summary>
    public void Add(double value) => Add([value]);

    /// <summary>Adds values of at least 0; NaN is ignored.</summary>
    public void Add(ReadOnlySpan<double> values)
    {
        int added = 0;
        if (_values is not null)
        {
            foreach (double value in values)
            {
                if (!double.IsNaN(value))
                {
                    _values.Add(value);
                    added++;
                }
            }
        }
        else
        {
            uint[]?[] pages = _pages!;
            foreach (double value in values)
            {
                if (double.IsNaN(value))
                {
                    continue;
                }

                long bits = BitConverter.DoubleToInt64Bits(value) & long.MaxValue;      // -0 is 0
                uint[] page = pages[bits >> 52] ??= new uint[ClassesAnExponent];
                page[(bits >> Shift) & (ClassesAnExponent - 1)]++;
                added++;
            }
        }

        Count += (long)added * Multiplicity;
    }

    /// <summary>Adds all that another store holds.</summary>
    public void Merge(QuantileStore other)
    {
        Count += other.Count;
        if (_values is not null)
        {
            _values.AddRange(other._values!);
            return;
        }

        for (int exponent = 0; exponent < Exponents; exponent++)
        {
            if (other._pages![exponent] is { } page)
            {
                uint[] own = _pages![exponent] ??= new uint[ClassesAnExponent];
                for (int k = 0; k < page.Length; k++)
                {
                    own[k] += page[k];
                }
            }
        }
    }

    /// <summary>The value at a rank, 0 the smallest, in the unit of the values; with classes, a value inside the class.</summary>
    public double AtRank(long rank)
    {
        if (_values is not null)
        {
            if (_sorted is null || _sorted.Length != _values.Count)
            {
                _sorted = [.. _values];
                Array.Sort(_sorted);
            }

            return _sorted[rank / Multiplicity];
        }

        long left = rank / Multiplicity;
        if (_pageCounts is null || _counted != Count)
        {
            _pageCounts = [.. _pages!.Select(page => page is null ? 0 : page.Sum(n => (long)n))];
            _counted = Count;
        }

        for (long exponent = 0; exponent < Exponents; exponent++)
        {
            if (left >= _pageCounts[exponent])
            {
                left -= _pageCounts[exponent];
                continue;
            }

            uint[] page = _pages![exponent]!;
            for (int k = 0; k < page.Length; k++)
            {
                if (left < page[k])
                {
                    double low = BitConverter.Int64BitsToDouble((exponent << 52) | ((long)k << Shift));
                    double high = BitConverter.Int64BitsToDouble(((exponent << 52) | ((long)k << Shift)) + (1L << Shift));
                    return low == 0 ? 0 : low + (high - low) * (left + 0.5) / page[k];
                }

                left -= page[k];
            }
        }

        throw new ArgumentOutOfRangeException(nameof(rank));
    }

    /// <summary>Whether a value may stand for <see cref="AtRank"/>: equal, or in the same class.</summary>
    public bool Matches(double atRank, double value) =>
        IsExact ? atRank == value : BitConverter.DoubleToInt64Bits(atRank) >> Shift == BitConverter.DoubleToInt64Bits(value) >> Shift;

    /// <summary>Percentile by linear interpolation of f(value) between ranks; null where empty or not finite.</summary>
    /// <param name="share">0 to 1.</param>
    /// <param name="map">Monotone map, for instance to dB.</param>
    public double? Interpolated(double share, Func<double, double> map)
    {
        if (Count == 0)
        {
            return null;
        }

        double position = share * (Count - 1);
        long below = (long)Math.Floor(position);
        double t = position - below;
        double a = map(AtRank(below));
        double value = t == 0 ? a : a + t * (map(AtRank(Math.Min(below + 1, Count - 1))) - a);
        return double.IsFinite(value) ? value : null;
    }

    /// <summary>Nearest-rank percentile, counted from the largest value downwards: the value that <paramref name="share"/> of all values reach or exceed; null where empty.</summary>
    public double? NearestRankFromTop(double share)
    {
        if (Count == 0)
        {
            return null;
        }

        long rank = Math.Clamp((long)Math.Ceiling(share * Count - 1e-9), 1, Count);
        return AtRank(Count - rank);
    }

    /// <summary>The five reported percentiles of f(value), by linear interpolation.</summary>
    public Percentiles Percentiles(Func<double, double> map) => new(
        Interpolated(0.05, map), Interpolated(0.25, map), Interpolated(0.50, map), Interpolated(0.75, map), Interpolated(0.95, map));
}
