namespace DeepSourceCheck.Core.Numerics.Multigrid;

// StencilOperator.cs - a symmetric matrix on a RowGrid whose rows sum to zero.
//   (A u)_i = sum over the 26 neighbours k of w_k (u_i - u_k),  w_k = -a_ik
// Only the 26 couplings w are kept; the diagonal is their sum, so constants are annihilated whatever the rounding. Equal rows share one entry of a table.

/// <summary>A symmetric 27-point operator with rows that sum to zero; nodes that share a row of coefficients share its memory.</summary>
/// <remarks>Coefficients have the unit of the assembled matrix, S for conductances. Immutable once built.</remarks>
internal sealed unsafe class StencilOperator
{
    private readonly float[] _table;
    private readonly int[] _index;

    /// <param name="grid">The nodes.</param>
    /// <param name="table">Pinned; rows of <see cref="Stencil.Stride"/> floats: the couplings w, at the centre 1 / sum w (0 where the sum is not positive).</param>
    /// <param name="index">Pinned; row of the table of each node.</param>
    public StencilOperator(RowGrid grid, float[] table, int[] index)
    {
        if (index.Length != grid.Count)
        {
            throw new ArgumentException($"{index.Length} rows for {grid.Count} nodes.", nameof(index));
        }

        (Grid, _table, _index) = (grid, table, index);
        Table = (float*)System.Runtime.CompilerServices.Unsafe.AsPointer(ref System.Runtime.InteropServices.MemoryMarshal.GetArrayDataReference(table));
        Index = (int*)System.Runtime.CompilerServices.Unsafe.AsPointer(ref System.Runtime.InteropServices.MemoryMarshal.GetArrayDataReference(index));
        Rows = new StencilRows(grid);
    }

    /// <summary>The nodes.</summary>
    public RowGrid Grid { get; }

    /// <summary>Where the neighbours of each row of nodes lie in memory.</summary>
    public StencilRows Rows { get; }

    /// <summary>The table's first coefficient; the array behind it is pinned and lives as long as this object.</summary>
    public float* Table { get; }

    /// <summary>Row of the table of node 0.</summary>
    public int* Index { get; }

    /// <summary>Rows of the table.</summary>
    public int Distinct => _table.Length / Stencil.Stride;

    /// <summary>Memory [bytes].</summary>
    public long Bytes => 4L * _table.Length + 4L * _index.Length;

    /// <summary>Couplings of a node, the reciprocal of their sum at the centre.</summary>
    public ReadOnlySpan<float> Row(int node) => _table.AsSpan(_index[node] * Stencil.Stride, Stencil.Size);

    /// <summary>True where a node has any coupling.</summary>
    public bool IsLive(int node) => Row(node)[Stencil.Centre] > 0;

    /// <summary>Writes the reciprocal of the diagonal into a row of couplings.</summary>
    public static void Close(Span<float> row)
    {
        double diagonal = 0;
        for (int k = 0; k < Stencil.Size; k++)
        {
            diagonal += k == Stencil.Centre ? 0 : row[k];
        }

        row[Stencil.Centre] = diagonal > 0 ? (float)(1.0 / diagonal) : 0;
    }

    /// <summary>The largest a_ii.</summary>
    public double LargestDiagonal()
    {
        double least = double.PositiveInfinity;
        for (int at = Stencil.Centre; at < _table.Length; at += Stencil.Stride)
        {
            least = _table[at] > 0 ? Math.Min(least, _table[at]) : least;
        }

        return 1 / least;
    }

    /// <summary>a_ii: the sum of the couplings.</summary>
    public static double Diagonal(ReadOnlySpan<float> row)
    {
        double diagonal = 0;
        for (int k = 0; k < Stencil.Size; k++)
        {
            diagonal += k == Stencil.Centre ? 0 : row[k];
        }

        return diagonal;
    }
}
