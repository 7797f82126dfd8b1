using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>A face of the file's volume that the head touches.</summary>
/// <param name="Axis">Axis of the voxels across which it lies: 0, 1 or 2.</param>
/// <param name="AtEnd">True: behind the last voxel of the axis; false: before the first.</param>
/// <param name="Side">Where it lies in the world: left, right, front, back, above or below.</param>
/// <param name="Voxels">Voxels of the head that touch it.</param>
public sealed record TouchedFace(int Axis, bool AtEnd, string Side, int Voxels);

/// <summary>A head cut out of its volume, with one voxel of air all around.</summary>
/// <param name="Volume">The head with its margin.</param>
/// <param name="Touched">Faces of the file's volume that the head touches: beyond them the margin is made up.</param>
public sealed record CroppedHead(TissueVolume Volume, IReadOnlyList<TouchedFace> Touched);

/// <summary>Cuts a volume down to the head and a margin of one voxel.</summary>
public static class HeadCrop
{
    /// <summary>Voxels of air around the head.</summary>
    public const int Margin = 1;

    private static readonly (string Low, string High)[] Sides = [("left", "right"), ("back", "front"), ("below", "above")];

    /// <summary>The head of a volume; null where every voxel is air.</summary>
    public static CroppedHead? Of(TissueVolume volume)
    {
        VoxelGrid grid = volume.Grid;
        if (Box(volume) is not ((int, int, int) low, (int, int, int) high))
        {
            return null;
        }

        (int i0, int j0, int k0) = (low.Item1 - Margin, low.Item2 - Margin, low.Item3 - Margin);
        int nx = high.Item1 - low.Item1 + 1 + 2 * Margin, ny = high.Item2 - low.Item2 + 1 + 2 * Margin, nz = high.Item3 - low.Item3 + 1 + 2 * Margin;
        var cropped = new VoxelGrid(nx, ny, nz, grid.ToWorld with { Offset = grid.Centre(i0, j0, k0) });
        var cells = new byte[cropped.Count];
        for (int k = Margin; k < nz - Margin; k++)
        {
            for (int j = Margin; j < ny - Margin; j++)
            {
                volume.Cells.Slice(grid.Index(i0 + Margin, j0 + j, k0 + k), nx - 2 * Margin).CopyTo(cells.AsSpan(cropped.Index(Margin, j, k)));
            }
        }

        return new(new(cropped, cells, volume.Tissues), Touched(volume, low, high));
    }

    /// <summary>A cut head without the margin that was made up: where the file's volume cuts it, the volume ends with it, as in the file.</summary>
    /// <param name="volume">The head with its margin.</param>
    /// <param name="touched">Faces of the file's volume that the head touches.</param>
    public static TissueVolume AsInFile(TissueVolume volume, IReadOnlyList<TouchedFace> touched)
    {
        if (touched.Count == 0)
        {
            return volume;
        }

        VoxelGrid grid = volume.Grid;
        int[] low = new int[3], size = [grid.Nx, grid.Ny, grid.Nz];
        foreach (TouchedFace face in touched)
        {
            low[face.Axis] += face.AtEnd ? 0 : Margin;
            size[face.Axis] -= Margin;
        }

        var cut = new VoxelGrid(size[0], size[1], size[2], grid.ToWorld with { Offset = grid.Centre(low[0], low[1], low[2]) });
        var cells = new byte[cut.Count];
        for (int row = 0; row < size[1] * size[2]; row++)
        {
            int from = grid.Index(low[0], low[1] + row % size[1], low[2] + row / size[1]);
            volume.Cells.Slice(from, size[0]).CopyTo(cells.AsSpan(row * size[0]));
        }

        return new(cut, cells, volume.Tissues);
    }

    /// <summary>True when the outermost layer of voxels is air.</summary>
    public static bool HasMargin(TissueVolume volume)
    {
        VoxelGrid grid = volume.Grid;
        return Box(volume) is not ((int, int, int) low, (int, int, int) high)
            || (low.Item1 >= Margin && low.Item2 >= Margin && low.Item3 >= Margin
                && high.Item1 < grid.Nx - Margin && high.Item2 < grid.Ny - Margin && high.Item3 < grid.Nz - Margin);
    }

    /// <summary>Where a face of a volume lies in the world, by the largest component of its outward normal.</summary>
    public static string Side(VoxelGrid grid, int axis, bool atEnd)
    {
        Vec3 outward = (atEnd ? 1 : -1) * grid.ToWorld.Column(axis);
        int world = Math.Abs(outward.X) >= Math.Abs(outward.Y) && Math.Abs(outward.X) >= Math.Abs(outward.Z) ? 0 : Math.Abs(outward.Y) >= Math.Abs(outward.Z) ? 1 : 2;
        return outward[world] < 0 ? Sides[world].Low : Sides[world].High;
    }

    private static ((int, int, int) Low, (int, int, int) High)? Box(TissueVolume volume)
    {
        VoxelGrid grid = volume.Grid;
        (int I, int J, int K) low = (int.MaxValue, int.MaxValue, int.MaxValue), high = (-1, -1, -1);
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                ReadOnlySpan<byte> row = volume.Cells.Slice(grid.Index(0, j, k), grid.Nx);
                if (row.IndexOfAnyExcept((byte)0) is >= 0 and int first)
                {
                    low = (Math.Min(low.I, first), Math.Min(low.J, j), Math.Min(low.K, k));
                    high = (Math.Max(high.I, row.LastIndexOfAnyExcept((byte)0)), Math.Max(high.J, j), Math.Max(high.K, k));
                }
            }
        }

        return high.K < 0 ? null : (low, high);
    }

    private static List<TouchedFace> Touched(TissueVolume volume, (int I, int J, int K) low, (int I, int J, int K) high)
    {
        VoxelGrid grid = volume.Grid;
        (int Low, int High, int Size)[] axes = [(low.I, high.I, grid.Nx), (low.J, high.J, grid.Ny), (low.K, high.K, grid.Nz)];
        List<TouchedFace> touched = [];
        for (int axis = 0; axis < 3; axis++)
        {
            foreach (bool atEnd in new[] { false, true })
            {
                if (atEnd ? axes[axis].High == axes[axis].Size - 1 : axes[axis].Low == 0)
                {
                    touched.Add(new(axis, atEnd, Side(grid, axis, atEnd), OnFace(volume, axis, atEnd ? axes[axis].Size - 1 : 0)));
                }
            }
        }

        return touched;
    }

    private static int OnFace(TissueVolume volume, int axis, int layer)
    {
        VoxelGrid grid = volume.Grid;
        (int i0, int i1) = axis == 0 ? (layer, layer) : (0, grid.Nx - 1);
        (int j0, int j1) = axis == 1 ? (layer, layer) : (0, grid.Ny - 1);
        (int k0, int k1) = axis == 2 ? (layer, layer) : (0, grid.Nz - 1);
        int count = 0;
        for (int k = k0; k <= k1; k++)
        {
            for (int j = j0; j <= j1; j++)
            {
                for (int i = i0; i <= i1; i++)
                {
                    count += volume.Cells[grid.Index(i, j, k)] != 0 ? 1 : 0;
                }
            }
        }

        return count;
    }
}
