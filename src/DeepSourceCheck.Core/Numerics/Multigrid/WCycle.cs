namespace DeepSourceCheck.Core.Numerics.Multigrid;

// WCycle.cs - the multigrid cycle.
//   forward sweep from z = 0, or from what z holds;  restrict b - A z;  the next level twice (once where it is inverted);  z += P z_coarse;  backward sweep
// Forward before and backward after the correction: the cycle is a symmetric operator and serves conjugate gradients. Planes are fused: a plane's residual is restricted one
// plane behind the sweep, a plane is swept backward right after the one below it was corrected, so that each vector comes from memory once a pass.
// Source: [Trottenberg, Oosterlee, Schueller 2001], chapter 2.

/// <summary>W-cycles on a hierarchy.</summary>
internal static unsafe class WCycle
{
    /// <summary>Z[level] approximates the solution for B[level].</summary>
    /// <param name="levels">Operators.</param>
    /// <param name="v">Vectors of the thread.</param>
    /// <param name="level">Level.</param>
    /// <param name="fromZero">True to begin with z = 0, whatever the vector holds.</param>
    public static void Cycle(MultigridHierarchy levels, CycleVectors v, int level, bool fromZero)
    {
        if (level == levels.Levels - 1)
        {
            levels.Coarsest.Apply(v.B[level].At, v.Z[level].At);
            return;
        }

        StencilOperator a = levels.Operators[level];
        v.B[level + 1].Span.Clear();
        for (int plane = 0; plane < a.Grid.Nz; plane++)
        {
            Forward(a, v, level, plane, fromZero);
            RestrictResidual(levels, v, level, plane - 1, fromZero);
        }

        RestrictResidual(levels, v, level, a.Grid.Nz - 1, fromZero);
        Correct(levels, v, level);
        Prolong(levels, v, level, a.Grid.Nz - 1);
        for (int plane = a.Grid.Nz - 1; plane >= 0; plane--)
        {
            Prolong(levels, v, level, plane - 1);
            Backward(a, v, level, plane);
        }
    }

    /// <summary>Z[level + 1] from B[level + 1]: two cycles, or the inverse.</summary>
    public static void Correct(MultigridHierarchy levels, CycleVectors v, int level)
    {
        Cycle(levels, v, level + 1, true);
        if (level + 1 < levels.Levels - 1)
        {
            Cycle(levels, v, level + 1, false);
        }
    }

    /// <summary>Adds to B[level + 1] what one plane of residuals restricts to; the sweep must have passed the plane behind it.</summary>
    public static void RestrictResidual(MultigridHierarchy levels, CycleVectors v, int level, int plane, bool sweptFromZero)
    {
        StencilOperator a = levels.Operators[level];
        for (int y = 0; plane >= 0 && y < a.Grid.Ny; y++)
        {
            a.Rows.Row(y, plane, out int start, out int length);
            if (length == 0)
            {
                continue;
            }

            int row = y + a.Grid.Ny * plane;
            if (sweptFromZero)
            {
                GaussSeidel.ResidualAfterForwardFromZero(a, row, start, length, v.Z[level].At, v.Row.At);
            }
            else
            {
                StencilProduct.Residual(a, row, start, length, v.B[level].At, v.Z[level].At, v.Row.At);
            }

            levels.Transfers[level].Restrict(y, plane, v.Row.At, v.B[level + 1].At);
        }
    }

    /// <summary>Z[level] += interpolation of Z[level + 1] on one plane.</summary>
    public static void Prolong(MultigridHierarchy levels, CycleVectors v, int level, int plane)
    {
        RowGrid grid = levels.Operators[level].Grid;
        for (int y = 0; plane >= 0 && y < grid.Ny; y++)
        {
            levels.Operators[level].Rows.Row(y, plane, out _, out int length);
            if (length > 0)
            {
                levels.Transfers[level].Prolong(y, plane, v.Z[level + 1].At, v.Z[level].At, add: true);
            }
        }
    }

    private static void Forward(StencilOperator a, CycleVectors v, int level, int plane, bool fromZero)
    {
        for (int y = 0; y < a.Grid.Ny; y++)
        {
            a.Rows.Row(y, plane, out int start, out int length);
            if (fromZero)
            {
                GaussSeidel.ForwardFromZero(a, y + a.Grid.Ny * plane, start, length, v.B[level].At, v.Z[level].At);
            }
            else
            {
                GaussSeidel.Forward(a, y + a.Grid.Ny * plane, start, length, v.B[level].At, v.Z[level].At);
            }
        }
    }

    private static void Backward(StencilOperator a, CycleVectors v, int level, int plane)
    {
        for (int y = a.Grid.Ny - 1; y >= 0; y--)
        {
            a.Rows.Row(y, plane, out int start, out int length);
            GaussSeidel.Backward(a, y + a.Grid.Ny * plane, start, length, v.B[level].At, v.Z[level].At);
        }
    }
}
