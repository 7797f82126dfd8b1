namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>The unconnected pieces of a grid: nodes that couplings join. Each piece has a constant of its own in the operator's kernel; a node without couplings is in none.</summary>
internal sealed class Pieces
{
    private readonly int[]? _pieces;

    private Pieces(int[]? pieces, int[] sizes)
    {
        Sizes = sizes;
        if (pieces is not null)
        {
            _pieces = GC.AllocateUninitializedArray<int>(pieces.Length, pinned: true);
            pieces.CopyTo(_pieces, 0);
        }
    }

    /// <summary>Piece of node 0 and on; null where all nodes are of piece 0. Lives as long as this object.</summary>
    public unsafe int* Map => _pieces is null ? null : (int*)System.Runtime.CompilerServices.Unsafe.AsPointer(ref System.Runtime.InteropServices.MemoryMarshal.GetArrayDataReference(_pieces));

    /// <summary>Nodes of each piece, in the order of their first nodes.</summary>
    public IReadOnlyList<int> Sizes { get; }

    /// <summary>Number of pieces.</summary>
    public int Count => Sizes.Count;

    /// <summary>True where all nodes belong to one piece: <see cref="Of(int)"/> then is 0 throughout.</summary>
    public bool IsWhole => _pieces is null;

    /// <summary>Piece of a node; -1 for a node without couplings.</summary>
    public int Of(int node) => _pieces is null ? 0 : _pieces[node];

    /// <summary>Finds the pieces by joining nodes along their couplings.</summary>
    public static Pieces Of(StencilOperator a)
    {
        RowGrid grid = a.Grid;
        var parent = new int[grid.Count];
        for (int n = 0; n < parent.Length; n++)
        {
            parent[n] = n;
        }

        Span<int> steps = stackalloc int[Stencil.Centre];
        for (int z = 0; z < grid.Nz; z++)
        {
            for (int y = 0; y < grid.Ny; y++)
            {
                (_, int length, int offset) = grid.Row(y, z);
                if (length == 0)
                {
                    continue;
                }

                int own = grid.Base(y, z)!.Value;
                for (int k = 0; k < Stencil.Centre; k++)
                {
                    (int dx, int dy, int dz) = Stencil.Step(k);
                    steps[k] = (grid.Base(y + dy, z + dz) ?? own) - own + dx;
                }

                for (int node = offset; node < offset + length; node++)
                {
                    ReadOnlySpan<float> row = a.Row(node);
                    for (int k = 0; k < Stencil.Centre; k++)
                    {
                        if (row[k] != 0)
                        {
                            Join(parent, node, node + steps[k]);
                        }
                    }
                }
            }
        }

        return Named(a, parent);
    }

    private static Pieces Named(StencilOperator a, int[] parent)
    {
        List<int> sizes = [];
        bool dead = false;
        var piece = new int[parent.Length];
        for (int n = 0; n < parent.Length; n++)
        {
            int root = Root(parent, n);              // roots are the lowest nodes of their pieces: seen first
            if (!a.IsLive(n))
            {
                piece[n] = -1;
                dead = true;
                continue;
            }

            if (root == n)
            {
                piece[n] = sizes.Count;
                sizes.Add(0);
            }

            piece[n] = piece[root];
            sizes[piece[n]]++;
        }

        return new(sizes.Count == 1 && !dead ? null : piece, [.. sizes]);
    }

    private static void Join(int[] parent, int a, int b)
    {
        (int ra, int rb) = (Root(parent, a), Root(parent, b));
        parent[Math.Max(ra, rb)] = Math.Min(ra, rb);
    }

    private static int Root(int[] parent, int n)
    {
        while (parent[n] != n)
        {
            parent[n] = parent[parent[n]];
            n = parent[n];
        }

        return n;
    }
}
