using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Nifti;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Heads;

/// <summary>A mask that replaces the tissue: a cavity filled with fluid, an opening of the skull, a lesion.</summary>
public static class TissueOverlay
{
    /// <summary>Lays a mask over a head. Each voxel of the head takes the value of the mask's voxel that holds its centre.</summary>
    /// <param name="volume">The whole label volume as tissues.</param>
    /// <param name="path">The mask, on any grid.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="tissue">The tissue inside; air takes voxels out of the head.</param>
    /// <param name="key">Key of the overlay in the study, for messages.</param>
    /// <returns>The volume after it, and what the user must know.</returns>
    /// <exception cref="InputException">The mask cannot be read or placed, is empty, or changes no voxel.</exception>
    public static (TissueVolume Volume, IReadOnlyList<string> Warnings) Apply(TissueVolume volume, string path, string displayName, Tissue tissue, string key)
    {
        (VoxelMask mask, IReadOnlyList<string> warnings) = MaskFile.Read(path, displayName, null, null);
        int index = tissue.Kind == TissueKind.Air ? 0 : Enumerable.Range(0, volume.Tissues.Count).First(t => volume.Tissues[t].Name == tissue.Name);
        byte[] cells = volume.Cells.ToArray();
        int inside = 0, changed = 0;
        VoxelGrid grid = volume.Grid;
        ((int i0, int i1), (int j0, int j1), (int k0, int k1)) = Box(grid, mask.WorldBounds);
        for (int k = k0; k <= k1; k++)
        {
            for (int j = j0; j <= j1; j++)
            {
                for (int i = i0; i <= i1; i++)
                {
                    int at = grid.Index(i, j, k);
                    if (mask.Contains(grid.Centre(i, j, k)))
                    {
                        inside++;
                        changed += cells[at] != index ? 1 : 0;
                        cells[at] = (byte)index;
                    }
                }
            }
        }

        if (inside == 0)
        {
            throw new InputException(displayName, key, Invariant(
                $"the mask ({mask.Voxels:N0} voxels about {HeadChecks.Place(mask.Centroid)}) covers the centre of no voxel of the label volume: it lies outside it, or is finer than one voxel; check that both are in the same frame"));
        }

        if (changed == 0)
        {
            throw new InputException(displayName, key, Invariant($"all {inside:N0} voxels in the mask are {tissue.Name} already: the overlay changes nothing; name another mask or tissue"));
        }

        double share = inside * grid.VoxelVolume / mask.Volume;
        string[] cut = share >= 0.9 ? [] : [Invariant($"{displayName}: {100 * (1 - share):0} % of the mask lies outside the label volume and does nothing")];
        return (new(grid, cells, volume.Tissues), [.. warnings, .. cut]);
    }

    /// <summary>First and last voxel along each axis that a box in the world can reach.</summary>
    private static ((int, int) I, (int, int) J, (int, int) K) Box(VoxelGrid grid, (Vec3 Low, Vec3 High) world)
    {
        Affine toIndex = grid.ToWorld.Inverse();
        Vec3 low = new(double.PositiveInfinity, double.PositiveInfinity, double.PositiveInfinity), high = -low;
        for (int corner = 0; corner < 8; corner++)
        {
            Vec3 v = toIndex.Apply(new((corner & 1) == 0 ? world.Low.X : world.High.X, (corner & 2) == 0 ? world.Low.Y : world.High.Y, (corner & 4) == 0 ? world.Low.Z : world.High.Z));
            low = new(Math.Min(low.X, v.X), Math.Min(low.Y, v.Y), Math.Min(low.Z, v.Z));
            high = new(Math.Max(high.X, v.X), Math.Max(high.Y, v.Y), Math.Max(high.Z, v.Z));
        }

        return (Range(low.X, high.X, grid.Nx), Range(low.Y, high.Y, grid.Ny), Range(low.Z, high.Z, grid.Nz));
    }

    private static (int, int) Range(double low, double high, int count) =>
        ((int)Math.Clamp(Math.Floor(low), 0, count), (int)Math.Clamp(Math.Ceiling(high), -1, count - 1));
}
