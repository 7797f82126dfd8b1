using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Tests.References;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Core.Leadfields.Voxels;

/// <summary>Right-hand sides of electrodes and coils against the volume formulas.</summary>
public class SensorLoadTests
{
    /// <summary>Two Gauss points an edge: 0.03 (h/R)^4 of a face's share, 4e-6 at h/R of about 9/85; the load's entries are differences of shares some ten times as large.</summary>
    private const double Quadrature = 1e-4;

    /// <summary>Moved corners make elements up to 1.4 voxels wide: 1.4^4.</summary>
    private const double WiderElements = 4;

    /// <summary>Single precision of entries and places.</summary>
    private const double Single = 3e-6;

    public static TheoryData<string, bool> Grids => new() { { "cubic", false }, { "cubic", true }, { "oblique", false }, { "oblique", true }, { "mirrored", false }, { "mirrored", true } };

    private static Affine Grid(string name) => name switch { "cubic" => VoxelHeads.Cubic, "oblique" => VoxelHeads.Oblique, _ => VoxelHeads.Mirrored };

    private static double[][] Fill(HexMesh mesh, IReadOnlyList<MegChannel> channels, ConductivityTensors? tensors)
    {
        SensorLoads loads = new(new(mesh, []), new(mesh, channels, tensors));
        return [.. Enumerable.Range(0, channels.Count).Select(c =>
        {
            var block = new float[mesh.Nodes.Count * ILoadBlocks.Lanes];
            loads.Fill(c / ILoadBlocks.Lanes, block);
            return VoxelHeads.Lane(block, c % ILoadBlocks.Lanes).Select(v => v * Si.Mu0Over4Pi).ToArray();
        })];
    }

    [Theory]
    [MemberData(nameof(Grids))]
    public void CoilLoad_BySurfaces_IsTheVolumeIntegral(string grid, bool shifted)
    {
        TissueVolume volume = VoxelHeads.Shells(Grid(grid));
        HexMesh mesh = shifted ? VoxelHeads.Shifted(volume) : HexMesh.Plain(volume);
        MegChannel[] channels = VoxelHeads.Channels(volume, 6);
        double[][] actual = Fill(mesh, channels, null);
        PlainHexSystem system = new(mesh);
        for (int c = 0; c < channels.Length; c++)
        {
            RelativeAssert.Close(system.Coil(channels[c]), actual[c], shifted ? WiderElements * Quadrature : Quadrature, channels[c].Name);
        }
    }

    [Theory]
    [MemberData(nameof(Grids))]
    public void CoilLoad_WithTensors_IsTheVolumeIntegral(string grid, bool shifted)
    {
        TissueVolume volume = VoxelHeads.Shells(Grid(grid));
        HexMesh mesh = shifted ? VoxelHeads.Shifted(volume) : HexMesh.Plain(volume);
        ConductivityTensors tensors = VoxelHeads.WhiteTensors(volume);
        Assert.True(tensors.Count > 20, $"only {tensors.Count} voxels have a tensor");
        MegChannel[] channels = VoxelHeads.Channels(volume, 6);
        double[][] actual = Fill(mesh, channels, tensors), isotropic = Fill(mesh, channels, null);
        PlainHexSystem system = new(mesh, tensors);
        for (int c = 0; c < channels.Length; c++)
        {
            RelativeAssert.Close(system.Coil(channels[c]), actual[c], shifted ? WiderElements * Quadrature : Quadrature, channels[c].Name);
            Assert.True(RelativeAssert.NormError(isotropic[c], actual[c]) > 10 * Quadrature, "the tensors change nothing: the check is blind");
        }
    }

    [Fact]
    public void CoilLoad_BySurfacesAndByVolume_DrawTogetherAsTheCoilsMoveAway()
    {
        // Fourth order in h/R: twice as far leaves less than an eighth (the largest entry falls too).
        TissueVolume volume = VoxelHeads.Shells(VoxelHeads.Oblique);
        HexMesh mesh = HexMesh.Plain(volume);
        PlainHexSystem system = new(mesh);
        double[] errors = [.. new[] { 0.09, 0.18 }.Select(radius =>
        {
            MegChannel channel = VoxelHeads.Channels(volume, 6, radius)[0];
            return RelativeAssert.NormError(system.Coil(channel), Fill(mesh, [channel], null)[0]);
        })];
        Assert.True(errors[1] < Math.Max(errors[0] / 8, Single), $"{errors[0]:E2} at 90 mm, {errors[1]:E2} at 180 mm");
    }

