using System.Runtime.InteropServices;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Regions;

/// <summary>One label of a volume.</summary>
/// <param name="Label">Value of its voxels; 1 for a volume of fractions, which is one region.</param>
/// <param name="Voxels">Number of voxels.</param>
/// <param name="Volume">Volume [m^3].</param>
/// <param name="Centroid">Mean of the voxel centres [m].</param>
/// <param name="Side">`left`, `right` or `midline`; see <see cref="LabelListing"/>.</param>
public sealed record LabelEntry(long Label, int Voxels, double Volume, Vec3 Centroid, string Side);

/// <summary>What a label volume holds: its non-zero labels with volume, centroid and side, in ascending order.</summary>
/// <remarks>
/// World coordinates grow to the right, to the front and up (the orientation that the NIfTI standard prescribes), so x below 0 is left.
/// A label is left or right when more than four fifths of its voxel centres lie on that side of x = 0, else midline. Voxels at x = 0 count half for each side.
/// </remarks>
public sealed class LabelListing
{
    /// <summary>Share of the voxels that must lie on one side.</summary>
    public const double OneSidedShare = 0.8;

    /// <summary>Most labels that are listed; a volume with more is an image.</summary>
    public const int MostLabels = 20_000;

    /// <summary>Fraction from which a voxel of a fractional volume is inside when the study states no threshold.</summary>
    public const double FractionThreshold = 0.5;

    private LabelListing(IReadOnlyList<LabelEntry> entries, IReadOnlyList<string> warnings) => (Entries, Warnings) = (entries, warnings);

    /// <summary>Labels in ascending order.</summary>
    public IReadOnlyList<LabelEntry> Entries { get; }

    /// <summary>What the user must know about the listing.</summary>
    public IReadOnlyList<string> Warnings { get; }

    /// <summary>Lists a volume; voxels that are zero, NaN or infinite belong to no label.</summary>
    /// <exception cref="InputException">More than <see cref="MostLabels"/> labels.</exception>
    public static LabelListing Of(ValueVolume volume)
    {
        Dictionary<long, Sums> sums = [];
        if (volume.IsWhole)
        {
            Collect(volume, sums);
            List<LabelEntry> entries = [.. sums.OrderBy(s => s.Key).Select(s => s.Value.Entry(s.Key, volume.Grid))];
            return new(entries, entries.Count > 0 ? [] : [$"{volume.Name} holds no label: every voxel is zero or not a finite number"]);
        }

        Sums inside = default;
        Walk(volume, (value, i, j, k, x) =>
        {
            if (value >= FractionThreshold && double.IsFinite(value))
            {
                inside.Add(i, j, k, x);
            }
        });
        string warning = VoxelMask.FractionWarning(volume);
        return inside.Count > 0
            ? new([inside.Entry(1, volume.Grid)], [warning])
            : new([], [warning, FormattableString.Invariant($"{volume.Name} holds no voxel of at least {FractionThreshold}: its largest value is {volume.Largest:G6}")]);
    }

    private static void Collect(ValueVolume volume, Dictionary<long, Sums> sums) => Walk(volume, (value, i, j, k, x) =>
    {
        if (value == 0 || !double.IsFinite(value))
        {
            return;
        }

        long label = (long)Math.Round(value);
        if (label == 0)
        {
            return;
        }

        ref Sums sum = ref CollectionsMarshal.GetValueRefOrAddDefault(sums, label, out bool known);
        if (!known && sums.Count > MostLabels)
        {
            throw new InputException(volume.Name, null,
                $"more than {MostLabels:N0} different values: this is an image, not a label volume; make a mask of it with threshold");
        }

        sum.Add(i, j, k, x);
    });

    private static void Walk(ValueVolume volume, Action<double, int, int, int, double> visit)
    {
        VoxelGrid grid = volume.Grid;
        Vec3 row = grid.ToWorld.Row0;
        double[] line = new double[grid.Nx];
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                volume.Values.CopyTo(grid.Index(0, j, k), line);
                double x = row.Y * j + row.Z * k + grid.ToWorld.Offset.X;
                for (int i = 0; i < line.Length; i++)
                {
                    if (line[i] != 0)
                    {
                        visit(line[i], i, j, k, x + row.X * i);
                    }
                }
            }
        }
    }

    /// <summary>Sums over the voxels of one label; indices are summed as integers, so the centroid does not depend on the order.</summary>
    private struct Sums
    {
        /// <summary>Distance from x = 0 [m] within which a voxel counts half for each side.</summary>
        private const double OnMidline = 1e-6;

        private long _sumI, _sumJ, _sumK;
        private int _left, _right;

        public int Count { get; private set; }

        public void Add(int i, int j, int k, double x)
        {
            Count++;
            _sumI += i;
            _sumJ += j;
            _sumK += k;
            _left += x < -OnMidline ? 1 : 0;
            _right += x > OnMidline ? 1 : 0;
        }

        public readonly LabelEntry Entry(long label, VoxelGrid grid)
        {
            double n = Count, between = (Count - _left - _right) / 2.0;
            string side = _left + between > OneSidedShare * n ? "left" : _right + between > OneSidedShare * n ? "right" : "midline";
            return new(label, Count, n * grid.VoxelVolume, grid.ToWorld.Apply(new(_sumI / n, _sumJ / n, _sumK / n)), side);
        }
    }
}
