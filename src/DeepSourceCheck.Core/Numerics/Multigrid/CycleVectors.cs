namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>What one thread needs to solve for one block of sixteen right-hand sides.</summary>
internal sealed unsafe class CycleVectors : IDisposable
{
    private const int FinestVectors = 5;

    private readonly List<LaneVector> _all = [];

    public CycleVectors(MultigridHierarchy levels)
    {
        RowGrid finest = levels.Operators[0].Grid;
        (Load, Solution, Residual, Direction, Work) = (New(finest), New(finest), New(finest), New(finest), New(finest));
        (B, Z) = (new LaneVector[levels.Levels], new LaneVector[levels.Levels]);
        for (int level = 1; level < levels.Levels; level++)
        {
            (B[level], Z[level]) = (New(levels.Operators[level].Grid), New(levels.Operators[level].Grid));
        }

        (B[0], Z[0]) = (Residual, Work);
        _all.Add(Row = new LaneVector(finest.Nx, 4));
    }

    /// <summary>b.</summary>
    public LaneVector Load { get; }

    /// <summary>x.</summary>
    public LaneVector Solution { get; }

    /// <summary>r = b - A x.</summary>
    public LaneVector Residual { get; }

    /// <summary>p.</summary>
    public LaneVector Direction { get; }

    /// <summary>q = A p and, plane after plane in the same memory, z = M r.</summary>
    public LaneVector Work { get; }

    /// <summary>Right-hand side of each level; the finest is <see cref="Residual"/>.</summary>
    public LaneVector[] B { get; }

    /// <summary>Correction of each level; the finest is <see cref="Work"/>.</summary>
    public LaneVector[] Z { get; }

    /// <summary>Residuals of one row of nodes.</summary>
    public LaneVector Row { get; }

    /// <summary>Memory [bytes].</summary>
    public long Bytes => _all.Sum(v => v.Bytes);

    /// <summary>Memory [bytes] for the grids of all levels, the finest first.</summary>
    public static long Predict(IReadOnlyList<RowGrid> grids) =>
        grids.Select((g, level) => (level == 0 ? FinestVectors : 2) * LaneVector.BytesOf(g.Count, g.Nx + 2)).Sum() + LaneVector.BytesOf(grids[0].Nx, 4);

    /// <inheritdoc/>
    public void Dispose() => _all.ForEach(v => v.Dispose());

    private LaneVector New(RowGrid grid)
    {
        var vector = new LaneVector(grid);
        _all.Add(vector);
        return vector;
    }
}
