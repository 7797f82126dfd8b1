using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Heads;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Heads;

/// <summary>Tensor volumes: entries reach their voxels, and what is no conductivity tensor is refused with its place.</summary>
public sealed class TensorVolumeReaderTests : IDisposable
{
    // Entries are single precision.
    private const double SinglePrecision = 1e-6;

    private static readonly Tissue[] Tissues = [new(0, "air", TissueKind.Air, 0), new(1, "grey", TissueKind.Grey, 0.33), new(2, "white", TissueKind.White, 0.14)];

    // White at four of 6 x 5 x 4 voxels, grey around them, air at the faces.
    private static readonly VoxelGrid Grid = new(6, 5, 4, new(new(0.002, 0, 0), new(0, 0.002, 0), new(0, 0, 0.002), new(0.01, 0.02, 0.03)));
    private static readonly int[] White = [Grid.Index(2, 2, 1), Grid.Index(3, 2, 1), Grid.Index(2, 3, 2), Grid.Index(3, 3, 2)];

    private readonly ScratchFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Theory]
    [InlineData(false, false)]
    [InlineData(true, false)]
    [InlineData(false, true)]
    public void Tensors_ReachTheirVoxels(bool version2, bool bigEndian)
    {
        TissueVolume head = HeadCrop.Of(Whole())!.Volume;
        TensorReading reading = Read(Values(), head, version2: version2, bigEndian: bigEndian);
        Assert.Equal(4, reading.Tensors.Count);
        foreach (int at in White)
        {
            (int i, int j, int k) = Grid.Voxel(at);
            Assert.True(reading.Tensors.TryGet(head.Grid.IndexAt(Grid.Centre(i, j, k)), out SymmetricTensor t));
            SymmetricTensor wanted = Tensor(at);
            RelativeAssert.Close([wanted.Xx, wanted.Xy, wanted.Yy, wanted.Xz, wanted.Yz, wanted.Zz], [t.Xx, t.Xy, t.Yy, t.Xz, t.Yz, t.Zz], SinglePrecision);
        }

        Assert.False(reading.Tensors.TryGet(head.Grid.IndexAt(Grid.Centre(1, 1, 1)), out _));
        RelativeAssert.Equal(White.Average(at => Tensor(at).Mean), reading.Means["white"], SinglePrecision);
        Assert.Empty(reading.Warnings);
    }

    [Fact]
    public void Gaps_TakeTheTissuesOwnConductivity_AndAreSaid()
    {
        double[] values = Values();
        values[White[1]] = double.NaN;
        for (int entry = 0; entry < 6; entry++)
        {
            values[entry * Grid.Count + White[2]] = 0;
        }

        TissueVolume head = HeadCrop.Of(Whole())!.Volume;
        TensorReading reading = Read(values, head);
        Assert.Equal("tensors.nii: 2 of 4 voxels of white (50 %) have no tensor (zero or not finite); the tissue's own conductivity stands in there", Assert.Single(reading.Warnings));
        Assert.Equal(2, reading.Tensors.Count);
        (int i, int j, int k) = Grid.Voxel(White[3]);
        Assert.True(reading.Tensors.TryGet(head.Grid.IndexAt(Grid.Centre(i, j, k)), out SymmetricTensor t));
        RelativeAssert.Equal(Tensor(White[3]).Zz, t.Zz, SinglePrecision);
    }

    [Fact]
    public void TensorThatIsNotPositiveDefinite_IsRefusedWithItsPlace()
    {
        double[] values = Values();
        values[5 * Grid.Count + White[2]] = -0.1;
        Assert.Contains("1 tensor is not positive definite, so that current would run against the field: at (14, 26, 34) mm it is xx",
            Assert.Throws<InputException>(() => Read(values, HeadCrop.Of(Whole())!.Volume)).Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(0, 6, "intent_code: the intent code is 0: tensors are a volume of five dimensions")]
    [InlineData(1005, 5, "dim: the file has 5 dimensions (6 x 5 x 4 x 1 x 5)")]
    public void FileThatHoldsNoTensors_IsRefused(int intent, int entries, string said) =>
        Assert.Contains(said, Assert.Throws<InputException>(() => Read(Values()[..(entries * Grid.Count)], HeadCrop.Of(Whole())!.Volume, intent, entries)).Message, StringComparison.Ordinal);

    [Fact]
    public void OtherGrid_IsRefused()
    {
        VoxelGrid shifted = new(6, 5, 4, Grid.ToWorld with { Offset = new(0.0105, 0.02, 0.03) });
        Assert.Contains("lies up to 0.25 voxels away from that of the labels", Assert.Throws<InputException>(() => TensorVolumeReader.Read(
            _folder.Write("tensors.nii", Bytes(Values()).File()), "tensors.nii", shifted, HeadCrop.Of(Whole())!.Volume, ["white"])).Message, StringComparison.Ordinal);
        VoxelGrid larger = new(7, 5, 4, Grid.ToWorld);
        Assert.Contains("the tensors have 6 x 5 x 4 voxels, the labels 7 x 5 x 4", Assert.Throws<InputException>(() => TensorVolumeReader.Read(
            _folder.At("tensors.nii"), "tensors.nii", larger, HeadCrop.Of(Whole())!.Volume, ["white"])).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void CutShort_IsRefused()
    {
        byte[] bytes = Bytes(Values()).File();
        Assert.Contains("cut short", Assert.Throws<InputException>(() => TensorVolumeReader.Read(
            _folder.Write("short.nii", bytes[..^40]), "short.nii", Grid, HeadCrop.Of(Whole())!.Volume, ["white"])).Message, StringComparison.Ordinal);
    }

    // Right, front and up are the world's axes; the tensors' values stay as they stand, only the warning differs.
    [Theory]
    [InlineData(-1, 0, 0, @"point to the left, front, up;")]
    [InlineData(1, 0, 12, @"are turned by up to 12\.0 degrees against those of the world;")]
    [InlineData(-1, 0, 12, @"point to the left, front, up, turned by up to 12\.0 degrees;")]
    [InlineData(1, 90, 0, @"point to the front, left, up;")]
    [InlineData(1, 0, 0.3, null)]
    public void TensorsOnAxesThatAreNotTheWorlds_AreTakenInWorldAxes_AndSaidSo(int first, double turnDeg, double tiltDeg, string? said)
    {
        Rotation turn = Rotation.FromFixedAxes(tiltDeg * Math.PI / 180, 0, turnDeg * Math.PI / 180);
        Vec3 x = turn.Apply(new(first * 0.002, 0, 0)), y = turn.Apply(new(0, 0.002, 0)), z = turn.Apply(new(0, 0, 0.002));
        VoxelGrid grid = new(6, 5, 4, new(new(x.X, y.X, z.X), new(x.Y, y.Y, z.Y), new(x.Z, y.Z, z.Z), Grid.ToWorld.Offset));
        TissueVolume whole = new(grid, Whole().Cells.ToArray(), Tissues), head = HeadCrop.Of(whole)!.Volume;
        TensorReading reading = TensorVolumeReader.Read(_folder.Write("tensors.nii", Bytes(Values(), grid: grid).File()), "tensors.nii", grid, head, ["white"]);
        (int i, int j, int k) = grid.Voxel(White[1]);
        Assert.True(reading.Tensors.TryGet(head.Grid.IndexAt(grid.Centre(i, j, k)), out SymmetricTensor t));
        RelativeAssert.Equal(Tensor(White[1]).Xx, t.Xx, SinglePrecision);
        RelativeAssert.Equal(Tensor(White[1]).Xy, t.Xy, SinglePrecision);
        if (said is null)
        {
            Assert.Empty(reading.Warnings);
            return;
        }

        Assert.Matches(@"^tensors\.nii: its voxel axes " + said + @" the tensors were taken in world axes \(x right, y front, z up\)", Assert.Single(reading.Warnings));
    }

    private static TissueVolume Whole()
    {
        var cells = new byte[Grid.Count];
        for (int at = 0; at < cells.Length; at++)
        {
            (int i, int j, int k) = Grid.Voxel(at);
            cells[at] = (byte)(White.Contains(at) ? 2 : i is > 0 and < 5 && j is > 0 and < 4 && k is > 0 and < 3 ? 1 : 0);
        }

        return new(Grid, cells, Tissues);
    }

    /// <summary>A tensor that differs from voxel to voxel and in every entry.</summary>
    private static SymmetricTensor Tensor(int at) => new(0.2 + 0.001 * at, 0.01 + 0.0001 * at, 0.15, -0.02, 0.005 * (at % 3), 0.1 + 0.0005 * at);

    private static double[] Values()
    {
        var values = new double[6 * Grid.Count];
        for (int at = 0; at < Grid.Count; at++)
        {
            SymmetricTensor t = Tensor(at);
            double[] entries = [t.Xx, t.Xy, t.Yy, t.Xz, t.Yz, t.Zz];
            for (int entry = 0; entry < 6; entry++)
            {
                values[entry * Grid.Count + at] = entries[entry];
            }
        }

        return values;
    }

    private static NiftiBytes Bytes(double[] values, int intent = 1005, int entries = 6, bool version2 = false, bool bigEndian = false, VoxelGrid? grid = null)
    {
        NiftiBytes one = SphereVolumes.Bytes(grid ?? Grid, values, 16, 32);
        return new()
        {
            Version2 = version2,
            BigEndian = bigEndian,
            Magic = version2 ? "n+2" : "n+1",
            VoxOffset = version2 ? 544 : 352,
            Dim = [5, 6, 5, 4, 1, entries, 1, 1],
            Pixdim = one.Pixdim,
            Rows = one.Rows,
            Intent = intent,
            DataType = 16,
            Bitpix = 32,
            Values = values,
        };
    }

    private TensorReading Read(double[] values, TissueVolume head, int intent = 1005, int entries = 6, bool version2 = false, bool bigEndian = false) => TensorVolumeReader.Read(
        _folder.Write("tensors.nii", Bytes(values, intent, entries, version2, bigEndian).File()), "tensors.nii", Grid, head, ["white"]);
}
