using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Nifti;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Nifti;

/// <summary>Hand-written bytes in every type, byte order, version and packing; and every malformed field with its own message.</summary>
public sealed class NiftiReaderTests
{
    /// <summary>Millimetres in single precision, brought to metres.</summary>
    private const double SinglePrecision = 1e-6;

    private static readonly Dictionary<int, int> Bits = new() { [2] = 8, [256] = 8, [4] = 16, [512] = 16, [8] = 32, [768] = 32, [16] = 32, [64] = 64, [1024] = 64, [1280] = 64 };

    public static TheoryData<int, bool, bool, bool> Kinds
    {
        get
        {
            TheoryData<int, bool, bool, bool> kinds = [];
            foreach (int type in Bits.Keys)
            {
                kinds.Add(type, false, false, false);
                kinds.Add(type, true, false, true);
                kinds.Add(type, false, true, true);
                kinds.Add(type, true, true, false);
            }

            return kinds;
        }
    }

    [Fact]
    public void WholeNumbersBeyondDoublePrecision_AreSaidInAWarning()
    {
        double[] values = new double[24];
        values[3] = Math.Pow(2, 54);
        NiftiVolume volume = Read(new NiftiBytes { DataType = 1280, Bitpix = 64, Values = values }.File());
        Assert.Contains("beyond 2^53", Assert.Single(volume.Warnings), StringComparison.Ordinal);
    }

    [Theory]
    [MemberData(nameof(Kinds))]
    public void EveryTypeOrderVersionAndPacking_GivesTheValues(int type, bool bigEndian, bool version2, bool gzip)
    {
        double[] values = [.. Enumerable.Range(0, 24).Select(n => (double)(n * n % 100))];
        if (type is 256 or 4 or 8 or 1024 or 16 or 64)
        {
            values[5] = -100;
        }

        values[6] = type switch { 2 => 255, 512 => 65535, 768 => 4294967295, 1280 => 9007199254740992, 1024 => -9007199254740992, 16 or 64 => 0.375, _ => 127 };
        NiftiBytes bytes = new()
        {
            DataType = type,
            Bitpix = Bits[type],
            BigEndian = bigEndian,
            Version2 = version2,
            Magic = version2 ? "n+2" : "n+1",
            VoxOffset = version2 ? 544 : 352,
            Values = values,
        };
        NiftiVolume volume = Read(gzip ? NiftiBytes.Gzip(bytes.File()) : bytes.File());
        Assert.Empty(volume.Warnings);
        Assert.Equal(version2 ? 2 : 1, volume.Header.Version);
        Assert.Equal(values, AllValues(volume));
        AssertPoint(new(-3 + 2, -5 + 3 * 2, 7 + 4), volume.Header.Grid.Centre(1, 2, 1));
    }

    [Fact]
    public void ObliqueQform_IsApplied()
    {
        // b = 0.1, c = 0.2, d = 0.3: a^2 = 0.86; R by the standard's formula, worked out by hand.
        NiftiVolume volume = Read(new NiftiBytes { Sform = 0, Qform = 1, Quaternion = [0.1, 0.2, 0.3, 10, 20, 30], Pixdim = [-1, 2, 3, 4, 1, 0, 0, 0], Rows = new double[12] }.File());
        double a = Math.Sqrt(0.86);
        AssertPoint(new(10 + 2 * (0.86 + 0.01 - 0.04 - 0.09), 20 + 2 * 2 * (0.02 + 0.3 * a), 30 + 2 * 2 * (0.03 - 0.2 * a)), volume.Header.Grid.Centre(1, 0, 0));
        AssertPoint(new(10 - 4 * 2 * (0.03 + 0.2 * a), 20 - 4 * 2 * (0.06 - 0.1 * a), 30 - 4 * (0.86 + 0.09 - 0.01 - 0.04)), volume.Header.Grid.Centre(0, 0, 1));
        Assert.Equal(NiftiOrientation.Qform, volume.Header.Orientation);
    }

