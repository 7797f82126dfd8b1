using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// VoxelSolver.cs - potentials in a labelled head.
//   div(sigma grad u) = -s,  no flux through the surface;  Galerkin on trilinear hexahedra gives K u = b  [Wolters, Grasedyck, Hackbusch 2004]
//   K: HexStiffness; solved by conjugate gradients with multigrid W-cycles, sixteen right-hand sides at a time (Numerics/Multigrid).

/// <summary>Solves K u = b on a mesh, K [S] its stiffness matrix, for any number of right-hand sides.</summary>
/// <remarks>
/// Solutions have mean zero over the nodes of each unconnected piece of the head: a piece that no load reaches stays at zero, one that a load leaves with a net current is refused.
/// Nodes that no element touches stay at zero. The same bytes for any number of threads.
/// </remarks>
public sealed class VoxelSolver
{
    private readonly BlockSolver _solver;

    /// <summary>Assembles the matrix and sets the solver up.</summary>
    /// <param name="mesh">Elements and nodes.</param>
    /// <param name="tensors">Conductivity tensors of some voxels in world axes, or null.</param>
    /// <param name="settings">When a solution counts as found; null for the default.</param>
    /// <param name="threads">Threads for assembly and set-up; the result does not depend on them.</param>
    public VoxelSolver(HexMesh mesh, ConductivityTensors? tensors = null, SolveSettings? settings = null, int threads = 1)
    {
        Mesh = mesh;
        _solver = new BlockSolver(HexStiffness.Assemble(mesh, tensors, threads), settings ?? SolveSettings.Default, threads);
    }

    /// <summary>Elements and nodes.</summary>
    public HexMesh Mesh { get; }

    /// <summary>Unconnected pieces of the conductor, number of.</summary>
    public int Pieces => _solver.PieceCount;

    /// <summary>Nodes of each level, the finest first, number of.</summary>
    public IReadOnlyList<int> LevelNodes => [.. _solver.Levels.Operators.Select(o => o.Grid.Count)];

    /// <summary>Memory that matrix and coarser levels take [bytes].</summary>
    public long Bytes => _solver.Levels.Bytes;

    internal MultigridHierarchy Levels => _solver.Levels;

    /// <summary>Memory [bytes] that set-up and solution will take at most, before any of it is taken.</summary>
    /// <param name="mesh">Elements and nodes.</param>
    /// <param name="threads">Threads of the solution.</param>
    /// <param name="tensors">Conductivity tensors, or null.</param>
    public static long Predict(HexMesh mesh, int threads, ConductivityTensors? tensors = null)
    {
        var classes = new NodeClasses(mesh, tensors);
        long table = (long)(classes.Shared + classes.Own) * Stencil.Stride * sizeof(float) + mesh.Nodes.Count * (long)sizeof(int);
        long setUp = (mesh.IsAdapted ? 24L * mesh.Nodes.Count : 0) + mesh.Volume.Grid.Count + 4L * mesh.Nodes.Count;
        IReadOnlyList<RowGrid> grids = MultigridHierarchy.Grids(mesh.Nodes);
        return table + setUp + MultigridHierarchy.PredictCoarse(grids) + threads * CycleVectors.Predict(grids);
    }

    /// <summary>Solves for all loads.</summary>
    /// <param name="loads">Right-hand sides [A, or any unit]; each sums to zero over each connected piece.</param>
    /// <param name="take">Gets each block: its number and [node][lane] potentials, 16 lanes a node [V for loads in A]; several threads call at once, each with its own block, in any order.</param>
    /// <param name="threads">Threads, at least 1.</param>
    /// <param name="progress">Gets the share that is done, 0 to 1, never falling; called from any thread, one at a time.</param>
    /// <param name="cancellation">Stops between cycles.</param>
    /// <exception cref="NoConvergenceException">A right-hand side did not reach the tolerance.</exception>
    /// <exception cref="InvalidOperationException">A load brings a net current into a piece that nothing joins to the rest: it has no solution.</exception>
    public SolveReport Solve(
        ILoadBlocks loads, Action<int, ReadOnlySpan<float>> take, int threads, Action<double>? progress = null, CancellationToken cancellation = default) =>
        _solver.Solve(loads, take, threads, progress, cancellation);
}
