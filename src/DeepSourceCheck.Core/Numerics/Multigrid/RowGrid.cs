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

    /// <summary>Number that node (0, y, z) would have: the number of node (x, y, z) is this plus x, wherever the row runs; null for an empty row or one outside the grid.</summary>
    internal int? Base(int y, int z)
    {
        if ((uint)y >= (uint)Ny || (uint)z >= (uint)Nz)
        {
            return null;
        }

        int row = y + Ny * z;
        return _length[row] > 0 ? _offset[row] - _first[row] : null;
    }

    /// <summary>The grid of every second node along each axis, wide enough that each node of this one lies on or between nodes of it.</summary>
    internal RowGrid Coarsened()
    {
        int nx = Nx / 2 + 1, ny = Ny / 2 + 1, nz = Nz / 2 + 1;
        var first = new int[ny * nz];
        var length = new int[ny * nz];
        for (int z = 0; z < nz; z++)
        {
            for (int y = 0; y < ny; y++)
            {
                int from = int.MaxValue, to = -1;
                for (int fz = Math.Max(0, 2 * z - 1); fz <= Math.Min(Nz - 1, 2 * z + 1); fz++)
                {
                    for (int fy = Math.Max(0, 2 * y - 1); fy <= Math.Min(Ny - 1, 2 * y + 1); fy++)
                    {
                        int row = fy + Ny * fz;
                        if (_length[row] > 0)
                        {
                            from = Math.Min(from, _first[row] / 2);
                            to = Math.Max(to, (_first[row] + _length[row]) / 2);
                        }
                    }
                }

                (first[y + ny * z], length[y + ny * z]) = to >= 0 ? (from, to - from + 1) : (0, 0);
            }
        }

        return new RowGrid(nx, ny, nz, first, length);
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
