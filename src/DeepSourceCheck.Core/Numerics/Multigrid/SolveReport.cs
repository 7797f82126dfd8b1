namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>How a solve went.</summary>
/// <param name="Iterations">Cycles until each right-hand side had converged, number of.</param>
/// <param name="RelativeResiduals">Residual of each right-hand side relative to it, from float64 arithmetic; 0 for one that is zero.</param>
public sealed record SolveReport(IReadOnlyList<int> Iterations, IReadOnlyList<double> RelativeResiduals)
{
    /// <summary>Most cycles of any right-hand side.</summary>
    public int MostIterations => Iterations.Count == 0 ? 0 : Iterations.Max();

    /// <summary>Largest relative residual of any right-hand side.</summary>
    public double WorstResidual => RelativeResiduals.Count == 0 ? 0 : RelativeResiduals.Max();
}
