namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>An operator and its coarser versions, down to one that is inverted as a dense matrix. Shared by all threads; immutable.</summary>
internal sealed class MultigridHierarchy
{
    /// <summary>Couplings of coarse levels below this share of the largest diagonal count as none.</summary>
    private const double Negligible = 1e-12;

    /// <param name="finest">The operator to solve with.</param>
    /// <param name="threads">Threads for the set-up; the result does not depend on them.</param>
    public MultigridHierarchy(StencilOperator finest, int threads)
    {
        List<StencilOperator> operators = [finest];
        List<GridTransfer> transfers = [];
        double negligible = Negligible * finest.LargestDiagonal();
        while (operators[^1].Grid.Count > DenseCoarseInverse.MostNodes)
        {
            GridTransfer transfer = BlackBoxInterpolation.Of(operators[^1], threads);
            transfers.Add(transfer);
            operators.Add(GalerkinProduct.Of(operators[^1], transfer, negligible, threads));
        }

        (Operators, Transfers, Coarsest) = ([.. operators], [.. transfers], new DenseCoarseInverse(operators[^1]));
    }

    /// <summary>Operators, the finest first.</summary>
    public StencilOperator[] Operators { get; }

    /// <summary>Transfers from each level to the next coarser one.</summary>
    public GridTransfer[] Transfers { get; }

    /// <summary>Inverse of the last operator.</summary>
    public DenseCoarseInverse Coarsest { get; }

    /// <summary>Levels.</summary>
    public int Levels => Operators.Length;

    /// <summary>Memory [bytes].</summary>
    public long Bytes => Operators.Sum(o => o.Bytes) + Transfers.Sum(t => t.Bytes);

    /// <summary>The grids of all levels, the finest first.</summary>
    public static IReadOnlyList<RowGrid> Grids(RowGrid finest)
    {
        List<RowGrid> grids = [finest];
        while (grids[^1].Count > DenseCoarseInverse.MostNodes)
        {
            grids.Add(grids[^1].Coarsened());
        }

        return grids;
    }

    /// <summary>Memory [bytes] that the coarser levels of some grids will take.</summary>
    public static long PredictCoarse(IReadOnlyList<RowGrid> grids) => grids.Skip(1).Sum(g => g.Count * (2L * sizeof(float) * Stencil.Stride + sizeof(int)));
}
