namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>Right-hand sides in blocks of sixteen, interleaved: one 64-byte vector of single precision a node.</summary>
/// <remarks><see cref="Fill"/> may run on several threads at once, each with its own block.</remarks>
public interface ILoadBlocks
{
    /// <summary>Right-hand sides of a block.</summary>
    const int Lanes = 16;

    /// <summary>Number of right-hand sides.</summary>
    int Count { get; }

    /// <summary>Overwrites a block; lanes beyond <see cref="Count"/> are zero. Each right-hand side sums to zero but for rounding.</summary>
    /// <param name="block">0 to (Count - 1) / 16.</param>
    /// <param name="values">[node][lane], nodes as the grid numbers them.</param>
    void Fill(int block, Span<float> values);
}
