namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>An operator and its coarser versions, down to one that is inverted as a dense matrix. Shared by all threads; immutable.</summary>
internal sealed class MultigridHierarchy
{
    /// <param name="finest">The operator to solve with.</param>
    /// <param name="threads">Threads for the set-up; the result does not depend on them.</param>
    public MultigridHierarchy(StencilOperator finest, int threads)
    {
        List<StencilOperator> operators = [finest];
        List<GridTransfer> transfers = [];
        while (operators[^1].Grid.Count > DenseCoarseInverse.MostNodes)
        {
            GridTransfer transfer = BlackBoxInterpolation.Of(operators[^1], threads);
            transfers.Add(transfer);
            operators.Add(GalerkinProduct.Of(operators[^1], transfer, threads));
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

    /// <summary>Memory [bytes] of the levels below one of a size, at most: tables and transfers of an eighth, a sixty-fourth and so on, a fifth more for surfaces.</summary>
    public static long PredictCoarse(long nodes) => (long)(1.2 * nodes / 7) * (2 * sizeof(float) * Stencil.Stride + sizeof(int));
}
