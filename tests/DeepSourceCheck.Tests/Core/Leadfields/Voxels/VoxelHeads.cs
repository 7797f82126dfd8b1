using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Tests.References;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

/// <summary>Small invented heads for the tests of loads and rows: shells with dents, unequal and oblique voxels, moved nodes.</summary>
internal static class VoxelHeads
{
    /// <summary>Cubic voxels of 8 mm along the axes.</summary>
    public static Affine Cubic { get; } = new(new(0.008, 0, 0), new(0, 0.008, 0), new(0, 0, 0.008), new(-0.04, -0.04, -0.04));

    /// <summary>Voxels of 7, 8 and 9 mm, turned about an axis of neither frame and slightly sheared.</summary>
    public static Affine Oblique { get; } = Turned(new(new(0.007, 0.0004, 0), new(0, 0.008, 0.0003), new(0, 0, 0.009), new(-0.035, -0.04, -0.045)));

    /// <summary>The same with the first axis mirrored: a left-handed frame.</summary>
    public static Affine Mirrored { get; } = new(-1 * Oblique.Row0, Oblique.Row1, Oblique.Row2, new(-Oblique.Offset.X, Oblique.Offset.Y, Oblique.Offset.Z));

    /// <summary>Five tissues: scalp 0.43, skull 0.01, CSF 1.79, grey 0.33, white 0.14 S/m, times a factor.</summary>
    public static Tissue[] Tissues(double factor = 1) =>
    [
        new(0, "air", TissueKind.Air, 0), new(1, "scalp", TissueKind.Scalp, 0.43 * factor), new(2, "skull", TissueKind.Skull, 0.01 * factor),
        new(3, "csf", TissueKind.Csf, 1.79 * factor), new(4, "grey", TissueKind.Grey, 0.33 * factor), new(5, "white", TissueKind.White, 0.14 * factor),
    ];

    /// <summary>Shells around the middle of a box of nx x ny x nz voxels, one voxel each, the inner ones with dents.</summary>
    public static TissueVolume Shells(Affine affine, int nx = 12, int ny = 11, int nz = 10, Tissue[]? tissues = null)
    {
        VoxelGrid grid = new(nx, ny, nz, affine);
        var cells = new byte[grid.Count];
        for (int cell = 0; cell < cells.Length; cell++)
        {
            (int i, int j, int k) = grid.Voxel(cell);
            int depth = Math.Min(Math.Min(Math.Min(i, nx - 1 - i), Math.Min(j, ny - 1 - j)), Math.Min(k, nz - 1 - k));
            int dent = (7 * i + 5 * j + 3 * k) % 11 == 0 ? 1 : 0;
            bool cutAway = i + j + k < 4 || i + j + k > nx + ny + nz - 6;
            cells[cell] = cutAway ? (byte)0 : (byte)Math.Min(5, depth >= 3 ? depth + 1 - dent : depth + 1);
        }

        return new(grid, cells, tissues ?? Tissues());
    }

    /// <summary>The mesh with every node that touches two tissues moved by up to a third of a voxel, by a fixed rule.</summary>
    public static HexMesh Shifted(TissueVolume volume)
    {
        HexMesh plain = HexMesh.Plain(volume);
        var shifts = new Vec3[plain.Nodes.Count];
        VoxelGrid grid = volume.Grid;
        for (int n = 0; n < shifts.Length; n++)
        {
            (int x, int y, int z) = plain.Nodes.Node(n);
            HashSet<int> around = [];
            for (int c = 0; c < 8; c++)
            {
                (int i, int j, int k) = (x - (c & 1), y - (c >> 1 & 1), z - (c >> 2));
                bool outside = i < 0 || j < 0 || k < 0 || i >= grid.Nx || j >= grid.Ny || k >= grid.Nz;
                around.Add(outside ? 0 : volume.Cells[grid.Index(i, j, k)]);
            }

            shifts[n] = around.Count < 2 ? Vec3.Zero : grid.ToWorld.ApplyLinear(0.3 * new Vec3(Math.Sin(3 * n), Math.Sin(5 * n + 1), Math.Sin(7 * n + 2)));
        }

        return plain.Adapted(shifts);
    }

    /// <summary>Tensors for the white matter: 0.65 along an axis that turns from voxel to voxel, 0.065 S/m across.</summary>
    public static ConductivityTensors WhiteTensors(TissueVolume volume)
    {
        var has = new ulong[(volume.Grid.Count + 63) / 64];
        List<float> values = [];
        for (int cell = 0; cell < volume.Grid.Count; cell++)
        {
            if (volume.Tissues[volume.Cells[cell]].Kind == TissueKind.White)
            {
                has[cell >> 6] |= 1UL << cell;
                Vec3 a = new Vec3(Math.Sin(cell), Math.Cos(2 * cell), 0.5).Unit();
                const float Across = 0.065f, More = 0.65f - 0.065f;
                values.AddRange([Across + More * (float)(a.X * a.X), More * (float)(a.X * a.Y), Across + More * (float)(a.Y * a.Y), More * (float)(a.X * a.Z), More * (float)(a.Y * a.Z), Across + More * (float)(a.Z * a.Z)]);
            }
        }

        return new(has, [.. values]);
    }

