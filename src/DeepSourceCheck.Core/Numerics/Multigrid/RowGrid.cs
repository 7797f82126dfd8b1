namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>Nodes of a structured grid, one unbroken range of x for each (y, z): neighbours are found by arithmetic, without index lists.</summary>
/// <remarks>
/// Nodes are numbered row after row, x fastest, then y, then z. A range may hold nodes that no element touches (a cavity, a gap between two pieces): they are rows of zeros and stay zero.
/// Immutable.
/// </remarks>
public sealed class RowGrid
{
    private readonly int[] _first, _length, _offset;

    /// <param name="nx">Extent along x [nodes].</param>
    /// <param name="ny">Extent along y [nodes].</param>
    /// <param name="nz">Extent along z [nodes].</param>
    /// <param name="first">First x of row y + ny z; as many as rows; any value where the length is 0.</param>
    /// <param name="length">Nodes of row y + ny z; may be 0.</param>
    /// <exception cref="ArgumentException">Numbers of rows differ, or a range leaves the extent.</exception>
    public RowGrid(int nx, int ny, int nz, int[] first, int[] length)
    {
        if (first.Length != ny * nz || length.Length != ny * nz)
        {
            throw new ArgumentException($"{first.Length} and {length.Length} rows for {ny} x {nz}.", nameof(first));
        }

        (Nx, Ny, Nz, _first, _length) = (nx, ny, nz, first, length);
        _offset = new int[ny * nz + 1];
        for (int row = 0; row < ny * nz; row++)
        {
            if (length[row] < 0 || (length[row] > 0 && (first[row] < 0 || first[row] + length[row] > nx)))
            {
                throw new ArgumentException($"Row {row} runs from {first[row]} over {length[row]} of {nx} nodes.", nameof(length));
            }

            _offset[row + 1] = checked(_offset[row] + length[row]);
        }
    }

    /// <summary>Extent along x [nodes].</summary>
    public int Nx { get; }

    /// <summary>Extent along y [nodes].</summary>
    public int Ny { get; }

    /// <summary>Extent along z [nodes].</summary>
    public int Nz { get; }

    /// <summary>Number of nodes.</summary>
    public int Count => _offset[^1];

    /// <summary>First x of a row; its length; the number of its first node.</summary>
    public (int First, int Length, int Offset) Row(int y, int z)
    {
        int row = y + Ny * z;
        return (_first[row], _length[row], _offset[row]);
    }

    /// <summary>Number of node (x, y, z); -1 where there is none.</summary>
    public int IndexOf(int x, int y, int z)
    {
        if ((uint)y >= (uint)Ny || (uint)z >= (uint)Nz)
        {
            return -1;
        }

        int row = y + Ny * z;
        int at = x - _first[row];
        return (uint)at < (uint)_length[row] ? _offset[row] + at : -1;
    }

    /// <summary>Place of a node.</summary>
    public (int X, int Y, int Z) Node(int index)
    {
        int row = Array.BinarySearch(_offset, index);
        row = row < 0 ? ~row - 1 : row;
        while (_length[row] == 0)
        {
            row++;                       // several rows share an offset where some are empty
        }

        return (_first[row] + index - _offset[row], row % Ny, row / Ny);
    }
}
