using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Tests.Core.Leadfields.Voxels;

namespace DeepSourceCheck.Verification.Voxels;

/// <summary>Cycles until a relative residual of 1e-6 on the layered sphere 92/86/80/78 mm, 0.43/skull/1.79/0.33 S/m, a common literature standard: flat as the voxel shrinks.</summary>
public class IterationCountTests
{
    /// <summary>Most cycles of pairs of points on any of the grids; multigrid theory asks for a bound that does not grow, this one is what the grids here show plus one.</summary>
    private const int MostCycles = 10;

    [Theory]
    [InlineData(false, false)]
    [InlineData(true, false)]
    [InlineData(true, true)]
    public void Cycles_DoNotGrowAsTheVoxelShrinks(bool adapted, bool anisotropic)
    {
        int[] cycles = [.. new[] { 0.008, 0.004, 0.0023 }.Select(edge => Cycles(edge, 0.01, adapted, anisotropic))];
        Assert.True(cycles[^1] <= cycles.Max() && cycles[^1] <= cycles[1] + 1, $"cycles {string.Join(", ", cycles)}");
        Assert.All(cycles, c => Assert.InRange(c, 3, MostCycles));
    }

    [Theory]
    [InlineData(0.004, 20)]
    [InlineData(0.001, 20)]
    public void Cycles_StayBoundedForAPoorlyConductingSkull(double skull, int most) => Assert.InRange(Cycles(0.004, skull, true, false), 3, most - 1);

    private static int Cycles(double edge, double skull, bool adapted, bool anisotropic)
    {
        double[] radii = [0.092, 0.086, 0.080, 0.078];
        int half = (int)Math.Ceiling(radii[0] / edge) + 1;
        double corner = -(half - 0.5) * edge;
        var grid = new VoxelGrid(2 * half, 2 * half, 2 * half, new(new(edge, 0, 0), new(0, edge, 0), new(0, 0, edge), new(corner, corner, corner)));
        byte[] cells = [.. Enumerable.Range(0, grid.Count).Select(v => grid.Voxel(v)).Select(v => (byte)radii.Count(r => grid.Centre(v.I, v.J, v.K).Norm < r))];
        Tissue[] tissues = [.. MeshHeads.Tissues.Select(t => t.Kind == TissueKind.Skull ? t with { Conductivity = skull } : t)];
        var volume = new TissueVolume(grid, cells, tissues);
        HexMesh mesh = HexMesh.Plain(volume);
        var solver = new VoxelSolver(adapted ? AdaptedNodes.Adapt(mesh) : mesh, anisotropic ? MeshHeads.Tensors(volume) : null, threads: 2);
        var loads = new double[16][];
        int reference = Surface(mesh, new(0, 0, 1));
        for (int k = 0; k < loads.Length; k++)
        {
            loads[k] = new double[mesh.Nodes.Count];
            loads[k][Surface(mesh, GoldenSpiral.Point(k + 1, 18, -0.5))] += 1;
            loads[k][reference] -= 1;
        }

        (_, SolveReport report) = MeshHeads.Solve(solver, loads);
        return report.MostIterations;
    }

    /// <summary>The outermost node of an element along a direction.</summary>
    private static int Surface(HexMesh mesh, Vec3 direction)
    {
        VoxelGrid grid = mesh.Volume.Grid;
        for (double radius = 0.1; ; radius -= 0.0003)
        {
            int voxel = grid.IndexAt(radius * direction);
            if (voxel >= 0 && mesh.Volume.Cells[voxel] != 0)
            {
                (int i, int j, int k) = grid.Voxel(voxel);
                return mesh.Nodes.IndexOf(i, j, k);
            }
        }
    }
}
