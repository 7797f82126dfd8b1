namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>A start for the iteration from the coarser grids: the right-hand side is restricted down all levels, solved on the coarsest, and each level up improves it by one cycle.</summary>
/// <remarks>At equal residual the smooth part of the error is about ten times smaller than after a start from zero. Source: [Trottenberg, Oosterlee, Schueller 2001], section 2.6.</remarks>
internal static unsafe class NestedIteration
{
    /// <summary>Overwrites the solution with a first approximation for the load; uses the vectors of the coarser levels.</summary>
    public static void Start(MultigridHierarchy levels, CycleVectors v)
    {
        int last = levels.Levels - 1;
        for (int level = 0; level < last; level++)
        {
            levels.Transfers[level].RestrictAll(level == 0 ? v.Load : v.B[level], v.B[level + 1]);
        }

        if (last == 0)
        {
            levels.Coarsest.Apply(v.Load.At, v.Solution.At);
            return;
        }

        WCycle.Cycle(levels, v, last, true);
        for (int level = last - 1; level >= 0; level--)
        {
            levels.Transfers[level].ProlongAll(v.Z[level + 1], level == 0 ? v.Solution : v.Z[level]);
            if (level > 0)
            {
                WCycle.Cycle(levels, v, level, false);
            }
        }
    }
}