    [Theory]
    [InlineData(1, 1.0)]
    [InlineData(3, 1e-6)]
    [InlineData(2 + 8, 1e-3)]
    [InlineData(0, 1e-3)]
    public void SpaceUnits_AreBroughtToMetres(int units, double metres)
    {
        double[] rows = [.. new double[] { 2, 0, 0, -3, 0, 3, 0, -5, 0, 0, 4, 7 }.Select(v => v * 1e-3 / metres)];
        Vec3 centre = Read(new NiftiBytes { Units = units, Rows = rows, Pixdim = [1, 2e-3 / metres, 3e-3 / metres, 4e-3 / metres, 1, 0, 0, 0] }.File()).Header.Grid.Centre(1, 0, 0);
        AssertPoint(new(-1, -5, 7), centre);
    }

    [Fact]
    public void ThinAndFlatVolumes_AreRead()
    {
        Assert.Equal(1, Read(new NiftiBytes { Dim = [1, 24, 0, -7, 0, 0, 0, 0] }.File()).Header.Grid.Ny);
        Assert.Equal(1, Read(new NiftiBytes { Dim = [2, 4, 6, 0, 0, 0, 0, 0] }.File()).Header.Grid.Nz);
        Assert.Equal(24, Read(new NiftiBytes { Dim = [3, 1, 1, 24, 1, 1, 1, 1] }.File()).Header.Grid.Nz);
        Assert.Equal(24, Read(new NiftiBytes { Dim = [5, 4, 3, 2, 1, 1, 9, 9] }.File()).Header.Grid.Count);
    }

    [Fact]
    public void Slope_ScalesUnsignedBytes() =>
        RelativeAssert.Close([.. new NiftiBytes().Values.Select(v => 0.5 * v - 1)], AllValues(Read(new NiftiBytes { Slope = 0.5, Intercept = -1 }.File())), 1e-15);

