namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>The iteration did not reach the residual that was asked for.</summary>
public sealed class NoConvergenceException : Exception
{
    /// <param name="rightHandSides">Indices of the right-hand sides of the block that did not reach it, the worst first; at least one.</param>
    /// <param name="iterations">Cycles done.</param>
    /// <param name="residual">Relative residual that the worst of them reached.</param>
    /// <param name="tolerance">Relative residual asked for.</param>
    public NoConvergenceException(IReadOnlyList<int> rightHandSides, int iterations, double residual, double tolerance)
        : base(FormattableString.Invariant(
            $"Right-hand side {rightHandSides[0]} stands at a relative residual of {residual:0.0e+0} after {iterations} cycles; {tolerance:0.0e+0} was asked for. ")
            + "Likely causes: conductivities that differ by more than a factor of a million, a tensor that hardly conducts along an axis, "
            + "voxels more than about five times as long as wide, or a tolerance below what single precision gives (about 2e-7).")
    {
        (RightHandSides, Iterations, Residual, Tolerance) = (rightHandSides, iterations, residual, tolerance);
    }

    /// <summary>Indices of the right-hand sides that did not reach it, of one block of sixteen, the worst first; other blocks may have failed too.</summary>
    public IReadOnlyList<int> RightHandSides { get; }

    /// <summary>Cycles done, number of.</summary>
    public int Iterations { get; }

    /// <summary>Relative residual that the worst of them reached.</summary>
    public double Residual { get; }

    /// <summary>Relative residual asked for.</summary>
    public double Tolerance { get; }
}
