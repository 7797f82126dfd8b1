using System.Diagnostics;
using System.Globalization;

using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Benchmarks;

/// <summary>Assembly, set-up and solution of the voxel head for 355 right-hand sides.</summary>
internal static class VoxelTable
{
    /// <summary>Heading of the table.</summary>
    internal const string Heading = "case      elements   nodes  set-up  solve s  cpu s  cycles  mean  residual  predicted MB  peak MB";

    /// <summary>Prints one line a case: <c>voxels [MILLIMETRES] [THREADS] [plain|adapted|tensors|thin]...</c>.</summary>
    public static int Run(string[] args, TextWriter output)
    {
        double edge = args.Length > 0 ? double.Parse(args[0], CultureInfo.InvariantCulture) / 1000 : 0.002;
        int threads = args.Length > 1 ? int.Parse(args[1], CultureInfo.InvariantCulture) : 2;
        output.WriteLine(Heading);
        foreach (string name in args.Length > 2 ? args[2..] : ["plain", "adapted", "tensors", "thin"])
        {
            Case(name, edge, threads, output);
        }

        return 0;
    }

    /// <summary>Prints the line of a case; returns seconds from the mesh to the last potential.</summary>
    internal static double Case(string name, double edge, int threads, TextWriter output)
    {
        TissueVolume volume = VoxelWork.Sphere(edge, name == "thin" ? 0.004 : 0.01);
        HexMesh mesh = HexMesh.Plain(volume);
        ConductivityTensors? tensors = name == "tensors" ? VoxelWork.WhiteTensors(volume) : null;
        var work = new VoxelWork(mesh);
        using var self = Process.GetCurrentProcess();
        TimeSpan cpu = self.TotalProcessorTime;
        long start = Stopwatch.GetTimestamp();
        if (name != "plain")
        {
            mesh = AdaptedNodes.Adapt(mesh);
        }

        long predicted = VoxelSolver.Predict(mesh, threads, tensors);
        var solver = new VoxelSolver(mesh, tensors, null, threads);
        double setUp = Stopwatch.GetElapsedTime(start).TotalSeconds;
        start = Stopwatch.GetTimestamp();
        SolveReport report = solver.Solve(work, (_, _) => { }, threads);
        double solve = Stopwatch.GetElapsedTime(start).TotalSeconds;
        self.Refresh();
        output.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"{name,-8} {volume.Cells.Length - volume.Cells.Count((byte)0),9} {mesh.Nodes.Count,8} {setUp,6:0.00} {solve,8:0.00} {(self.TotalProcessorTime - cpu).TotalSeconds,6:0.0} "
            + $"{report.MostIterations,6} {report.Iterations.Average(),6:0.0} {report.WorstResidual,9:0.0e+0} {predicted >> 20,9} {self.PeakWorkingSet64 >> 20,11}"));
        return setUp + solve;
    }
}
