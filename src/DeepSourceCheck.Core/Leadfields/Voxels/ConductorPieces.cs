using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>The unconnected pieces of a conductor: elements that share a node belong together. No current passes between pieces, so a load must sum to zero over each.</summary>
internal sealed class ConductorPieces
{
    private readonly int[] _pieces;

    /// <param name="mesh">Elements.</param>
    public ConductorPieces(HexMesh mesh)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        RowGrid nodes = mesh.Nodes;
        ReadOnlySpan<byte> cells = mesh.Volume.Cells;
        var parent = new int[nodes.Count];
        Array.Fill(parent, -1);                               // in no element
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                for (int i = 0; i < grid.Nx; i++)
                {
                    if (cells[grid.Index(i, j, k)] == 0)
                    {
                        continue;
                    }

                    int first = nodes.IndexOf(i, j, k);
                    for (int pair = 0; pair < 4; pair++)
                    {
                        int at = nodes.IndexOf(i, j + (pair & 1), k + (pair >> 1));
                        Join(parent, first, at);
                        Join(parent, first, at + 1);
                    }
                }
            }
        }

        // Roots are the lowest nodes of their pieces: they are met first.
        _pieces = new int[parent.Length];
        for (int n = 0; n < parent.Length; n++)
        {
            int root = parent[n] < 0 ? -1 : Root(parent, n);
            _pieces[n] = root < 0 ? -1 : root == n ? Count++ : _pieces[root];
        }
    }

    /// <summary>Number of pieces.</summary>
    public int Count { get; }

    /// <summary>Piece of a node, in the order of their first nodes; -1 for a node of no element.</summary>
    public int Of(int node) => _pieces[node];

    private static void Join(int[] parent, int a, int b)
    {
        (int ra, int rb) = (Root(parent, a), Root(parent, b));
        parent[Math.Max(ra, rb)] = Math.Min(ra, rb);
    }

    private static int Root(int[] parent, int n)
    {
        if (parent[n] < 0)
        {
            parent[n] = n;
        }

        while (parent[n] != n)
        {
            parent[n] = parent[parent[n]];
            n = parent[n];
        }

        return n;
    }
}
