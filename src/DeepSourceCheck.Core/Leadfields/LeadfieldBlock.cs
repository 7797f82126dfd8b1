using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Leadfields;

/// <summary>
/// The leadfield of up to eight dipoles: the unit in which leadfields stream through every stage. The whole leadfield of a study is never held unless it is asked for.
/// </summary>
/// <remarks>
/// Layout [row][axis][lane]: one vector of eight dipoles per row and axis, so that a stage needs neither horizontal sums nor transposes.
/// Lanes beyond <see cref="Count"/> repeat the last dipole: they are computed and ignored.
/// </remarks>
public sealed class LeadfieldBlock
{
    /// <summary>Dipoles in a block.</summary>
    public const int Lanes = 8;

    public LeadfieldBlock(int eegRows, int megRows)
    {
        EegRows = eegRows;
        MegRows = megRows;
        Eeg = new double[eegRows * 3 * Lanes];
        Meg = new double[megRows * 3 * Lanes];
    }

    /// <summary>Number of electrodes.</summary>
    public int EegRows { get; }

    /// <summary>Number of MEG channels.</summary>
    public int MegRows { get; }

    /// <summary>Dipoles in use, 1 to 8.</summary>
    public int Count { get; private set; }

    /// <summary>Positions [m]; all eight filled.</summary>
    public Vec3[] Positions { get; } = new Vec3[Lanes];

    /// <summary>Index of each dipole among the imported points; -1 for computed heads.</summary>
    public int[] SourceIndices { get; } = new int[Lanes];

    /// <summary>EEG leadfield [V/(A m)], unreferenced (mean zero over the sphere), [row][axis][lane].</summary>
    public double[] Eeg { get; }

    /// <summary>MEG leadfield [T/(A m) or T/m/(A m)], [row][axis][lane].</summary>
    public double[] Meg { get; }

    /// <summary>Index of the first lane of a row and axis.</summary>
    public static int At(int row, int axis) => (row * 3 + axis) * Lanes;

    /// <summary>Loads positions; the last one fills the unused lanes.</summary>
    /// <param name="positions">1 to 8 positions [m].</param>
    /// <param name="sourceIndices">As long as the positions, or empty.</param>
    public void Load(ReadOnlySpan<Vec3> positions, ReadOnlySpan<int> sourceIndices)
    {
        ArgumentOutOfRangeException.ThrowIfZero(positions.Length);
        ArgumentOutOfRangeException.ThrowIfGreaterThan(positions.Length, Lanes);
        Count = positions.Length;
        for (int lane = 0; lane < Lanes; lane++)
        {
            int k = Math.Min(lane, Count - 1);
            Positions[lane] = positions[k];
            SourceIndices[lane] = sourceIndices.IsEmpty ? -1 : sourceIndices[k];
        }
    }
}
