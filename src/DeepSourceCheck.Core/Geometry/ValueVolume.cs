namespace DeepSourceCheck.Core.Geometry;

/// <summary>A volume of values in space: labels, a probability map, an image.</summary>
public sealed class ValueVolume
{
    /// <summary>Distance from a whole number, relative to max(1, |value|), within which a value counts as that number: scale factors are often stored in single precision.</summary>
    public const double WholeNumberTolerance = 1e-6;

    /// <summary>Values converted at a time by those who walk through a volume.</summary>
    public const int Stretch = 8192;

    private const int ListedPlaces = 4;

    /// <param name="name">File as the user named it, for messages.</param>
    /// <param name="grid">Where the voxels lie.</param>
    /// <param name="values">One value a voxel, first axis fastest.</param>
    /// <exception cref="ArgumentException">The number of values is not that of the voxels.</exception>
    public ValueVolume(string name, VoxelGrid grid, VoxelValues values)
    {
        if (values.Count != grid.Count)
        {
            throw new ArgumentException($"{values.Count} values for {grid.Count} voxels.", nameof(values));
        }

        (Name, Grid, Values) = (name, grid, values);
        Survey();
    }

    /// <summary>File as the user named it.</summary>
    public string Name { get; }

    /// <summary>Where the voxels lie.</summary>
    public VoxelGrid Grid { get; }

    /// <summary>Values, first axis fastest.</summary>
    public VoxelValues Values { get; }

    /// <summary>Smallest finite value, without unit; NaN where there is none.</summary>
    public double Smallest { get; private set; } = double.NaN;

    /// <summary>Largest finite value, without unit; NaN where there is none.</summary>
    public double Largest { get; private set; } = double.NaN;

    /// <summary>True when every finite value is a whole number.</summary>
    public bool IsWhole { get; private set; } = true;

    /// <summary>Voxels that hold NaN.</summary>
    public int NotANumber { get; private set; }

    /// <summary>Voxels that hold plus or minus infinity.</summary>
    public int Infinite { get; private set; }

    /// <summary>The first voxels whose value is not finite, at most four.</summary>
    public IReadOnlyList<(int I, int J, int K)> NonFiniteVoxels { get; private set; } = [];

    /// <summary>True when <paramref name="value"/> equals a whole number within the tolerance.</summary>
    public static bool IsWholeNumber(double value) => Matches(value, Math.Round(value));

    /// <summary>True when a value counts as the label; never for NaN or infinity.</summary>
    public static bool Matches(double value, double label) =>
        value == label ? double.IsFinite(value) : Math.Abs(value - label) <= WholeNumberTolerance * Math.Max(1.0, Math.Abs(label));

    private void Survey()
    {
        double low = double.PositiveInfinity, high = double.NegativeInfinity;
        List<(int, int, int)> places = [];
        Span<double> stretch = stackalloc double[Stretch];
        for (int start = 0; start < Values.Count; start += Stretch)
        {
            Span<double> part = stretch[..Math.Min(Stretch, Values.Count - start)];
            Values.CopyTo(start, part);
            double previous = double.NaN;
            for (int n = 0; n < part.Length; n++)
            {
                double value = part[n];
                if (value == previous)
                {
                    continue;
                }

                if (!double.IsFinite(value))
                {
                    NotANumber += double.IsNaN(value) ? 1 : 0;
                    Infinite += double.IsNaN(value) ? 0 : 1;
                    if (places.Count < ListedPlaces)
                    {
                        places.Add(Grid.Voxel(start + n));
                    }

                    continue;
                }

                previous = value;
                low = Math.Min(low, value);
                high = Math.Max(high, value);
                IsWhole = IsWhole && IsWholeNumber(value);
            }
        }

        NonFiniteVoxels = places;
        if (low <= high)
        {
            (Smallest, Largest) = (low, high);
        }
    }
}
