using System.Numerics;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Core.Regions;

/// <summary>The voxels of a volume that make up a region.</summary>
public sealed class VoxelMask
{
    private const int ListedLabels = 20;

    private readonly ulong[] _bits;

    private VoxelMask(VoxelGrid grid, ulong[] bits, string selection, IReadOnlyList<string> warnings)
    {
        (Grid, _bits, Selection, Warnings) = (grid, bits, selection, warnings);
        (int I, int J, int K) low = (int.MaxValue, int.MaxValue, int.MaxValue), high = (-1, -1, -1);
        long sumI = 0, sumJ = 0, sumK = 0;
        for (int word = 0; word < bits.Length; word++)
        {
            for (ulong rest = bits[word]; rest != 0; rest &= rest - 1)
            {
                (int i, int j, int k) = grid.Voxel(64 * word + BitOperations.TrailingZeroCount(rest));
                Voxels++;
                (sumI, sumJ, sumK) = (sumI + i, sumJ + j, sumK + k);
                low = (Math.Min(low.I, i), Math.Min(low.J, j), Math.Min(low.K, k));
                high = (Math.Max(high.I, i), Math.Max(high.J, j), Math.Max(high.K, k));
            }
        }

        double n = Voxels;
        Centroid = grid.ToWorld.Apply(new(sumI / n, sumJ / n, sumK / n));
        WorldBounds = grid.WorldBounds(low, high);
    }

    /// <summary>Where the voxels lie.</summary>
    public VoxelGrid Grid { get; }

    /// <summary>Number of voxels inside, at least 1.</summary>
    public int Voxels { get; }

    /// <summary>Volume [m^3].</summary>
    public double Volume => Voxels * Grid.VoxelVolume;

    /// <summary>Mean of the centres of the voxels inside [m].</summary>
    public Vec3 Centroid { get; }

    /// <summary>An axis-parallel box [m] around the voxels inside, outer faces included.</summary>
    public (Vec3 Low, Vec3 High) WorldBounds { get; }

    /// <summary>How the voxels were chosen, for instance `label 3`.</summary>
    public string Selection { get; }

    /// <summary>What the user must know about the choice.</summary>
    public IReadOnlyList<string> Warnings { get; }

    /// <summary>True when the voxel that holds the point [m] is inside; false outside the volume.</summary>
    public bool Contains(Vec3 world)
    {
        int index = Grid.IndexAt(world);
        return index >= 0 && (_bits[index >> 6] >> index & 1) != 0;
    }

    /// <summary>
    /// Chooses voxels by label, by threshold (values of at least it), or by neither: then all non-zero voxels of a volume of whole numbers,
    /// and the values of at least 0.5 of a volume of fractions, said in a warning. NaN and infinity are never inside.
    /// </summary>
    /// <param name="volume">The volume.</param>
    /// <param name="label">Label, not 0; null for none.</param>
    /// <param name="threshold">Threshold, above 0; null for none.</param>
    /// <exception cref="InputException">Nothing is inside, both are given, or one is out of range; names the file and the labels that exist.</exception>
    public static VoxelMask Of(ValueVolume volume, double? label = null, double? threshold = null)
    {
        if (label is not null && threshold is not null)
        {
            throw new InputException(volume.Name, null, "both a label and a threshold are given; state one of them");
        }

        if (label is 0 || label is { } l && !double.IsFinite(l))
        {
            throw new InputException(volume.Name, "label", Invariant($"{label} is not a region: 0 is what surrounds the labels; {ExistingLabels(volume)}"));
        }

        // NaN fails the comparison too.
        if (threshold is { } t && !(t > 0 && double.IsFinite(t)))
        {
            throw new InputException(volume.Name, "threshold", Invariant($"{t} would take in the zeros around the region; a threshold is above 0"));
        }

        List<string> warnings = [];
        string selection;
        Func<double, bool> inside;
        if (label is { } wanted)
        {
            selection = Invariant($"label {wanted}");
            inside = value => ValueVolume.Matches(value, wanted);
        }
        else if (threshold is { } least)
        {
            selection = Invariant($"values of at least {least}");
            inside = value => value >= least && double.IsFinite(value);
        }
        else if (volume.IsWhole)
        {
            selection = "all non-zero voxels";
            inside = value => double.IsFinite(value) && !ValueVolume.Matches(value, 0);
            if (volume.Largest > 1 || volume.Smallest < 0)
            {
                warnings.Add($"{volume.Name} holds more than one label and the study names none: all its non-zero voxels are taken as one region");
            }
        }
        else
        {
            selection = Invariant($"values of at least {LabelListing.FractionThreshold}");
            inside = value => value >= LabelListing.FractionThreshold && double.IsFinite(value);
            warnings.Add(FractionWarning(volume));
        }

        ulong[] bits = Choose(volume, inside);
        return bits.Any(word => word != 0)
            ? new(volume.Grid, bits, selection, warnings)
            : throw new InputException(volume.Name, label is null ? null : "label",
                label is null ? $"the region is empty: no voxel ({selection}); {ExistingLabels(volume)}" : $"the region is empty: no voxel has {selection}; {ExistingLabels(volume)}");
    }

    /// <summary>What is said when a volume of fractions is used without label or threshold.</summary>
    internal static string FractionWarning(ValueVolume volume)
    {
        string text = Invariant($"{volume.Name} holds fractions, from {volume.Smallest:G6} to {volume.Largest:G6}: voxels of at least {LabelListing.FractionThreshold} are taken as the region");
        return volume.Largest > 1 + ValueVolume.WholeNumberTolerance
            ? text + "; values above 1 are no probabilities (percent? an image?): state a threshold"
            : text + "; state a threshold for another choice";
    }

    private static ulong[] Choose(ValueVolume volume, Func<double, bool> inside)
    {
        ulong[] bits = new ulong[(volume.Values.Count + 63) / 64];
        Span<double> stretch = stackalloc double[ValueVolume.Stretch];
        for (int start = 0; start < volume.Values.Count; start += ValueVolume.Stretch)
        {
            Span<double> part = stretch[..Math.Min(ValueVolume.Stretch, volume.Values.Count - start)];
            volume.Values.CopyTo(start, part);
            double previous = double.NaN;
            bool previousInside = false;
            for (int n = 0; n < part.Length; n++)
            {
                // Volumes are mostly runs of equal values; NaN differs from itself and is asked each time.
                if (part[n] != previous)
                {
                    (previous, previousInside) = (part[n], inside(part[n]));
                }

                if (previousInside)
                {
                    bits[(start + n) >> 6] |= 1UL << (start + n);
                }
            }
        }

        return bits;
    }

    private static string ExistingLabels(ValueVolume volume)
    {
        if (double.IsNaN(volume.Largest))
        {
            return "the volume holds no finite value";
        }

        if (!volume.IsWhole)
        {
            return Invariant($"the volume holds fractions from {volume.Smallest:G6} to {volume.Largest:G6}: use threshold");
        }

        long[] labels = [.. LabelListing.Of(volume).Entries.Select(e => e.Label)];
        return labels.Length switch
        {
            0 => "every voxel of the volume is zero",
            1 => Invariant($"the only label in the volume is {labels[0]}"),
            _ => $"the volume holds {labels.Length} labels: {string.Join(", ", labels.Take(ListedLabels).Select(v => Invariant($"{v}")))}"
                + (labels.Length > ListedLabels ? Invariant($", ... {labels[^1]}") : ""),
        };
    }
}
