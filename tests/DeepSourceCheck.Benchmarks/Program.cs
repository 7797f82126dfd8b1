using BenchmarkDotNet.Running;

using DeepSourceCheck.Benchmarks;

// kernels: a table of the kernels in a minute; whole: the published program as a process; yardstick: numpy beside the kernels; voxels: the solver of voxel heads; voxels-petsc: the same beside PETSc;
// anything else goes to BenchmarkDotNet, for instance --filter '*'.
switch (args.FirstOrDefault())
{
    case "kernels":
        KernelTable.Print(Console.Out);
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
        BenchmarkSwitcher.FromAssembly(typeof(KernelBenchmarks).Assembly).Run(args);
        return 0;
}
