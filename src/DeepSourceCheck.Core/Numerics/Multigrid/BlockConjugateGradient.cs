using System.Runtime.Intrinsics;

using static DeepSourceCheck.Core.Numerics.Multigrid.LaneMath;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

// BlockConjugateGradient.cs - conjugate gradients for sixteen right-hand sides side by side, each with its own alpha and beta, preconditioned by one W-cycle M.
//   z = M r;  beta = z.r / (z.r before);  p = z + beta p;  alpha = z.r / p.Ap;  x += alpha p;  r -= alpha A p
// Vectors in single precision, dot products in double. When all lanes have converged, r = b - A x is computed anew in double precision; if it is too large, the iteration goes
// on from there. Three passes over memory an iteration: [r, z forward, restriction], [prolongation, z backward, z.r], [x, p, A p, p.Ap]; z and A p share one vector, since a
// plane of one is read for the last time right before the same plane of the other is written.
// Source: [Hestenes and Stiefel 1952]; [Saad 2003], algorithm 9.1.

/// <summary>Solves for one block at a time with the vectors of one thread.</summary>
internal sealed unsafe class BlockConjugateGradient(MultigridHierarchy levels, CycleVectors v, Pieces pieces, SolveSettings settings)
{
    /// <summary>Residuals from the recurrence must fall this far below the tolerance, since those of the rounded x are a little larger.</summary>
    private const double Margin = 0.8;

    /// <summary>Cycles without a tenth less residual after which the iteration counts as stuck.</summary>
    private const int Patience = 12;

    /// <summary>
    /// Residual that x leaves by being rounded to single precision, relative to the norm of a_ii x_i: half a unit of the last place, 2^-24, for each of the few steps that made it.
    /// Loads that are smooth over the whole head have large potentials for their size and end here; the potential is then right to its last places.
    /// </summary>
    private const double Rounding = 4.0 / (1 << 24);

    /// <summary>A load whose sum over an unconnected piece exceeds this share of its sizes has no solution.</summary>
    private const double LargestNet = 1e-4;

    private readonly Vector512<float>[] _means = new Vector512<float>[pieces.Count];
    private readonly LaneSums[] _totals = new LaneSums[pieces.Count], _shifts = new LaneSums[pieces.Count];
    private readonly double[] _norm = new double[Lanes], _rr = new double[Lanes], _rz = new double[Lanes], _pq = new double[Lanes], _sums = new double[Lanes], _floor = new double[Lanes];
    private readonly float[] _alpha = new float[Lanes], _beta = new float[Lanes];
    private readonly bool[] _done = new bool[Lanes];

    /// <summary>Cycles until each lane had converged.</summary>
    public int[] Iterations { get; } = new int[Lanes];

    /// <summary>Relative residual of each lane, from double precision.</summary>
    public double[] Residuals { get; } = new double[Lanes];

    private StencilOperator A => levels.Operators[0];

    /// <summary>Overwrites Solution for what Load holds, mean zero over each piece; Load loses its means.</summary>
    /// <param name="firstRightHandSide">Index of lane 0, for messages.</param>
    /// <param name="cancellation">Looked at before every cycle.</param>
    public void Solve(int firstRightHandSide, CancellationToken cancellation)
    {
        MeanProjection.Apply(pieces, v.Load, _sums);
        if (Array.FindIndex(_sums, s => s > LargestNet) is >= 0 and int lane)
        {
            throw new InvalidOperationException(FormattableString.Invariant(
                $"Right-hand side {firstRightHandSide + lane} brings a net current of {_sums[lane]:0.0e+0} of its size into a piece of the conductor that nothing joins to the rest ({pieces.Count} pieces)."));
        }

        Dot(v.Load, v.Load, _norm);
        NestedIteration.Start(levels, v);
        MeanProjection.Apply(pieces, v.Solution, _sums);
        StartResidual();
        Array.Clear(Iterations);
        Array.Clear(_floor);
        int total = 0, stuck = 0;
        double least = double.PositiveInfinity;
        while (true)
        {
            total += Iterate(total, cancellation);
            if (ExactResiduals(out double worst))
            {
                break;
            }

            stuck = worst < 0.7 * least ? 0 : stuck + 1;
            least = Math.Min(least, worst);
            if (stuck > 1 || total >= settings.MostIterations || double.IsPositiveInfinity(worst))
            {
                int[] unsolved = [.. Enumerable.Range(0, Lanes).Where(lane => !Holds(lane)).OrderBy(lane => double.IsNaN(Residuals[lane]) ? double.NegativeInfinity : -Residuals[lane])];
                throw new NoConvergenceException([.. unsolved.Select(lane => firstRightHandSide + lane)], total, worst, settings.Tolerance);
            }
        }

        MeanProjection.Apply(pieces, v.Solution, _sums);
    }

