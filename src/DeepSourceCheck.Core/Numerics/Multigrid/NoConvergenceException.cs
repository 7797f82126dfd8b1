namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>The iteration did not reach the residual that was asked for.</summary>
public sealed class NoConvergenceException : Exception
{
    /// <param name="rightHandSide">Index of the right-hand side.</param>
    /// <param name="iterations">Cycles done.</param>
    /// <param name="residual">Relative residual reached.</param>
    /// <param name="tolerance">Relative residual asked for.</param>
    public NoConvergenceException(int rightHandSide, int iterations, double residual, double tolerance)
        : base(FormattableString.Invariant(
            $"Right-hand side {rightHandSide} stands at a relative residual of {residual:0.0e+0} after {iterations} cycles; {tolerance:0.0e+0} was asked for. ")
            + "Likely causes: conductivities that differ by more than a factor of a million, a tensor that hardly conducts along an axis, "
            + "voxels more than about five times as long as wide, or a tolerance below what single precision gives (about 2e-7).")
    {
        (RightHandSide, Iterations, Residual, Tolerance) = (rightHandSide, iterations, residual, tolerance);
    }

    /// <summary>Index of the right-hand side.</summary>
    public int RightHandSide { get; }

    /// <summary>Cycles done, number of.</summary>
    public int Iterations { get; }

    /// <summary>Relative residual reached.</summary>
    public double Residual { get; }

    /// <summary>Relative residual asked for.</summary>
    public double Tolerance { get; }
}
