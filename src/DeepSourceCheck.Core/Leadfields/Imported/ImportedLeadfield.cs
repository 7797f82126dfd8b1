using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Leadfields.Imported;

/// <summary>What one row of an imported leadfield is.</summary>
/// <param name="Name">Unique name.</param>
/// <param name="Kind">Coil kind; null for an electrode.</param>
/// <param name="Position">Place [m] where known.</param>
public sealed record ImportedRow(string Name, CoilKind? Kind, Vec3? Position);

/// <summary>A point at which leadfields were imported.</summary>
/// <param name="Name">Unique name.</param>
/// <param name="Position">Place [m].</param>
/// <param name="WhyUnusable">Null for a usable point, else the reason: its columns hold NaN or infinity.</param>
public sealed record ImportedPoint(string Name, Vec3 Position, string? WhyUnusable);

/// <summary>Leadfields that were computed elsewhere, at given points.</summary>
/// <remarks>Immutable; the arrays are kept, not copied. Blocks must carry the indices of their points (<see cref="LeadfieldBlock.SourceIndices"/>).</remarks>
public sealed class ImportedLeadfield : ILeadfieldSource
{
    private readonly double[] _eeg;
    private readonly double[] _meg;
    private readonly Dictionary<string, int> _indexByName;

    /// <param name="points">Points, in the arrays' order; at least one.</param>
    /// <param name="eegChannels">Electrodes, in the array's order; empty without EEG.</param>
    /// <param name="eeg">EEG leadfield [V/(A m)], rows x points x 3, axis fastest.</param>
    /// <param name="megChannels">MEG channels, in the array's order; empty without MEG.</param>
    /// <param name="meg">MEG leadfield [T/(A m), T/m/(A m) for planar gradiometers], rows x points x 3, axis fastest.</param>
    /// <exception cref="ArgumentException">An array's length is not rows x points x 3.</exception>
    public ImportedLeadfield(
        IReadOnlyList<ImportedPoint> points, IReadOnlyList<ImportedRow> eegChannels, double[] eeg, IReadOnlyList<ImportedRow> megChannels, double[] meg)
    {
        if (eeg.Length != 3L * eegChannels.Count * points.Count || meg.Length != 3L * megChannels.Count * points.Count)
        {
            throw new ArgumentException("An imported array does not have rows x points x 3 numbers.", eeg.Length != 3L * eegChannels.Count * points.Count ? nameof(eeg) : nameof(meg));
        }

        (Points, EegChannels, MegChannels, _eeg, _meg) = (points, eegChannels, megChannels, eeg, meg);
        _indexByName = new(points.Count, StringComparer.Ordinal);
        for (int n = 0; n < points.Count; n++)
        {
            _indexByName.Add(points[n].Name, n);
        }
    }

    /// <summary>Points, in the order of the imported arrays.</summary>
    public IReadOnlyList<ImportedPoint> Points { get; }

    /// <summary>Electrodes, one a row.</summary>
    public IReadOnlyList<ImportedRow> EegChannels { get; }

    /// <summary>MEG channels, one a row.</summary>
    public IReadOnlyList<ImportedRow> MegChannels { get; }

    /// <inheritdoc/>
    public int EegRows => EegChannels.Count;

    /// <inheritdoc/>
    public int MegRows => MegChannels.Count;

    /// <inheritdoc/>
    public LeadfieldMethod Method { get; } = new("EEG leadfield: imported with the study", "MEG leadfield: imported with the study");

    /// <summary>Index of a point by its name, or -1.</summary>
    public int IndexOf(string pointName) => _indexByName.GetValueOrDefault(pointName, -1);

    /// <summary>Index of the usable point nearest to a place [m], the first among equals.</summary>
    public int Nearest(Vec3 place)
    {
        int nearest = -1;
        double least = double.PositiveInfinity;
        for (int n = 0; n < Points.Count; n++)
        {
            Vec3 d = Points[n].Position - place;
            if (Points[n].WhyUnusable is null && Vec3.Dot(d, d) < least)
            {
                (nearest, least) = (n, Vec3.Dot(d, d));
            }
        }

        return nearest;
    }

    /// <inheritdoc/>
    /// <exception cref="ArgumentException">A lane carries no index of an imported point, or the block has other numbers of rows.</exception>
    public void Fill(LeadfieldBlock block)
    {
        if (block.EegRows != EegRows || block.MegRows != MegRows)
        {
            throw new ArgumentException("The block has other numbers of rows than the imported leadfield.", nameof(block));
        }

        foreach (int point in block.SourceIndices)
        {
            if ((uint)point >= (uint)Points.Count)
            {
                throw new ArgumentException($"A dipole of the block has the point index {point}; {Points.Count} points were imported.", nameof(block));
            }
        }

        Gather(_eeg, EegRows, block.SourceIndices, block.Eeg);
        Gather(_meg, MegRows, block.SourceIndices, block.Meg);
    }

    private void Gather(double[] source, int rows, int[] points, double[] target)
    {
        for (int row = 0; row < rows; row++)
        {
            for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
            {
                int from = 3 * (row * Points.Count + points[lane]);
                for (int axis = 0; axis < 3; axis++)
                {
                    target[LeadfieldBlock.At(row, axis) + lane] = source[from + axis];
                }
            }
        }
    }
}