    /// <summary>Conjugate gradients from the residual at hand until every lane has converged or is stuck; returns the cycles done.</summary>
    private int Iterate(int before, CancellationToken cancellation)
    {
        double target = Margin * settings.Tolerance;
        Span<double> former = stackalloc double[Lanes];
        Array.Clear(_alpha);
        Array.Clear(_beta);
        Array.Clear(_totals);
        Array.Clear(_shifts);
        double least = double.PositiveInfinity;
        int since = 0;
        for (int lane = 0; lane < Lanes; lane++)
        {
            _done[lane] = _rr[lane] <= Math.Max(target * target * _norm[lane], _floor[lane]);
        }

        for (int cycle = 0; ; cycle++)
        {
            cancellation.ThrowIfCancellationRequested();
            if (cycle == 0)
            {
                SweepDown(Vector512<float>.Zero, _sums);
            }
            else
            {
                SweepDown(Vector512.Create(_alpha), _rr);
            }

            double worst = 0;
            for (int lane = 0; lane < Lanes; lane++)
            {
                bool done = _rr[lane] <= Math.Max(target * target * _norm[lane], 0.25 * _floor[lane]);
                if (done && !_done[lane])
                {
                    Iterations[lane] = before + cycle;
                }

                _done[lane] |= done;
                worst = Math.Max(worst, _done[lane] ? 0 : double.IsNaN(_rr[lane]) ? double.PositiveInfinity : _rr[lane] / _norm[lane]);
            }

            since = worst < 0.8 * least ? 0 : since + 1;
            least = Math.Min(least, worst);
            if (worst == 0 || since > Patience || before + cycle >= settings.MostIterations || double.IsPositiveInfinity(worst))
            {
                LaneUpdates.Add(0, v.Solution.Nodes, Vector512.Create(_alpha), v.Solution.At, v.Direction.At);
                return cycle;
            }

            _rz.CopyTo(former);
            SweepUp(_rz);
            for (int lane = 0; lane < Lanes; lane++)
            {
                _beta[lane] = cycle == 0 || _done[lane] || former[lane] == 0 ? 0 : (float)(_rz[lane] / former[lane]);
            }

            Multiply(Vector512.Create(_alpha), Vector512.Create(_beta), _pq);
            for (int lane = 0; lane < Lanes; lane++)
            {
                _alpha[lane] = _done[lane] || _pq[lane] == 0 ? 0 : (float)(_rz[lane] / _pq[lane]);
            }
        }
    }

    /// <summary>r -= alpha q, r.r; forward sweep for z; restriction of its residual; corrections on the coarser levels.</summary>
    private void SweepDown(Vector512<float> alpha, double[] rr)
    {
        TakeMeans(_totals);
        var sums = default(LaneSums);
        bool direct = levels.Levels == 1;
        if (!direct)
        {
            v.B[1].Span.Clear();
        }

        for (int plane = 0; plane < A.Grid.Nz; plane++)
        {
            for (int y = 0; y < A.Grid.Ny; y++)
            {
                A.Rows.Row(y, plane, out int start, out int length);
                LaneUpdates.ReduceResidual(start, length, alpha, v.Work.At, v.Residual.At, pieces.Map, _means, _totals, ref sums);
                if (!direct)
                {
                    GaussSeidel.ForwardFromZero(A, y + A.Grid.Ny * plane, start, length, v.Residual.At, v.Work.At);
                }
            }

            if (!direct)
            {
                WCycle.RestrictResidual(levels, v, 0, plane - 1, sweptFromZero: true);
            }
        }

        sums.CopyTo(rr);
    }

    /// <summary>The coarser levels; z += P z_coarse; backward sweep; z.r.</summary>
    private void SweepUp(double[] rz)
    {
        if (levels.Levels == 1)
        {
            levels.Coarsest.Apply(v.Residual.At, v.Work.At);
            var direct = default(LaneSums);
            Array.Clear(_shifts);
            LaneUpdates.DotAndTotal(0, v.Work.Nodes, v.Work.At, v.Residual.At, pieces.Map, _shifts, ref direct);
            direct.CopyTo(rz);
            return;
        }

        int last = A.Grid.Nz - 1;
        WCycle.RestrictResidual(levels, v, 0, last, sweptFromZero: true);
        WCycle.Correct(levels, v, 0);
        Array.Clear(_shifts);
        var sums = default(LaneSums);
        WCycle.Prolong(levels, v, 0, last);
        for (int plane = last; plane >= 0; plane--)
        {
            WCycle.Prolong(levels, v, 0, plane - 1);
            for (int y = A.Grid.Ny - 1; y >= 0; y--)
            {
                A.Rows.Row(y, plane, out int start, out int length);
                GaussSeidel.Backward(A, y + A.Grid.Ny * plane, start, length, v.Residual.At, v.Work.At);
                LaneUpdates.DotAndTotal(start, length, v.Work.At, v.Residual.At, pieces.Map, _shifts, ref sums);
            }
        }

        sums.CopyTo(rz);
    }

