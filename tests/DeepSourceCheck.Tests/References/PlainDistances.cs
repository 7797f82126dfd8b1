using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Tests.References;

/// <summary>Distances and pieces of voxel sets by trying everything: slow, plain, never to be tidied into the fast ones.</summary>
internal static class PlainDistances
{
    /// <summary>Distance [m] of each voxel's centre to the nearest centre of the set: the least over all of them.</summary>
    public static double[] ToSet(VoxelGrid grid, Func<int, bool> inSet)
    {
        List<Vec3> set = [];
        for (int at = 0; at < grid.Count; at++)
        {
            if (inSet(at))
            {
                set.Add(Centre(grid, at));
            }
        }

        var distance = new double[grid.Count];
        for (int at = 0; at < grid.Count; at++)
        {
            distance[at] = double.PositiveInfinity;
            foreach (Vec3 other in set)
            {
                distance[at] = Math.Min(distance[at], (Centre(grid, at) - other).Norm);
            }
        }

        return distance;
    }

    /// <summary>Pieces as sorted lists of positions in memory, by flooding from each voxel in turn.</summary>
    public static List<List<int>> Pieces(VoxelGrid grid, Func<int, bool> inSet, bool corners)
    {
        HashSet<int> seen = [];
        List<List<int>> pieces = [];
        for (int start = 0; start < grid.Count; start++)
        {
            if (!inSet(start) || !seen.Add(start))
            {
                continue;
            }

            List<int> piece = [start];
            for (int next = 0; next < piece.Count; next++)
            {
                (int i, int j, int k) = grid.Voxel(piece[next]);
                for (int dk = -1; dk <= 1; dk++)
                {
                    for (int dj = -1; dj <= 1; dj++)
                    {
                        for (int di = -1; di <= 1; di++)
                        {
                            bool beside = corners || Math.Abs(di) + Math.Abs(dj) + Math.Abs(dk) == 1;
                            bool within = i + di >= 0 && i + di < grid.Nx && j + dj >= 0 && j + dj < grid.Ny && k + dk >= 0 && k + dk < grid.Nz;
                            if (beside && within && grid.Index(i + di, j + dj, k + dk) is var at && inSet(at) && seen.Add(at))
                            {
                                piece.Add(at);
                            }
                        }
                    }
                }
            }

            pieces.Add([.. piece.Order()]);
        }

        return pieces;
    }

    private static Vec3 Centre(VoxelGrid grid, int at)
    {
        (int i, int j, int k) = grid.Voxel(at);
        return grid.Centre(i, j, k);
    }
}
