using BenchmarkDotNet.Configs;
using BenchmarkDotNet.Running;

using DeepSourceCheck.Benchmarks;

// kernels: a table of the kernels at every width of registers, in a minute; whole: the published program as a process; yardstick: numpy beside the kernels;
// voxels: the solver of voxel heads; voxels-petsc: the same beside PETSc;
// anything else goes to BenchmarkDotNet, for instance --filter '*'.
switch (args.FirstOrDefault())
{
    case "kernels":
        KernelTable.Print(Console.Out);
        return 0;
    case KernelTable.LinesArgument:
        KernelTable.PrintLines(Console.Out);
        return 0;
    case "whole":
        return WholeProcess.Run(args[1..], Console.Out);
    case "yardstick":
        return Yardstick.Run(Console.Out);
    case "voxels":
        return VoxelTable.Run(args[1..], Console.Out);
    case "voxels-petsc":
        return VoxelPetsc.Run(args[1..], Console.Out);
    default:
        // Its logs and tables go beside the program: the folder of the repository stays clean.
        BenchmarkSwitcher.FromAssembly(typeof(KernelBenchmarks).Assembly)
            .Run(args, DefaultConfig.Instance.WithArtifactsPath(Path.Combine(AppContext.BaseDirectory, "BenchmarkDotNet.Artifacts")));
        return 0;
}
