using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Tests.References;

/// <summary>Pieces of equal label that hang together by faces, found by filling from voxel to voxel: the slow twin of run-length union-find.</summary>
internal static class PlainPieces
{
    /// <summary>Number of the piece of each voxel, and the voxels of each piece, in the order in which memory meets them.</summary>
    public static (int[] Piece, List<List<int>> Voxels) Of(ReadOnlySpan<byte> labels, VoxelGrid grid)
    {
        int[] piece = new int[labels.Length];
        Array.Fill(piece, -1);
        List<List<int>> pieces = [];
        Stack<int> open = [];
        for (int start = 0; start < labels.Length; start++)
        {
            if (piece[start] >= 0)
            {
                continue;
            }

            List<int> voxels = [];
            piece[start] = pieces.Count;
            open.Push(start);
            while (open.TryPop(out int at))
            {
                voxels.Add(at);
                foreach (int n in Neighbours(at, grid))
                {
                    if (piece[n] < 0 && labels[n] == labels[at])
                    {
                        piece[n] = pieces.Count;
                        open.Push(n);
                    }
                }
            }

            pieces.Add(voxels);
        }

        return (piece, pieces);
    }

    /// <summary>Voxels that share a face.</summary>
    public static IEnumerable<int> Neighbours(int at, VoxelGrid grid)
    {
        (int i, int j, int k) = grid.Voxel(at);
        if (i > 0) { yield return at - 1; }
        if (i < grid.Nx - 1) { yield return at + 1; }
        if (j > 0) { yield return at - grid.Nx; }
        if (j < grid.Ny - 1) { yield return at + grid.Nx; }
        if (k > 0) { yield return at - grid.Nx * grid.Ny; }
        if (k < grid.Nz - 1) { yield return at + grid.Nx * grid.Ny; }
    }

    /// <summary>The labels after each piece of fewer than <paramref name="smallest"/> voxels took the label that most of its outer faces touch (of equals the smallest label).</summary>
    public static byte[] Absorbed(byte[] labels, VoxelGrid grid, int smallest)
    {
        byte[] result = [.. labels];
        foreach (List<int> voxels in Of(labels, grid).Voxels.Where(v => v.Count < smallest))
        {
            byte own = labels[voxels[0]];
            byte around = voxels.SelectMany(v => Neighbours(v, grid)).Select(n => labels[n]).Where(l => l != own).GroupBy(l => l)
                .OrderByDescending(g => g.Count()).ThenBy(g => g.Key).First().Key;
            voxels.ForEach(v => result[v] = around);
        }

        return result;
    }
}
