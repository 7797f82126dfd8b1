using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

/// <summary>The solver against a dense factor of the slow twin, and what it must hold to.</summary>
public class VoxelSolverTests
{
    /// <summary>A relative residual of 1e-6 and matrix entries in single precision, at a skull contrast of 179 on grids of ten nodes a side; relative to the largest potential.</summary>
    private const double SolutionTolerance = 3e-5;

    public static TheoryData<string, bool, bool> Cases => HexStiffnessTests.Cases;

    [Theory]
    [MemberData(nameof(Cases))]
    public void Solve_IsTheDenseFactorOfTheSlowTwin(string map, bool adapted, bool anisotropic)
    {
        (HexMesh mesh, ConductivityTensors? tensors) = HexStiffnessTests.Head(map, adapted, anisotropic);
        var solver = new VoxelSolver(mesh, tensors);
        Assert.Equal(1, solver.Pieces);
        double[][] loads = MeshHeads.RandomLoads(solver, 5, 11);
        (double[][] potentials, SolveReport report) = MeshHeads.Solve(solver, loads);
        Matrix<double> slow = PlainFiniteElements.Stiffness(mesh, tensors);
        for (int k = 0; k < loads.Length; k++)
        {
            RelativeAssert.Close(PlainFiniteElements.Solve(slow, loads[k]), potentials[k], SolutionTolerance, $"{map} load {k}");
        }

        Assert.Equal(5, report.Iterations.Count);
        Assert.InRange(report.MostIterations, 2, 30);
        Assert.InRange(report.WorstResidual, 1e-9, 1e-5);
    }

    [Fact]
    public void Solve_OnAGridBelowTheDenseLimit_IsTheDenseFactor()
    {
        HexMesh mesh = HexMesh.Plain(MeshHeads.Layered(6, 5, 6, MeshHeads.Oblique));
        var solver = new VoxelSolver(mesh);
        Assert.Single(solver.LevelNodes);
        double[][] loads = MeshHeads.RandomLoads(solver, 2, 5);
        (double[][] potentials, _) = MeshHeads.Solve(solver, loads);
        Matrix<double> slow = PlainFiniteElements.Stiffness(mesh);
        RelativeAssert.Close(PlainFiniteElements.Solve(slow, loads[1]), potentials[1], SolutionTolerance);
    }

    [Fact]
    public void Solve_GivesTheSameBytesForOneThreadAndThree()
    {
        (HexMesh mesh, ConductivityTensors? tensors) = HexStiffnessTests.Head("oblique", true, true);
        var one = new VoxelSolver(mesh, tensors, threads: 1);
        var three = new VoxelSolver(mesh, tensors, threads: 3);
        double[][] loads = MeshHeads.RandomLoads(one, 71, 2);
        (double[][] first, SolveReport a) = MeshHeads.Solve(one, loads, 1);
        (double[][] second, SolveReport b) = MeshHeads.Solve(three, loads, 3);
        Assert.Equal(a.Iterations, b.Iterations);
        Assert.Equal(a.RelativeResiduals, b.RelativeResiduals);
        for (int k = 0; k < loads.Length; k++)
        {
            Assert.True(first[k].AsSpan().SequenceEqual(second[k]), $"load {k}");
        }
    }

    [Fact]
    public void Solve_OfALoadDoesNotDependOnItsNeighboursInTheBlock()
    {
        (HexMesh mesh, _) = HexStiffnessTests.Head("cubes", true, false);
        var solver = new VoxelSolver(mesh);
        double[][] loads = MeshHeads.RandomLoads(solver, 16, 8);
        (double[][] together, _) = MeshHeads.Solve(solver, loads);
        (double[][] alone, SolveReport report) = MeshHeads.Solve(solver, [loads[3]]);
        Assert.Single(report.Iterations);
        RelativeAssert.Close(together[3], alone[0], SolutionTolerance);
    }

    [Fact]
    public void Solve_OfZero_IsZero()
    {
        (HexMesh mesh, _) = HexStiffnessTests.Head("cubes", false, false);
        var solver = new VoxelSolver(mesh);
        (double[][] potentials, SolveReport report) = MeshHeads.Solve(solver, [new double[mesh.Nodes.Count]]);
        Assert.All(potentials[0], v => Assert.Equal(0.0, v));
        Assert.Equal(0, report.MostIterations);
        Assert.Equal(0.0, report.WorstResidual);
    }

    [Fact]
    public void Solve_WithUnconnectedPieces_LeavesThoseWithoutLoadAtZero()
    {
        (HexMesh mesh, int[] main, int[] island) = Islands();
        var solver = new VoxelSolver(mesh);
        Assert.Equal(2, solver.Pieces);
        var load = new double[mesh.Nodes.Count];
        (load[main[3]], load[main[^5]]) = (1, -1);
        (double[][] potentials, SolveReport report) = MeshHeads.Solve(solver, [load]);
        Assert.All(island, n => Assert.Equal(0.0, potentials[0][n]));
        Assert.True(Math.Abs(main.Sum(n => potentials[0][n])) < 1e-5 * main.Sum(n => Math.Abs(potentials[0][n])));
        Assert.InRange(report.MostIterations, 2, 20);

        // The piece alone gives the same potentials: nothing leaks across the gap.
        var cells = mesh.Volume.Cells.ToArray();
        cells[^1] = 0;
        HexMesh alone = HexMesh.Plain(new TissueVolume(mesh.Volume.Grid, cells, MeshHeads.Tissues));
        var moved = new double[alone.Nodes.Count];
        foreach (int n in main)
        {
            (int x, int y, int z) = mesh.Nodes.Node(n);
            moved[alone.Nodes.IndexOf(x, y, z)] = load[n];
        }

        (double[][] expected, _) = MeshHeads.Solve(new VoxelSolver(alone), [moved]);
        double[] there = [.. main.Select(n => mesh.Nodes.Node(n)).Select(p => expected[0][alone.Nodes.IndexOf(p.X, p.Y, p.Z)])];
        RelativeAssert.Close(there, [.. main.Select(n => potentials[0][n])], SolutionTolerance);
    }