    [Fact]
    public void CoilLoad_LivesOnInterfacesAlone()
    {
        TissueVolume volume = VoxelHeads.Shells(VoxelHeads.Cubic, 16, 15, 14);
        HexMesh mesh = HexMesh.Plain(volume);
        double[] load = Fill(mesh, VoxelHeads.Channels(volume, 1), null)[0];
        int inside = 0;
        for (int n = 0; n < mesh.Nodes.Count; n++)
        {
            (int x, int y, int z) = mesh.Nodes.Node(n);
            HashSet<byte> around = [];
            for (int c = 0; c < 8; c++)
            {
                (int i, int j, int k) = (x - (c & 1), y - (c >> 1 & 1), z - (c >> 2));
                bool outside = i < 0 || j < 0 || k < 0 || i >= volume.Grid.Nx || j >= volume.Grid.Ny || k >= volume.Grid.Nz;
                around.Add(outside ? (byte)0 : volume.Cells[volume.Grid.Index(i, j, k)]);
            }

            if (around.Count == 1)
            {
                inside++;
                Assert.Equal(0, load[n]);
            }
        }

        Assert.True(inside > 10, $"only {inside} nodes lie within one tissue: the check is blind");
        Assert.Equal(new CoilLoad(mesh, VoxelHeads.Channels(volume, 1), null).InterfaceNodes, load.Count(v => v != 0));
    }

    [Fact]
    public void Loads_SumToZeroOverEachPiece()
    {
        // A head with an island that touches it nowhere.
        TissueVolume head = VoxelHeads.Shells(VoxelHeads.Cubic, 8, 8, 8);
        VoxelGrid grid = new(12, 8, 8, VoxelHeads.Cubic);
        var cells = new byte[grid.Count];
        for (int cell = 0; cell < cells.Length; cell++)
        {
            (int i, int j, int k) = grid.Voxel(cell);
            cells[cell] = i < 8 ? head.Cells[head.Grid.Index(i, j, k)] : (byte)(i >= 10 && j is 3 or 4 && k == 4 ? 1 + j % 2 : 0);
        }

        TissueVolume volume = new(grid, cells, VoxelHeads.Tissues());
        HexMesh mesh = HexMesh.Plain(volume);
        ConductorPieces pieces = new(mesh);
        Assert.Equal(2, pieces.Count);
        MegChannel[] channels = VoxelHeads.Channels(volume, 8);
        Electrode[] electrodes = [.. VoxelHeads.Electrodes(head, 10), new("island", grid.Centre(11, 4, 4), true, 0)];
        SensorLoads loads = new(new(mesh, electrodes), new(mesh, channels, null));
        for (int sensor = 0; sensor < loads.Count; sensor++)
        {
            var block = new float[mesh.Nodes.Count * ILoadBlocks.Lanes];
            loads.Fill(sensor / ILoadBlocks.Lanes, block);
            double[] load = VoxelHeads.Lane(block, sensor % ILoadBlocks.Lanes);
            double size = load.Sum(Math.Abs);
            Assert.True(size > 0);
            for (int piece = 0; piece < 2; piece++)
            {
                double sum = load.Where((_, n) => pieces.Of(n) == piece).Sum();
                Assert.True(Math.Abs(sum) < Single * size, $"sensor {sensor}, piece {piece}: {sum:E2} of {size:E2}");
            }
        }
    }

    [Theory]
    [MemberData(nameof(Grids))]
    public void ElectrodeLoad_ReadsALinearFunctionAtTheElectrode(string grid, bool shifted)
    {
        TissueVolume volume = VoxelHeads.Shells(Grid(grid));
        HexMesh mesh = shifted ? VoxelHeads.Shifted(volume) : HexMesh.Plain(volume);
        Electrode[] electrodes = VoxelHeads.Electrodes(volume, 12);
        ElectrodeLoad load = new(mesh, electrodes);
        NearestElement finder = new(mesh, _ => true);
        for (int e = 0; e < electrodes.Length; e++)
        {
            Vec3 place = Vec3.Zero;
            for (int c = 0; c < 8; c++)
            {
                int node = load.NodesOf(e)[c];
                (int x, int y, int z) = mesh.Nodes.Node(node);
                place += load.WeightsOf(e)[c] * mesh.Position(x, y, z, node);
            }

            RelativeAssert.Equal(1, load.WeightsOf(e).ToArray().Sum(), 1e-12);
            Assert.Equal(finder.Find(electrodes[e].Position).Distance, load.Moved[e]);
            Assert.InRange(Math.Abs((place - electrodes[e].Position).Norm - load.Moved[e]), 0, 1e-11);
        }

        Assert.Equal(0, load.Moved[^1]);                    // the contact within the head stays where it is
        Assert.Contains(load.Moved.ToArray(), moved => moved > 0.005);
    }

