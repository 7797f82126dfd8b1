namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>Where the rows of nodes and their eight neighbouring rows lie in memory.</summary>
internal sealed unsafe class StencilRows
{
    /// <summary>A row and its neighbours.</summary>
    public const int Around = 9;

    private readonly int[] _starts;
    private readonly nint[] _steps;

    public StencilRows(RowGrid grid)
    {
        (Ny, Nz) = (grid.Ny, grid.Nz);
        _starts = new int[2 * Ny * Nz];
        _steps = GC.AllocateArray<nint>(Around * Ny * Nz, pinned: true);
        for (int row = 0; row < Ny * Nz; row++)
        {
            int y = row % Ny, z = row / Ny;
            (_, int length, int offset) = grid.Row(y, z);
            (_starts[2 * row], _starts[2 * row + 1]) = (offset, length);
            if (grid.Base(y, z) is not int own)
            {
                continue;
            }

            for (int k = 0; k < Around; k++)
            {
                // A row that is not there has zero coefficients: any memory that may be read serves.
                _steps[Around * row + k] = ((grid.Base(y + k % 3 - 1, z + k / 3 - 1) ?? own) - own) * (nint)ILoadBlocks.Lanes;
            }
        }

        Steps = (nint*)System.Runtime.CompilerServices.Unsafe.AsPointer(ref System.Runtime.InteropServices.MemoryMarshal.GetArrayDataReference(_steps));
    }

    /// <summary>Rows of a plane.</summary>
    public int Ny { get; }

    /// <summary>Planes.</summary>
    public int Nz { get; }

    /// <summary>For each row, floats from a node to the one at the same x in row (dy + 1) + 3 (dz + 1) around it.</summary>
    public nint* Steps { get; }

    /// <summary>Number of the first node of a row, and its nodes.</summary>
    public void Row(int y, int z, out int start, out int length)
    {
        int row = y + Ny * z;
        (start, length) = (_starts[2 * row], _starts[2 * row + 1]);
    }
}
