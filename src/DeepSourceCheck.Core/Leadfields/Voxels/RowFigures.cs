namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>How the rows were solved for; kept beside them in the cache, so that a result from it can state them.</summary>
/// <param name="MostIterations">Number of iterations of the slowest right-hand side.</param>
/// <param name="LargestResidual">Largest relative residual that was left.</param>
public readonly record struct RowFigures(int MostIterations, double LargestResidual);