    [Fact]
    public void Solve_OfALoadWithNetCurrentInAPiece_IsRefused()
    {
        (HexMesh mesh, int[] main, int[] island) = Islands();
        var load = new double[mesh.Nodes.Count];
        (load[main[0]], load[island[0]]) = (1, -1);
        InvalidOperationException error = Assert.Throws<InvalidOperationException>(() => MeshHeads.Solve(new VoxelSolver(mesh), [new double[load.Length], load]));
        Assert.Contains("Right-hand side 1 ", error.Message, StringComparison.Ordinal);
        Assert.Contains("2 pieces", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Solve_ThatMayNotIterate_ThrowsWithNumbersAndCauses()
    {
        (HexMesh mesh, _) = HexStiffnessTests.Head("cubes", true, false);
        var solver = new VoxelSolver(mesh, settings: new SolveSettings(1e-6, 2));
        NoConvergenceException error = Assert.Throws<NoConvergenceException>(() => MeshHeads.Solve(solver, MeshHeads.RandomLoads(solver, 3, 1)));
        Assert.Equal(2, error.Iterations);
        Assert.Equal([0, 1, 2], error.RightHandSides.Order());
        Assert.InRange(error.Residual, 1e-6, 1);
        Assert.Contains("after 2 cycles", error.Message, StringComparison.Ordinal);
        Assert.Contains("Likely causes", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Solve_WhenCancelled_Stops()
    {
        (HexMesh mesh, _) = HexStiffnessTests.Head("cubes", true, false);
        var solver = new VoxelSolver(mesh);
        using var cancel = new CancellationTokenSource();
        var loads = new MeshHeads.Loads(MeshHeads.RandomLoads(solver, 64, 1));
        int taken = 0;
        Assert.Throws<OperationCanceledException>(() => solver.Solve(loads, (_, _) => taken++, 1, _ => cancel.Cancel(), cancel.Token));
        Assert.Equal(1, taken);
    }

    [Fact]
    public void Solve_WhenTheTakerFails_HandsItsFailureOn()
    {
        (HexMesh mesh, _) = HexStiffnessTests.Head("cubes", true, false);
        var solver = new VoxelSolver(mesh);
        var loads = new MeshHeads.Loads(MeshHeads.RandomLoads(solver, 64, 1));
        Assert.Throws<IOException>(() => solver.Solve(loads, (_, _) => throw new IOException("full"), 2));
    }

    [Fact]
    public void Solve_TellsItsProgressInOrder()
    {
        (HexMesh mesh, _) = HexStiffnessTests.Head("cubes", true, false);
        var solver = new VoxelSolver(mesh);
        List<double> shares = [];
        solver.Solve(new MeshHeads.Loads(MeshHeads.RandomLoads(solver, 50, 1)), (_, _) => { }, 2, shares.Add);
        Assert.Equal([0.25, 0.5, 0.75, 1.0], shares);
    }

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Predict_IsAboveWhatIsTaken(bool adapted)
    {
        HexMesh mesh = HexMesh.Plain(MeshHeads.Layered(31, 28, 33, MeshHeads.Cubes));
        mesh = adapted ? AdaptedNodes.Adapt(mesh) : mesh;
        var solver = new VoxelSolver(mesh);
        using var vectors = new CycleVectors(solver.Levels);
        long taken = solver.Bytes + 2 * vectors.Bytes, predicted = VoxelSolver.Predict(mesh, 2);
        Assert.InRange(predicted, taken, taken + taken / 2);
    }

    private static (HexMesh Mesh, int[] Main, int[] Island) Islands()
    {
        var grid = new VoxelGrid(12, 11, 9, MeshHeads.Cubes);
        var cells = new byte[grid.Count];
        for (int v = 0; v < cells.Length; v++)
        {
            (int i, int j, int k) = grid.Voxel(v);
            cells[v] = (byte)(i < 9 && j < 9 && k < 7 ? 1 + (i + j) / 5 : 0);
        }

        cells[^1] = 4;                                  // one voxel in the far corner: a piece of eight nodes
        HexMesh mesh = HexMesh.Plain(new TissueVolume(grid, cells, MeshHeads.Tissues));
        StencilOperator a = HexStiffness.Assemble(mesh, null, 1);
        int[] live = [.. Enumerable.Range(0, mesh.Nodes.Count).Where(a.IsLive)];
        return (mesh, [.. live.Where(n => mesh.Nodes.Node(n).X < 10)], [.. live.Where(n => mesh.Nodes.Node(n).X > 10)]);
    }
}