    /// <summary>Electrodes just off the surface, and one within the head.</summary>
    public static Electrode[] Electrodes(TissueVolume volume, int count)
    {
        Vec3 middle = Middle(volume);
        return [.. Enumerable.Range(0, count).Select(k => new Electrode($"E{k + 1}", middle + (k == count - 1 ? 0.011 : 0.06) * GoldenSpiral.Point(k, count, -1), true, 0))];
    }

    /// <summary>Magnetometers, axial and planar gradiometers 140 mm from the middle, with 1, 2 and 2 points.</summary>
    public static MegChannel[] Channels(TissueVolume volume, int count, double radius = 0.14)
    {
        Vec3 middle = Middle(volume);
        return [.. Enumerable.Range(0, count).Select(k =>
        {
            Vec3 up = GoldenSpiral.Point(k, count, -0.9), across = Vec3.Cross(up, new(0.3, 0.5, -0.8)).Unit(), site = middle + radius * up, axis = (up + 0.4 * across).Unit();
            return (k % 3) switch
            {
                0 => new MegChannel($"M{k}", CoilKind.Magnetometer, [new(site, axis, 1)]),
                1 => new MegChannel($"A{k}", CoilKind.AxialGradiometer, [new(site, axis, 1), new(site + 0.05 * axis, axis, -1)]),
                _ => new MegChannel($"P{k}", CoilKind.PlanarGradiometer, [new(site + 0.0075 * across, axis, 1 / 0.015), new(site - 0.0075 * across, axis, -1 / 0.015)]),
            };
        })];
    }

    public static Vec3 Middle(TissueVolume volume) =>
        volume.Grid.ToWorld.Apply(new((volume.Grid.Nx - 1) / 2.0, (volume.Grid.Ny - 1) / 2.0, (volume.Grid.Nz - 1) / 2.0));

    /// <summary>Points in source tissue, at no special place of their voxels.</summary>
    public static Vec3[] Dipoles(TissueVolume volume, int count)
    {
        int[] voxels = [.. Enumerable.Range(0, volume.Grid.Count).Where(c => SourceTissue.Admits(volume.Tissues[volume.Cells[c]].Kind))];
        return [.. Enumerable.Range(0, count).Select(d =>
        {
            (int i, int j, int k) = volume.Grid.Voxel(voxels[d * voxels.Length / count]);
            return volume.Grid.ToWorld.Apply(new(i + 0.45 * Math.Sin(d + 1), j + 0.45 * Math.Sin(2 * d + 1), k + 0.45 * Math.Cos(3 * d)));
        })];
    }

    /// <summary>Transfer rows, solved for by the slow twin in double precision.</summary>
    public static TransferRows Rows(HexMesh mesh, ConductivityTensors? tensors, Electrode[] electrodes, MegChannel[] channels, KeptNodes? kept = null)
    {
        SensorLoads loads = new(new(mesh, electrodes), new(mesh, channels, tensors));
        TransferRows rows = new(kept ?? KeptNodes.All(new(mesh)), electrodes.Length, channels.Length);
        PlainHexSystem system = new(mesh, tensors);
        var load = new float[mesh.Nodes.Count * ILoadBlocks.Lanes];
        var solved = new float[load.Length];
        for (int block = 0; block * ILoadBlocks.Lanes < loads.Count; block++)
        {
            loads.Fill(block, load);
            for (int lane = 0; lane < ILoadBlocks.Lanes; lane++)
            {
                double[] solution = block * ILoadBlocks.Lanes + lane < loads.Count ? system.Solve(Lane(load, lane)) : new double[mesh.Nodes.Count];
                for (int n = 0; n < solution.Length; n++)
                {
                    solved[n * ILoadBlocks.Lanes + lane] = (float)solution[n];
                }
            }

            rows.Take(block, solved);
        }

        return rows;
    }

    /// <summary>The map followed by a turn about the origin.</summary>
    private static Affine Turned(Affine map)
    {
        Rotation rotation = Rotation.FromFixedAxes(0.3, -0.5, 0.7);
        Vec3 a = rotation.Apply(map.Column(0)), b = rotation.Apply(map.Column(1)), c = rotation.Apply(map.Column(2));
        return new(new(a.X, b.X, c.X), new(a.Y, b.Y, c.Y), new(a.Z, b.Z, c.Z), rotation.Apply(map.Offset));
    }

    /// <summary>One lane of a block.</summary>
    public static double[] Lane(float[] block, int lane) => [.. Enumerable.Range(0, block.Length / ILoadBlocks.Lanes).Select(n => (double)block[n * ILoadBlocks.Lanes + lane])];

    /// <summary>Leadfields of points: [dipole][row * 3 + axis].</summary>
    public static (double[][] Eeg, double[][] Meg) Compute(ILeadfieldSource source, IReadOnlyList<Vec3> positions)
    {
        LeadfieldBlock block = new(source.EegRows, source.MegRows);
        double[][] eeg = new double[positions.Count][], meg = new double[positions.Count][];
        for (int first = 0; first < positions.Count; first += LeadfieldBlock.Lanes)
        {
            Vec3[] some = [.. positions.Skip(first).Take(LeadfieldBlock.Lanes)];
            block.Load(some, default);
            source.Fill(block);
            for (int lane = 0; lane < some.Length; lane++)
            {
                eeg[first + lane] = SphereLeadfields.Lane(block.Eeg, lane);
                meg[first + lane] = SphereLeadfields.Lane(block.Meg, lane);
            }
        }

        return (eeg, meg);
    }
}