    /// <summary>x += alpha p; p = z + beta p; q = A p; p.q.</summary>
    private void Multiply(Vector512<float> alpha, Vector512<float> beta, double[] pq)
    {
        TakeMeans(_shifts);
        var sums = default(LaneSums);
        for (int plane = 0; plane <= A.Grid.Nz; plane++)
        {
            for (int y = 0; y < A.Grid.Ny; y++)
            {
                if (plane < A.Grid.Nz)
                {
                    A.Rows.Row(y, plane, out int start, out int length);
                    LaneUpdates.Advance(start, length, alpha, beta, v.Solution.At, v.Direction.At, v.Work.At, pieces.Map, _means);
                }
            }

            for (int y = 0; plane > 0 && y < A.Grid.Ny; y++)
            {
                A.Rows.Row(y, plane - 1, out int start, out int length);
                StencilProduct.Multiply(A, y + A.Grid.Ny * (plane - 1), start, length, v.Direction.At, v.Work.At, ref sums);
            }
        }

        sums.CopyTo(pq);
    }

    /// <summary>
    /// Makes means of totals over each piece; the next pass takes them off. Right-hand sides rounded to single precision are not exactly free of a mean: left in r, it would become a
    /// direction without energy and an alpha without bound; left in z, it would grow in x and drown the differences.
    /// </summary>
    private void TakeMeans(LaneSums[] totals)
    {
        for (int piece = 0; piece < _means.Length; piece++)
        {
            var count = Vector512.Create((double)pieces.Sizes[piece]);
            _means[piece] = Vector512.Narrow(totals[piece].Low / count, totals[piece].High / count);
            totals[piece] = default;
        }
    }

    private void StartResidual()
    {
        var sums = default(LaneSums);
        for (int row = 0; row < A.Grid.Ny * A.Grid.Nz; row++)
        {
            A.Rows.Row(row % A.Grid.Ny, row / A.Grid.Ny, out int start, out int length);
            StencilProduct.Residual(A, row, start, length, v.Load.At, v.Solution.At, v.Residual.At, ref sums);
        }

        sums.CopyTo(_rr);
    }

    /// <summary>r = b - A x in double precision; true when each lane is below the tolerance or at what rounding of x leaves.</summary>
    /// <param name="worst">The largest relative residual of the lanes that are not; infinite where one is not a number.</param>
    private bool ExactResiduals(out double worst)
    {
        LaneSums sums = default, sizes = default;
        for (int row = 0; row < A.Grid.Ny * A.Grid.Nz; row++)
        {
            A.Rows.Row(row % A.Grid.Ny, row / A.Grid.Ny, out int start, out int length);
            StencilProduct.ExactResidual(A, row, start, length, v.Load.At, v.Solution.At, v.Residual.At, ref sums, ref sizes);
        }

        sums.CopyTo(_rr);
        sizes.CopyTo(_sums);
        (bool all, worst) = (true, 0);
        for (int lane = 0; lane < Lanes; lane++)
        {
            Residuals[lane] = _norm[lane] > 0 ? Math.Sqrt(_rr[lane] / _norm[lane]) : 0;
            _floor[lane] = Rounding * Rounding * _sums[lane];
            if (!Holds(lane))
            {
                all = false;
                worst = Math.Max(worst, double.IsNaN(Residuals[lane]) ? double.PositiveInfinity : Residuals[lane]);
            }
        }

        return all;
    }

    // Below the tolerance or at what rounding of x leaves; false for what is not a number.
    private bool Holds(int lane) => Residuals[lane] <= settings.Tolerance || _rr[lane] <= _floor[lane];

    private static void Dot(LaneVector a, LaneVector b, double[] result)
    {
        var sums = default(LaneSums);
        LaneUpdates.Dot(0, a.Nodes, a.At, b.At, ref sums);
        sums.CopyTo(result);
    }
}
