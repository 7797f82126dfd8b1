namespace DeepSourceCheck.Tests.References;

/// <summary>
/// Counts of non-negative doubles by their leading 24 bits after the sign, in a sorted dictionary, one count a value: the slow twin of percentile classes. Never to be made fast.
/// </summary>
internal sealed class PlainClassCounts
{
    private const int Dropped = 39;                             // 52 bits of mantissa, of which 13 are kept

    private readonly SortedDictionary<long, long> _counts = [];

    public long Count => _counts.Values.Sum();

    public void Add(double value)
    {
        if (!double.IsNaN(value))
        {
            long key = BitConverter.DoubleToInt64Bits(Math.Abs(value)) >> Dropped;
            _counts[key] = _counts.GetValueOrDefault(key) + 1;
        }
    }

    /// <summary>A class is taken as evenly filled; the class of the smallest numbers stands for zero.</summary>
    public double AtRank(long rank)
    {
        foreach ((long key, long count) in _counts)
        {
            if (rank < count)
            {
                double low = BitConverter.Int64BitsToDouble(key << Dropped), high = BitConverter.Int64BitsToDouble((key + 1) << Dropped);
                return low == 0 ? 0 : low + (high - low) * (rank + 0.5) / count;
            }

            rank -= count;
        }

        throw new ArgumentOutOfRangeException(nameof(rank));
    }
}
