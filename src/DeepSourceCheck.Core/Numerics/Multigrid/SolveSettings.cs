namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>When a solution counts as found.</summary>
/// <param name="Tolerance">Largest residual relative to the right-hand side, Euclidean norms in double precision; 1e-6 gives every leadfield to better than 1e-4.</param>
/// <param name="MostIterations">Cycles after which the solver gives up, number of.</param>
public sealed record SolveSettings(double Tolerance = 1e-6, int MostIterations = 100)
{
    /// <summary>What every head is solved with.</summary>
    public static readonly SolveSettings Default = new();
}