    [Theory]
    [InlineData("v.hdr", "v.img", false)]
    [InlineData("v.hdr", "v.img.gz", true)]
    [InlineData("v.hdr.gz", "v.img.gz", true)]
    [InlineData("V.HDR", "V.IMG", false)]
    public void Pairs_AreReadByEitherName(string headerName, string dataName, bool gzip)
    {
        using ScratchFolder folder = new();
        NiftiBytes bytes = new() { Magic = "ni1", VoxOffset = 0 };
        folder.Write(headerName, headerName.EndsWith(".gz", StringComparison.Ordinal) ? NiftiBytes.Gzip(bytes.Header()) : bytes.Header());
        folder.Write(dataName, gzip ? NiftiBytes.Gzip(bytes.Data()) : bytes.Data());
        Assert.Equal(bytes.Values, AllValues(NiftiReader.Read(folder.At(headerName), headerName)));
        Assert.Equal(bytes.Values, AllValues(NiftiReader.Read(folder.At(dataName), dataName)));
        File.Delete(folder.At(dataName));
        Assert.Contains(dataName.Replace(".gz", "", StringComparison.Ordinal), Assert.Throws<InputException>(() => NiftiReader.ReadHeader(folder.At(headerName), headerName)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void DataFileWithoutHeader_NamesTheHeader()
    {
        using ScratchFolder folder = new();
        folder.Write("v.img", new NiftiBytes().Data());
        Assert.Contains("v.hdr", Refusal(folder.At("v.img"), "v.img"), StringComparison.Ordinal);
    }

    [Fact]
    public void TruncatedPairData_IsRefused()
    {
        using ScratchFolder folder = new();
        NiftiBytes bytes = new() { Magic = "ni1", VoxOffset = 0 };
        folder.Write("v.hdr", bytes.Header());
        folder.Write("v.img", bytes.Data()[..20]);
        string message = Refusal(folder.At("v.hdr"), "v.hdr");
        Assert.Contains("v.img", message, StringComparison.Ordinal);
        Assert.Contains("24 bytes", message, StringComparison.Ordinal);
    }

    [Fact]
    public void DataAfterALongExtension_AreFound() =>
        Assert.Equal(new NiftiBytes().Values, AllValues(Read(NiftiBytes.Gzip(new NiftiBytes { VoxOffset = 352 + 4096 }.File()))));

    [Fact]
    public void BytesBehindTheData_AreSaid()
    {
        byte[] file = [.. new NiftiBytes().File(), 1, 2, 3];
        Assert.Contains("beyond the data", Assert.Single(Read(file).Warnings), StringComparison.Ordinal);
        Assert.Contains("beyond the data", Assert.Single(Read(NiftiBytes.Gzip(file)).Warnings), StringComparison.Ordinal);
        byte[] foreign = [.. NiftiBytes.Gzip(new NiftiBytes().File()), 9, 9];
        Assert.Contains("beyond the data", Assert.Single(Read(foreign).Warnings), StringComparison.Ordinal);
    }

    [Fact]
    public void GzipStreamMuchLongerThanAnnounced_IsNotUnpacked()
    {
        byte[] bomb = NiftiBytes.Gzip([.. new NiftiBytes().File(), .. new byte[50_000_000]]);
        long before = GC.GetAllocatedBytesForCurrentThread();
        Assert.Contains("not verified", Assert.Single(Read(bomb).Warnings), StringComparison.Ordinal);
        Assert.InRange(GC.GetAllocatedBytesForCurrentThread() - before, 0, 5_000_000);
    }

    [Theory]
    [InlineData("dim[0]", "0")]
    [InlineData("dim[2]", "-3")]
    [InlineData("dim[4]", "2 volumes")]
    [InlineData("dim[5]", "3 values")]
    [InlineData("datatype", "RGB24")]
    [InlineData("datatype", "float128")]
    [InlineData("datatype", "no data type")]
    [InlineData("vox_offset", "348")]
    [InlineData("vox_offset", "352.5")]
    [InlineData("vox_offset", "NaN")]
    [InlineData("vox_offset", "1,000")]
    [InlineData("vox_offset", "-16")]
    [InlineData("magic", "6e2b3900")]
    [InlineData("srow", "not finite")]
    [InlineData("srow", "singular")]
    [InlineData("srow", "one plane")]
    [InlineData("pixdim[2]", "-3")]
    [InlineData("pixdim[1]", "0")]
    [InlineData("quatern", "rotation")]
    [InlineData("scl_slope", "not finite")]
    [InlineData("dim", "cut short")]
    public void MalformedField_IsNamedWithItsValue(string field, string word)
    {
        NiftiBytes bytes = (field, word) switch
        {
            ("dim[0]", _) => new() { Dim = [0, 4, 3, 2, 1, 1, 1, 1] },
            ("dim[2]", _) => new() { Dim = [3, 4, -3, 2, 1, 1, 1, 1] },
            ("dim[4]", _) => new() { Dim = [4, 4, 3, 1, 2, 1, 1, 1] },
            ("dim[5]", _) => new() { Dim = [5, 4, 2, 1, 1, 3, 1, 1] },
            ("datatype", "RGB24") => new() { DataType = 128 },
            ("datatype", "float128") => new() { DataType = 1536 },
            ("datatype", _) => new() { DataType = 3 },
            ("vox_offset", "348") => new() { VoxOffset = 348 },
            ("vox_offset", "352.5") => new() { VoxOffset = 352.5 },
            ("vox_offset", "NaN") => new() { VoxOffset = double.NaN },
            ("vox_offset", "-16") => new() { VoxOffset = -16 },
            ("magic", _) => new() { Magic = "n+9" },
            ("srow", "not finite") => new() { Rows = [2, 0, 0, double.NaN, 0, 3, 0, 0, 0, 0, 4, 0] },
            ("srow", "singular") => new() { Rows = new double[12] },
            ("srow", _) => new() { Rows = [2, 0, 2, 0, 0, 3, 3, 0, 0, 0, 0, 0] },
            ("pixdim[2]", _) => new() { Sform = 0, Qform = 1, Pixdim = [1, 2, -3, 4, 0, 0, 0, 0] },
            ("pixdim[1]", _) => new() { Sform = 0, Qform = 0, Pixdim = [1, 0, 3, 4, 0, 0, 0, 0] },
            ("quatern", _) => new() { Sform = 0, Qform = 1, Quaternion = [1, 1, 0, 0, 0, 0] },
            ("scl_slope", _) => new() { Slope = double.PositiveInfinity },
            ("dim", _) => new() { Dim = [3, 4, 3, 3, 1, 1, 1, 1] },
            _ => new() { VoxOffset = 1000 },
        };
        byte[] file = word == "1,000" ? bytes.File()[..400] : bytes.File();
        InputProblem problem = Assert.Single(Assert.Throws<InputException>(() => Read(file)).Problems);
        Assert.Equal(field, problem.Key);
        Assert.Contains(word, problem.Message, StringComparison.Ordinal);
        Assert.Equal("v.nii", problem.File);
    }

    [Theory]
    [InlineData("bitpix")]
    [InlineData("pixdim[1]")]
    [InlineData("vox_offset")]
    [InlineData("xyzt_units")]
    [InlineData("scl_slope")]
    [InlineData("check the unit")]
    [InlineData("2^53")]
    public void DoubtfulField_IsReadWithAWarning(string word)
    {
        NiftiBytes bytes = word switch
        {
            "bitpix" => new() { Bitpix = 32 },
            "pixdim[1]" => new() { Pixdim = [1, -2, 3, 4, 0, 0, 0, 0] },
            "vox_offset" => new() { VoxOffset = 0 },
            "xyzt_units" => new() { Units = 5 },
            "scl_slope" => new() { Slope = double.NaN },
            "check the unit" => new() { Units = 1 },
            _ => new() { DataType = 1024, Bitpix = 64, Values = [.. new double[23], 1e18] },
        };
        NiftiVolume volume = Read(bytes.File());
        Assert.Contains(volume.Warnings, w => w.Contains(word, StringComparison.Ordinal) && w.Contains("v.nii", StringComparison.Ordinal));
        Assert.Equal(bytes.Values, AllValues(volume));
    }

    [Fact]
    public void Version2_ChangedByTextTransfer_IsRefused()
    {
        byte[] file = new NiftiBytes { Version2 = true, Magic = "n+2", VoxOffset = 544 }.File();
        file[8] = (byte)'\n';
        Assert.Contains("text mode", Assert.Throws<InputException>(() => Read(file)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Version2_OfHugeDims_IsRefusedBeforeAllocating()
    {
        byte[] file = new NiftiBytes { Version2 = true, Magic = "n+2", VoxOffset = 544, Dim = [3, long.MaxValue, long.MaxValue, long.MaxValue, 1, 1, 1, 1] }.File();
        Assert.Contains("damaged", Assert.Throws<InputException>(() => Read(file)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void EveryTruncation_IsRefused()
    {
        byte[] plain = new NiftiBytes().File(), zipped = NiftiBytes.Gzip(plain);
        using ScratchFolder folder = new();
        foreach (byte[] file in new[] { plain, zipped })
        {
            for (int length = 0; length < file.Length; length++)
            {
                Refusal(folder.Write("v.nii", file[..length]), "v.nii");
            }
        }
    }

    [Fact]
    public void AnyDamagedByte_EndsInAMessageOrAVolume()
    {
        byte[] plain = new NiftiBytes().File(), zipped = NiftiBytes.Gzip(plain);
        using ScratchFolder folder = new();
        foreach (byte[] file in new[] { plain, zipped })
        {
            for (int at = 0; at < file.Length; at++)
            {
                foreach (byte value in new byte[] { 0x00, 0x7f, 0xff })
                {
                    byte[] damaged = [.. file];
                    damaged[at] = value;
                    Exception? error = Record.Exception(() => NiftiReader.Read(folder.Write("v.nii", damaged), "v.nii"));
                    Assert.True(error is null or InputException, $"byte {at} = {value}: {error}");
                }
            }
        }
    }

    [Fact]
    public void MissingFileAndFolder_AreNamed()
    {
        using ScratchFolder folder = new();
        Assert.Contains("does not exist", Refusal(folder.At("no.nii"), "no.nii"), StringComparison.Ordinal);
        Assert.Contains("folder", Refusal(folder.Path, "here"), StringComparison.Ordinal);
        Assert.Throws<InputException>(() => NiftiReader.Read("a\0b", "a b"));
        Assert.Throws<InputException>(() => NiftiReader.Read(new string('a', 100_000), "long"));
    }

    private static string Refusal(string path, string name) => Assert.Throws<InputException>(() => NiftiReader.Read(path, name)).Message;

    private static NiftiVolume Read(byte[] file)
    {
        using ScratchFolder folder = new();
        return NiftiReader.Read(folder.Write("v.nii", file), "v.nii");
    }

    private static double[] AllValues(NiftiVolume volume)
    {
        double[] values = new double[volume.Volume.Values.Count];
        volume.Volume.Values.CopyTo(0, values);
        return values;
    }

    private static void AssertPoint(Vec3 mm, Vec3 metres) => RelativeAssert.Close([mm.X, mm.Y, mm.Z], [1e3 * metres.X, 1e3 * metres.Y, 1e3 * metres.Z], SinglePrecision);
}
