using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Detection;

/// <summary>
/// Percentiles of non-negative values that stream in. Exact up to <see cref="ExactLimit"/> values; beyond that, counts in classes 1.2e-4 wide (relative), so that memory does not grow
/// with the number of dipoles. Which of the two is decided by the announced total, so that the number of threads never changes a byte.
/// </summary>
/// <remarks>
/// A percentile from <see cref="ClassCounts"/> is off by at most 0.0006 dB. A class counts up to 4e9 values, twice what an array of dipoles can hold.
/// One store a thread; <see cref="Merge"/> adds stores in any order with the same result. NaN is left out, zero stands for "silent".
/// </remarks>
public sealed class QuantileStore
{
    /// <summary>Largest number of values that are kept one by one.</summary>
    public const long ExactLimit = 1 << 18;

    private readonly List<double>? _values;
    private readonly ClassCounts? _classes;
    private double[]? _sorted;

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
            _classes = new ClassCounts();
        }
    }

    /// <summary>True when every value is kept.</summary>
    public bool IsExact => _values is not null;

    /// <summary>How often each value counts.</summary>
    public int Multiplicity { get; }

    /// <summary>Number of values, with multiplicity.</summary>
    public long Count => (_values?.Count ?? _classes!.Count) * Multiplicity;

    /// <summary>Adds a value of at least 0; NaN is ignored.</summary>
    public void Add(double value) => Add([value]);

    /// <summary>Adds values of at least 0; NaN is ignored.</summary>
    public void Add(ReadOnlySpan<double> values)
    {
        if (_classes is not null)
        {
            _classes.Add(values);
            return;
        }

        foreach (double value in values)
        {
            if (!double.IsNaN(value))
            {
                _values!.Add(value);
            }
        }
    }

    /// <summary>Adds all that another store holds.</summary>
    public void Merge(QuantileStore other)
    {
        if (_classes is not null)
        {
            _classes.Merge(other._classes!);
        }
        else
        {
            _values!.AddRange(other._values!);
        }
    }

    /// <summary>The value at a rank, 0 the smallest, in the unit of the values; with classes, a value inside the class.</summary>
    public double AtRank(long rank)
    {
        if (_classes is not null)
        {
            return _classes.AtRank(rank / Multiplicity);
        }

        if (_sorted is null || _sorted.Length != _values!.Count)
        {
            Complete();
        }

        return _sorted![rank / Multiplicity];
    }

    /// <summary>No values will follow: from here on several threads may read.</summary>
    public void Complete()
    {
        if (_classes is not null)
        {
            _classes.Complete();
            return;
        }

        double[] sorted = [.. _values!];
        Array.Sort(sorted);
        _sorted = sorted;
    }

    /// <summary>Whether a value may stand for <see cref="AtRank"/>: equal, or in the same class.</summary>
    public bool Matches(double atRank, double value) => IsExact ? atRank == value : ClassCounts.ClassOf(atRank) == ClassCounts.ClassOf(value);

    /// <summary>Percentile by linear interpolation of f(value) between ranks; null where empty or not finite.</summary>
    /// <param name="share">0 to 1.</param>
    /// <param name="map">Monotone map, for instance to dB.</param>
    public double? Interpolated(double share, Func<double, double> map)
    {
        long count = Count;
        if (count == 0)
        {
            return null;
        }

        double position = share * (count - 1);
        long below = (long)Math.Floor(position);
        double t = position - below;
        double a = map(AtRank(below));
        double value = t == 0 ? a : a + t * (map(AtRank(Math.Min(below + 1, count - 1))) - a);
        return double.IsFinite(value) ? value : null;
    }

    /// <summary>Nearest-rank percentile, counted from the largest value downwards: the value that <paramref name="share"/> of all values reach or exceed; null where empty.</summary>
    public double? NearestRankFromTop(double share)
    {
        long count = Count;
        if (count == 0)
        {
            return null;
        }

        long rank = Math.Clamp((long)Math.Ceiling(share * count - 1e-9), 1, count);
        return AtRank(count - rank);
    }

    /// <summary>The five reported percentiles of f(value), by linear interpolation.</summary>
    public Percentiles Percentiles(Func<double, double> map) => new(
        Interpolated(0.05, map), Interpolated(0.25, map), Interpolated(0.50, map), Interpolated(0.75, map), Interpolated(0.95, map));
}
