namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>Solves A x = b for many right-hand sides in blocks of sixteen, blocks side by side on threads.</summary>
/// <remarks>Each block is solved by one thread alone: the same bytes for any number of threads.</remarks>
internal sealed class BlockSolver
{
    private readonly Pieces _pieces;

    /// <param name="finest">A.</param>
    /// <param name="settings">When a solution counts as found.</param>
    /// <param name="threads">Threads for the set-up; the result does not depend on them.</param>
    public BlockSolver(StencilOperator finest, SolveSettings settings, int threads)
    {
        _pieces = Pieces.Of(finest);
        (Levels, Settings) = (new MultigridHierarchy(finest, threads), settings);
    }

    /// <summary>A and its coarser versions.</summary>
    public MultigridHierarchy Levels { get; }

    /// <summary>When a solution counts as found.</summary>
    public SolveSettings Settings { get; }

    /// <summary>Unconnected pieces of A, number of.</summary>
    public int PieceCount => _pieces.Count;

    /// <summary>Solves for all loads.</summary>
    /// <param name="loads">Right-hand sides.</param>
    /// <param name="take">Gets each block: its number, [node][lane] values with mean zero over each piece; several threads may call at once, each with its own block, in any order.</param>
    /// <param name="threads">Threads, at least 1.</param>
    /// <param name="progress">Gets the share that is done, from 0 to 1, never falling; may be called from any of the threads, one at a time.</param>
    /// <param name="cancellation">Stops between cycles.</param>
    /// <exception cref="NoConvergenceException">A right-hand side did not reach the tolerance.</exception>
    /// <exception cref="InvalidOperationException">A right-hand side has no solution: it brings a net current into an unconnected piece.</exception>
    public SolveReport Solve(ILoadBlocks loads, Action<int, ReadOnlySpan<float>> take, int threads, Action<double>? progress, CancellationToken cancellation)
    {
        int blocks = (loads.Count + ILoadBlocks.Lanes - 1) / ILoadBlocks.Lanes;
        var iterations = new int[loads.Count];
        var residuals = new double[loads.Count];
        int next = -1, done = 0;
        object gate = new();
        var failures = new Exception?[blocks];
        using var stop = CancellationTokenSource.CreateLinkedTokenSource(cancellation);
        var workers = new Thread[Math.Clamp(threads, 1, Math.Max(1, blocks))];
        for (int t = 0; t < workers.Length; t++)
        {
            workers[t] = new Thread(Work) { IsBackground = true };
            workers[t].Start();
        }

        Array.ForEach(workers, w => w.Join());
        cancellation.ThrowIfCancellationRequested();
        if (failures.FirstOrDefault(f => f is not null) is { } failure)
        {
            System.Runtime.ExceptionServices.ExceptionDispatchInfo.Throw(failure);
        }

        return new SolveReport(iterations, residuals);

        void Work()
        {
            int block = -1;
            try
            {
                using var vectors = new CycleVectors(Levels);
                var solver = new BlockConjugateGradient(Levels, vectors, _pieces, Settings);
                while ((block = Interlocked.Increment(ref next)) < blocks)
                {
                    loads.Fill(block, vectors.Load.Span);
                    solver.Solve(block * ILoadBlocks.Lanes, stop.Token);
                    take(block, vectors.Solution.Span);
                    int first = block * ILoadBlocks.Lanes, count = Math.Min(ILoadBlocks.Lanes, loads.Count - first);
                    solver.Iterations.AsSpan(0, count).CopyTo(iterations.AsSpan(first));
                    solver.Residuals.AsSpan(0, count).CopyTo(residuals.AsSpan(first));
                    lock (gate)
                    {
                        done++;
                        progress?.Invoke((double)done / blocks);
                    }
                }
            }
            catch (OperationCanceledException) when (stop.IsCancellationRequested)
            {
                // The reason is the caller's, or the failure that another thread recorded.
            }
            catch (Exception error)
            {
                failures[Math.Max(0, block)] = error;
                stop.Cancel();
            }
        }
    }
}
