namespace DeepSourceCheck.Core.Noise.Recordings;

/// <summary>Second moments of samples about zero, and the mean of their fourth power, gathered sample by sample.</summary>
public sealed class SampleMoments(int rows)
{
    private readonly double[] _sums = new double[rows * rows];
    private double _fourth;

    /// <summary>Number of rows.</summary>
    public int Rows => rows;

    /// <summary>Number of samples.</summary>
    public long Count { get; private set; }

    /// <summary>Mean of |x|^4, in the unit of the samples to the fourth.</summary>
    public double MeanFourthPower => _fourth / Count;

    /// <summary>Adds a sample.</summary>
    /// <param name="sample">One value a row, in the unit of the samples.</param>
    public void Add(ReadOnlySpan<double> sample)
    {
        double power = 0;
        for (int i = 0; i < rows; i++)
        {
            double x = sample[i];
            power += x * x;
            Span<double> row = _sums.AsSpan(i * rows, i + 1);
            for (int j = 0; j < row.Length; j++)
            {
                row[j] += x * sample[j];
            }
        }

        _fourth += power * power;
        Count++;
    }

    /// <summary>Adds the samples of another.</summary>
    /// <param name="other">As many rows.</param>
    public void Add(SampleMoments other)
    {
        for (int k = 0; k < _sums.Length; k++)
        {
            _sums[k] += other._sums[k];
        }

        _fourth += other._fourth;
        Count += other.Count;
    }

    /// <summary>Covariance about zero, row by row, in the unit of the samples squared.</summary>
    public double[] Covariance()
    {
        var result = new double[rows * rows];
        for (int i = 0; i < rows; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                result[i * rows + j] = result[j * rows + i] = _sums[i * rows + j] / Count;
            }
        }

        return result;
    }
}