    [Fact]
    public void ElectrodeLoad_StandsAgainstTheMeanOfTheSurface()
    {
        // A box of one tissue about the origin: coordinates have mean zero over its surface.
        VoxelGrid grid = new(6, 5, 4, new(new(0.01, 0, 0), new(0, 0.012, 0), new(0, 0, 0.014), new(-0.025, -0.024, -0.021)));
        TissueVolume volume = new(grid, [.. Enumerable.Repeat((byte)1, grid.Count)], VoxelHeads.Tissues());
        HexMesh mesh = HexMesh.Plain(volume);
        Vec3 place = new(0.03, 0.011, -0.004);
        SensorLoads loads = new(new(mesh, [new("E", place, true, 0)]), new(mesh, [], null));
        var block = new float[mesh.Nodes.Count * ILoadBlocks.Lanes];
        loads.Fill(0, block);
        double[] load = VoxelHeads.Lane(block, 0);
        Vec3 read = Vec3.Zero;
        double square = 0;
        for (int n = 0; n < load.Length; n++)
        {
            (int x, int y, int z) = mesh.Nodes.Node(n);
            Vec3 at = mesh.Position(x, y, z, n);
            read += load[n] * at;
            square += load[n] * at.Z * at.Z;
        }

        Assert.True((read - place).Norm < Single * place.Norm, $"{read} for {place}");

        // z^2, interpolated on planes 14 mm apart: at the electrode (between 0 and 14 mm below) 4 mm x 14 mm; over the two faces z = -+28 mm 28^2, over the four others 4 planes' trapezium rule.
        double ends = 2 * 60 * 60, sides = 2 * (60 + 60) * 56, trapezium = (28.0 * 28 / 2 + 14 * 14 + 0 + 14 * 14 + 28 * 28 / 2) / 4;
        RelativeAssert.Equal(4 * 14e-6 - 1e-6 * (ends * 28 * 28 + sides * trapezium) / (ends + sides), square, 1e-5);
    }

    [Fact]
    public void SensorLoads_OfAMixedBlock_HoldElectrodesThenChannels()
    {
        TissueVolume volume = VoxelHeads.Shells(VoxelHeads.Cubic);
        HexMesh mesh = HexMesh.Plain(volume);
        Electrode[] electrodes = VoxelHeads.Electrodes(volume, 19);
        MegChannel[] channels = VoxelHeads.Channels(volume, 8);
        SensorLoads loads = new(new(mesh, electrodes), new(mesh, channels, null));
        Assert.Equal((27, 19, 8), (loads.Count, loads.Electrodes, loads.Channels));
        var block = new float[mesh.Nodes.Count * ILoadBlocks.Lanes];
        Array.Fill(block, 5f);
        loads.Fill(1, block);
        SensorLoads last = new(new(mesh, electrodes[16..]), new(mesh, [], null));
        var alone = new float[block.Length];
        last.Fill(0, alone);
        double[][] coils = Fill(mesh, channels, null);
        for (int lane = 0; lane < ILoadBlocks.Lanes; lane++)
        {
            double[] expected = lane < 3 ? VoxelHeads.Lane(alone, lane) : lane < 11 ? [.. coils[lane - 3].Select(v => v / Si.Mu0Over4Pi)] : new double[mesh.Nodes.Count];
            RelativeAssert.Close(expected, VoxelHeads.Lane(block, lane), 1e-7, $"lane {lane}");
        }

        Assert.Throws<ArgumentOutOfRangeException>(() => loads.Fill(2, block));
        Assert.Throws<ArgumentOutOfRangeException>(() => loads.Fill(-1, block));
    }

    [Fact]
    public void ElectrodeLoad_AtAPlaceThatIsNotANumber_NamesTheElectrode()
    {
        HexMesh mesh = HexMesh.Plain(VoxelHeads.Shells(VoxelHeads.Cubic));
        ArgumentException error = Assert.Throws<ArgumentException>(() => new ElectrodeLoad(mesh, [new("Pz", new(0, double.NaN, 0), true, 0)]));
        Assert.Contains("Pz", error.Message, StringComparison.Ordinal);
    }
}
