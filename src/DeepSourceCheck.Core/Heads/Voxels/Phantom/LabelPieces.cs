using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>Pieces of equal label that hang together by faces; small ones take the label around them.</summary>
/// <remarks>Runs along the first axis are joined by union-find, in memory order: the result does not depend on threads.</remarks>
internal static class LabelPieces
{
    private const int Labels = 256;

    /// <summary>Gives every piece of fewer than <paramref name="smallest"/> voxels the label that most of its outer faces touch.</summary>
    public static void Absorb(byte[] labels, VoxelGrid grid, int smallest)
    {
        (int[] runStart, int[] rowRun) = Runs(labels, grid);
        int runs = runStart.Length - 1;
        int[] parent = new int[runs], size = new int[runs];
        for (int r = 0; r < runs; r++)
        {
            (parent[r], size[r]) = (r, runStart[r + 1] - runStart[r]);
        }

        for (int k = 0, row = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++, row++)
            {
                if (j > 0)
                {
                    Join(row - 1, row);
                }

                if (k > 0)
                {
                    Join(row - grid.Ny, row);
                }
            }
        }

        Dictionary<int, int[]> faces = [];
        for (int r = 0; r < runs; r++)
        {
            int root = Root(parent, r);
            if (size[root] < smallest)
            {
                if (!faces.TryGetValue(root, out int[]? count))
                {
                    faces[root] = count = new int[Labels];
                }

                Count(labels, grid, runStart[r], runStart[r + 1], count);
            }
        }

        for (int r = 0; r < runs; r++)
        {
            if (faces.TryGetValue(Root(parent, r), out int[]? count))
            {
                labels.AsSpan(runStart[r], runStart[r + 1] - runStart[r]).Fill((byte)Array.IndexOf(count, count.Max()));
            }
        }

        void Join(int rowA, int rowB)
        {
            int a = rowRun[rowA], b = rowRun[rowB], startA = rowA * grid.Nx, startB = rowB * grid.Nx;
            while (a < rowRun[rowA + 1] && b < rowRun[rowB + 1])
            {
                if (labels[runStart[a]] == labels[runStart[b]] && runStart[a] - startA < runStart[b + 1] - startB && runStart[b] - startB < runStart[a + 1] - startA)
                {
                    Unite(parent, size, a, b);
                }

                if (runStart[a + 1] - startA < runStart[b + 1] - startB)
                {
                    a++;
                }
                else
                {
                    b++;
                }
            }
        }
    }

    /// <summary>Where each run begins (with the end of the last), and the first run of each row (with the number of runs).</summary>
    private static (int[] RunStart, int[] RowRun) Runs(byte[] labels, VoxelGrid grid)
    {
        List<int> starts = [];
        int[] rowRun = new int[grid.Ny * grid.Nz + 1];
        for (int row = 0; row < grid.Ny * grid.Nz; row++)
        {
            rowRun[row] = starts.Count;
            int from = row * grid.Nx;
            starts.Add(from);
            for (int n = from + 1; n < from + grid.Nx; n++)
            {
                if (labels[n] != labels[n - 1])
                {
                    starts.Add(n);
                }
            }
        }

        rowRun[^1] = starts.Count;
        starts.Add(labels.Length);
        return ([.. starts], rowRun);
    }

    private static void Count(byte[] labels, VoxelGrid grid, int from, int to, int[] count)
    {
        byte own = labels[from];
        int nx = grid.Nx, nxy = grid.Nx * grid.Ny;
        for (int n = from; n < to; n++)
        {
            (int i, int j, int k) = grid.Voxel(n);
            Face(i > 0, n - 1);
            Face(i < nx - 1, n + 1);
            Face(j > 0, n - nx);
            Face(j < grid.Ny - 1, n + nx);
            Face(k > 0, n - nxy);
            Face(k < grid.Nz - 1, n + nxy);
        }

        void Face(bool there, int neighbour)
        {
            if (there && labels[neighbour] != own)
            {
                count[labels[neighbour]]++;
            }
        }
    }

    private static int Root(int[] parent, int r)
    {
        while (parent[r] != r)
        {
            parent[r] = parent[parent[r]];
            r = parent[r];
        }

        return r;
    }

    private static void Unite(int[] parent, int[] size, int a, int b)
    {
        (a, b) = (Root(parent, a), Root(parent, b));
        if (a != b)
        {
            (a, b) = a < b ? (a, b) : (b, a);
            parent[b] = a;
            size[a] += size[b];
        }
    }
}
