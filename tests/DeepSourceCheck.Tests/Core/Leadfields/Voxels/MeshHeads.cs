using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

/// <summary>Small labelled volumes: unequal extents, so that a swapped axis cannot hide.</summary>
internal static class MeshHeads
{
    /// <summary>2 mm cubes.</summary>
    public static readonly Affine Cubes = new(new(0.002, 0, 0), new(0, 0.002, 0), new(0, 0, 0.002), new(-0.01, 0.02, 0.005));

    /// <summary>Voxels of 1 x 2 x 3 mm.</summary>
    public static readonly Affine Flat = new(new(0.001, 0, 0), new(0, 0.002, 0), new(0, 0, 0.003), Vec3.Zero);

    /// <summary>Sheared, rotated, mirrored voxels.</summary>
    public static readonly Affine Oblique = new(new(-0.0019, 0.0004, 0.0002), new(0.0005, 0.0018, -0.0006), new(0.0001, 0.0007, 0.0022), new(0.03, -0.01, 0.02));

    public static readonly Tissue[] Tissues =
    [
        new(0, "air", TissueKind.Air, 0), new(1, "scalp", TissueKind.Scalp, 0.43), new(2, "skull", TissueKind.Skull, 0.01),
        new(3, "csf", TissueKind.Csf, 1.79), new(4, "grey", TissueKind.Grey, 0.33),
    ];

    /// <summary>A layered ellipsoid with a little hole of air beside its middle.</summary>
    public static TissueVolume Layered(int nx, int ny, int nz, Affine map)
    {
        var grid = new VoxelGrid(nx, ny, nz, map);
        var cells = new byte[grid.Count];
        for (int v = 0; v < cells.Length; v++)
        {
            (int i, int j, int k) = grid.Voxel(v);
            Vec3 unit = new((i + 0.5) / nx * 2 - 1, (j + 0.5) / ny * 2 - 1, (k + 0.5) / nz * 2 - 1);
            double hole = (unit - new Vec3(0.2, 0.1, 0)).Norm;
            cells[v] = (byte)(hole < 0.2 ? 0 : new[] { 1.0, 0.85, 0.7, 0.55 }.Count(r => unit.Norm < r));
        }

        return new TissueVolume(grid, cells, Tissues);
    }

    /// <summary>A box of one tissue.</summary>
    public static TissueVolume Box(int nx, int ny, int nz, Affine map) => new(new(nx, ny, nz, map), [.. Enumerable.Repeat((byte)4, nx * ny * nz)], Tissues);

    /// <summary>Tensors for every voxel of grey matter, turning from voxel to voxel.</summary>
    public static ConductivityTensors Tensors(TissueVolume volume)
    {
        var has = new ulong[(volume.Grid.Count + 63) / 64];
        List<float> values = [];
        for (int v = 0; v < volume.Grid.Count; v++)
        {
            if (volume.Cells[v] == 4)
            {
                has[v >> 6] |= 1UL << v;
                Vec3 d = GoldenSpiral.Point(v % 97, 97);
                values.AddRange([(float)(0.1 + 0.6 * d.X * d.X), (float)(0.6 * d.X * d.Y), (float)(0.1 + 0.6 * d.Y * d.Y),
                    (float)(0.6 * d.X * d.Z), (float)(0.6 * d.Y * d.Z), (float)(0.1 + 0.6 * d.Z * d.Z)]);
            }
        }

        return new(has, [.. values]);
    }

    /// <summary>Loads held in memory.</summary>
    public sealed class Loads(double[][] loads) : ILoadBlocks
    {
        public int Count => loads.Length;

        public void Fill(int block, Span<float> values)
        {
            values.Clear();
            for (int lane = 0; lane < ILoadBlocks.Lanes && block * ILoadBlocks.Lanes + lane < loads.Length; lane++)
            {
                double[] load = loads[block * ILoadBlocks.Lanes + lane];
                for (int n = 0; n < load.Length; n++)
                {
                    values[n * ILoadBlocks.Lanes + lane] = (float)load[n];
                }
            }
        }
    }

    /// <summary>Solutions of some loads.</summary>
    public static (double[][] Potentials, SolveReport Report) Solve(VoxelSolver solver, double[][] loads, int threads = 1)
    {
        double[][] potentials = [.. loads.Select(_ => new double[solver.Mesh.Nodes.Count])];
        SolveReport report = solver.Solve(new Loads(loads), (block, values) =>
        {
            for (int lane = 0; lane < ILoadBlocks.Lanes && block * ILoadBlocks.Lanes + lane < loads.Length; lane++)
            {
                double[] potential = potentials[block * ILoadBlocks.Lanes + lane];
                for (int n = 0; n < potential.Length; n++)
                {
                    potential[n] = values[n * ILoadBlocks.Lanes + lane];
                }
            }
        }, threads);
        return (potentials, report);
    }

    /// <summary>Random loads without sum on nodes that have elements, from a seed.</summary>
    public static double[][] RandomLoads(VoxelSolver solver, int count, int seed)
    {
        var random = new Random(seed);
        StencilOperator a = solver.Levels.Operators[0];
        int[] live = [.. Enumerable.Range(0, a.Grid.Count).Where(a.IsLive)];
        return [.. Enumerable.Range(0, count).Select(k =>
        {
            var load = new double[a.Grid.Count];
            foreach (int n in k % 2 == 0 ? [live[random.Next(live.Length)], live[random.Next(live.Length)]] : live)
            {
                load[n] += random.NextDouble() - 0.5;
            }

            double mean = load.Sum() / live.Length;
            foreach (int n in live)
            {
                load[n] -= mean;
            }

            return load;
        })];
    }
}
