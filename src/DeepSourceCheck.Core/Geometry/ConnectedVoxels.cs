namespace DeepSourceCheck.Core.Geometry;

/// <summary>A connected piece of a set of voxels.</summary>
/// <param name="Count">Number of voxels.</param>
/// <param name="Centre">Mean of its voxels' centres [m].</param>
/// <param name="Runs">Its voxels: position in memory of the first of each unbroken run along the first axis, and the run's length; ascending.</param>
public sealed record VoxelPiece(int Count, Vec3 Centre, IReadOnlyList<(int Start, int Length)> Runs);

/// <summary>Splits a set of voxels into its connected pieces.</summary>
/// <remarks>Runs along the first axis are joined with those of the rows before by union and find: time linear in the voxels, memory in the runs.</remarks>
public static class ConnectedVoxels
{
    // Rows before the present one, as steps along the second and third axis: those that share a face, then those that share an edge or corner alone.
    private static readonly (int J, int K)[] FaceRows = [(-1, 0), (0, -1)], AllRows = [(-1, 0), (-1, -1), (0, -1), (1, -1)];

    /// <summary>The pieces, the largest first; of equal ones the one that comes first in memory.</summary>
    /// <param name="grid">Where the voxels lie.</param>
    /// <param name="inSet">Whether the voxel at a position in memory belongs to the set.</param>
    /// <param name="corners">True: voxels that share an edge or a corner hang together too; false: a face.</param>
    public static IReadOnlyList<VoxelPiece> Find(VoxelGrid grid, Func<int, bool> inSet, bool corners)
    {
        (int Start, int Length)[] runs = Runs(grid, inSet, out int[] firstOfRow);
        int[] parent = [.. Enumerable.Range(0, runs.Length)];
        int reach = corners ? 1 : 0;
        (int J, int K)[] rows = corners ? AllRows : FaceRows;
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                foreach ((int dj, int dk) in rows)
                {
                    if ((uint)(j + dj) < (uint)grid.Ny && (uint)(k + dk) < (uint)grid.Nz)
                    {
                        Join(grid, runs, firstOfRow, parent, j + grid.Ny * k, j + dj + grid.Ny * (k + dk), reach);
                    }
                }
            }
        }

        return Gather(grid, runs, parent);
    }

    private static (int Start, int Length)[] Runs(VoxelGrid grid, Func<int, bool> inSet, out int[] firstOfRow)
    {
        List<(int, int)> runs = [];
        firstOfRow = new int[grid.Ny * grid.Nz + 1];
        for (int row = 0; row < grid.Ny * grid.Nz; row++)
        {
            firstOfRow[row] = runs.Count;
            int start = row * grid.Nx, end = start + grid.Nx;
            for (int at = start; at < end; at++)
            {
                if (!inSet(at))
                {
                    continue;
                }

                int from = at;
                while (++at < end && inSet(at))
                {
                }

                runs.Add((from, at - from));
            }
        }

        firstOfRow[^1] = runs.Count;
        return [.. runs];
    }

    /// <summary>Joins the runs of two rows that overlap, <paramref name="reach"/> voxels beyond their ends included.</summary>
    private static void Join(VoxelGrid grid, (int Start, int Length)[] runs, int[] firstOfRow, int[] parent, int row, int other, int reach)
    {
        int a = firstOfRow[row], b = firstOfRow[other];
        while (a < firstOfRow[row + 1] && b < firstOfRow[other + 1])
        {
            int startA = runs[a].Start - row * grid.Nx, startB = runs[b].Start - other * grid.Nx;
            int endA = startA + runs[a].Length, endB = startB + runs[b].Length;
            if (startA < endB + reach && startB < endA + reach)
            {
                int x = Root(parent, a), y = Root(parent, b);
                parent[Math.Max(x, y)] = Math.Min(x, y);
            }

            if (endA < endB)
            {
                a++;
            }
            else
            {
                b++;
            }
        }
    }

    private static int Root(int[] parent, int run)
    {
        while (parent[run] != run)
        {
            run = parent[run] = parent[parent[run]];
        }

        return run;
    }

    private static VoxelPiece[] Gather(VoxelGrid grid, (int Start, int Length)[] runs, int[] parent)
    {
        Dictionary<int, List<(int Start, int Length)>> pieces = [];
        for (int run = 0; run < runs.Length; run++)
        {
            int root = Root(parent, run);
            if (!pieces.TryGetValue(root, out List<(int, int)>? piece))
            {
                pieces[root] = piece = [];
            }

            piece.Add(runs[run]);
        }

        return [.. pieces.Values.Select(piece => Piece(grid, piece)).OrderByDescending(p => p.Count).ThenBy(p => p.Runs[0].Start)];
    }

    private static VoxelPiece Piece(VoxelGrid grid, List<(int Start, int Length)> runs)
    {
        int count = 0;
        double i = 0, j = 0, k = 0;
        foreach ((int start, int length) in runs)
        {
            (int x, int y, int z) = grid.Voxel(start);
            count += length;
            i += length * (x + (length - 1) / 2.0);
            j += length * (double)y;
            k += length * (double)z;
        }

        return new(count, grid.ToWorld.Apply(new(i / count, j / count, k / count)), runs);
    }
}
