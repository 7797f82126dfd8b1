using System.Buffers.Binary;
using System.Diagnostics;
using System.Globalization;

using CsCheck;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Files.Nifti;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Nifti;

public class NiftiWriterTests
{
    private const string Python = "/usr/bin/python3";
    private const string Library = "/usr/lib/python3/dist-packages/nibabel";

    /// <summary>Places [m] go through single-precision millimetres: 0.2 m has 24 bits.</summary>
    private const double PlaceTolerance = 2e-8;

    /// <summary>Places [m] by the matrix of a turned volume: sums of three single-precision products of up to 0.3 m.</summary>
    private const double TurnedTolerance = 2e-7;

    /// <summary>Places [m] by the quaternion: what the writer promises, and rounding.</summary>
    private const double QuaternionTolerance = 1e-5 + 2e-7;

    private static readonly VoxelGrid Plain = new(4, 3, 2, new(new(0.002, 0, 0), new(0, 0.003, 0), new(0, 0, 0.0025), new(-0.09, -0.12, 0.03)));

    [Theory]
    [InlineData("a.nii")]
    [InlineData("a.nii.gz")]
    public void RoundTrip_KeepsEveryTypeOfValueAndThePlace(string name)
    {
        using ScratchFolder folder = new();
        byte[] bytes = [.. Enumerable.Range(0, 24).Select(n => (byte)(11 * n))];
        short[] shorts = [.. Enumerable.Range(0, 24).Select(n => (short)(-30000 + 2600 * n))];
        float[] floats = [.. Enumerable.Range(0, 24).Select(n => n == 5 ? float.NaN : MathF.Exp(n - 12))];
        NiftiWriter.Write<byte>(folder.At(name), Plain, bytes);
        Same(NiftiDataType.UInt8, bytes.Select(b => (double)b));
        NiftiWriter.Write<short>(folder.At(name), Plain, shorts);
        Same(NiftiDataType.Int16, shorts.Select(s => (double)s));
        NiftiWriter.Write<float>(folder.At(name), Plain, floats);
        Same(NiftiDataType.Float32, floats.Select(f => (double)f));

        void Same(NiftiDataType type, IEnumerable<double> expected)
        {
            NiftiVolume read = NiftiReader.Read(folder.At(name), name);
            Assert.Equal((type, NiftiOrientation.Sform, 4, 3, 2), (read.Header.DataType, read.Header.Orientation, read.Header.Grid.Nx, read.Header.Grid.Ny, read.Header.Grid.Nz));
            Assert.Equal(expected, Enumerable.Range(0, 24).Select(n => read.Volume.Values[n]));
            Assert.True((read.Header.Grid.Centre(3, 2, 1) - Plain.Centre(3, 2, 1)).Norm < PlaceTolerance);
        }
    }

    [Fact]
    public void SformAndQform_Agree_ForAnyRotationMirroredOrNot()
    {
        int placedByBoth = 0;
        Gen.Select(Gen.Double[-4, 4].Array[3], Gen.Double[0.0005, 0.01].Array[3], Gen.Double[-0.2, 0.2].Array[3], Gen.Bool).Sample((angles, sizes, shift, mirrored) =>
        {
            Rotation r = Rotation.FromFixedAxes(angles[0], angles[1], angles[2]);
            Vec3 size = new(sizes[0], sizes[1], mirrored ? -sizes[2] : sizes[2]);
            Vec3 Row(Vec3 row) => new(row.X * size.X, row.Y * size.Y, row.Z * size.Z);
            VoxelGrid grid = new(30, 20, 25, new(Row(r.Row0), Row(r.Row1), Row(r.Row2), new(shift[0], shift[1], shift[2])));
            using ScratchFolder folder = new();
            NiftiWriter.Write<byte>(folder.At("a.nii"), grid, new byte[grid.Count]);
            NiftiVolume read = NiftiReader.Read(folder.At("a.nii"), "a.nii");
            Assert.Empty(read.Warnings);
            Assert.True((read.Header.Grid.Centre(29, 19, 24) - grid.Centre(29, 19, 24)).Norm < TurnedTolerance);

            // The same bytes without their sform are placed by the quaternion.
            byte[] bytes = File.ReadAllBytes(folder.At("a.nii"));
            if (BinaryPrimitives.ReadInt16LittleEndian(bytes.AsSpan(252)) == 0)
            {
                return;
            }

            Interlocked.Increment(ref placedByBoth);
            BinaryPrimitives.WriteInt16LittleEndian(bytes.AsSpan(254), 0);
            NiftiHeader byQuaternion = NiftiReader.ReadHeader(folder.Write("q.nii", bytes), "q.nii");
            Assert.Equal(NiftiOrientation.Qform, byQuaternion.Orientation);
            Assert.True((byQuaternion.Grid.Centre(29, 19, 24) - grid.Centre(29, 19, 24)).Norm < QuaternionTolerance);
        }, seed: "0000N4pIRVB1", iter: 300);
        Assert.True(placedByBoth > 270, $"only {placedByBoth} of 300 rotations have a qform; those within a few degrees of half a turn may lack it");
    }

    // A half turn itself is exact: its quaternion is (0, 0, 1).
    [Fact]
    public void HalfTurn_HasBoth()
    {
        using ScratchFolder folder = new();
        NiftiWriter.Write<byte>(folder.At("a.nii"), new(3, 3, 3, new(new(-0.002, 0, 0), new(0, -0.002, 0), new(0, 0, 0.002), Vec3.Zero)), new byte[27]);
        byte[] h = File.ReadAllBytes(folder.At("a.nii"));
        Assert.Equal((2, 2), (BinaryPrimitives.ReadInt16LittleEndian(h.AsSpan(252)), BinaryPrimitives.ReadInt16LittleEndian(h.AsSpan(254))));
        Assert.Equal([0f, 0f, 1f], Enumerable.Range(0, 3).Select(n => BinaryPrimitives.ReadSingleLittleEndian(h.AsSpan(256 + 4 * n))));
    }

    [Fact]
    public void SkewedAxes_HaveNoQform()
    {
        using ScratchFolder folder = new();
        VoxelGrid grid = new(3, 3, 3, new(new(0.002, 0.0004, 0), new(0, 0.002, 0), new(0, 0, 0.002), Vec3.Zero));
        NiftiWriter.Write<byte>(folder.At("a.nii"), grid, new byte[27]);
        Assert.Equal(0, BinaryPrimitives.ReadInt16LittleEndian(File.ReadAllBytes(folder.At("a.nii")).AsSpan(252)));
        NiftiVolume read = NiftiReader.Read(folder.At("a.nii"), "a.nii");
        Assert.Empty(read.Warnings);
        Assert.True((read.Header.Grid.Centre(2, 2, 2) - grid.Centre(2, 2, 2)).Norm < PlaceTolerance);
    }

    // Byte offsets of nifti1.h, typed here a second time.
    [Fact]
    public void Header_HasIntentNameDescriptionUnitAndMagic()
    {
        using ScratchFolder folder = new();
        NiftiWriter.Write<byte>(folder.At("a.nii"), Plain, new byte[24], NiftiIntent.Label, "tissues", "An invented head");
        byte[] h = File.ReadAllBytes(folder.At("a.nii"));
        Assert.Equal(352 + 24, h.Length);
        Assert.Equal(1002, BinaryPrimitives.ReadInt16LittleEndian(h.AsSpan(68)));
        Assert.Equal("An invented head\0"u8.ToArray(), h[148..165]);
        Assert.Equal("tissues\0"u8.ToArray(), h[328..336]);
        Assert.Equal(2, h[123]);
        Assert.Equal("n+1\0"u8.ToArray(), h[344..348]);
    }

    [Fact]
    public void Gzip_HasNoTimeAndNoSystem_AndTheSameBytesTwice()
    {
        using ScratchFolder folder = new();
        byte[] values = new byte[24];
        NiftiWriter.Write<byte>(folder.At("a.nii.gz"), Plain, values);
        byte[] first = File.ReadAllBytes(folder.At("a.nii.gz"));
        NiftiWriter.Write<byte>(folder.At("another name.NII.GZ"), Plain, values);
        Assert.Equal(first, File.ReadAllBytes(folder.At("another name.NII.GZ")));

        // RFC 1952: magic, method, flags, four bytes of time, extra flags, system 255 (unknown).
        Assert.Equal([0x1f, 0x8b, 8, 0, 0, 0, 0, 0, 0, 255], first[..10]);
    }

    [Fact]
    public void WhatDoesNotFit_IsRefusedAndNothingIsWritten()
    {
        using ScratchFolder folder = new();
        Assert.Throws<ArgumentException>(() => NiftiWriter.Write<byte>(folder.At("a.img"), Plain, new byte[24]));
        Assert.Throws<ArgumentException>(() => NiftiWriter.Write<byte>(folder.At("a.nii"), Plain, new byte[23]));
        Assert.Throws<ArgumentException>(() => NiftiWriter.Write<double>(folder.At("a.nii"), Plain, new double[24]));
        Assert.Throws<ArgumentException>(() => NiftiWriter.Write<byte>(folder.At("a.nii"), new(32768, 1, 1, Plain.ToWorld), new byte[32768]));
        Assert.Throws<ArgumentException>(() => NiftiWriter.Write<byte>(folder.At("a.nii"), Plain, new byte[24], intentName: "sixteen letters."));
        Assert.Throws<ArgumentException>(() => NiftiWriter.Write<byte>(folder.At("a.nii"), Plain, new byte[24], description: "µ"));
        Assert.Empty(Directory.EnumerateFileSystemEntries(folder.Path));
    }

    private const string Script = """
        import sys, numpy, nibabel
        for path in sys.argv[1:]:
            image = nibabel.load(path)
            data = numpy.asanyarray(image.dataobj)
            header = image.header
            print(data.dtype.name, *data.shape, header.get_intent()[0].replace(' ', '-'), int(header['sform_code']), int(header['qform_code']),
                  ' '.join('%.6f' % v for v in data.reshape(-1, order='F').astype(float)),
                  ' '.join('%.6f' % v for v in numpy.concatenate([image.affine[:3].ravel(), image.get_qform()[:3].ravel()])))
        """;

    [FactIfPresent("apt-get install python3-nibabel", Python, Library)]
    public void IndependentReader_SeesTheSameVolume()
    {
        using ScratchFolder folder = new();
        Rotation r = Rotation.FromFixedAxes(0.2, -0.4, 2.8);
        VoxelGrid grid = new(4, 3, 2, new(0.002 * r.Row0, 0.002 * r.Row1, 0.002 * r.Row2, new(0.01, -0.02, 0.03)));
        float[] values = [.. Enumerable.Range(0, 24).Select(n => 0.5f * n - 3)];
        NiftiWriter.Write<float>(folder.At("f.nii.gz"), grid, values, NiftiIntent.Estimate);
        NiftiWriter.Write<short>(folder.At("s.nii"), grid, [.. values.Select(v => (short)(2 * v))], NiftiIntent.Label);
        NiftiWriter.Write<byte>(folder.At("b.nii.gz"), grid, [.. values.Select(v => (byte)(2 * v + 6))], NiftiIntent.Label);
        string[] lines = Run(Python, "-c", Script, folder.At("f.nii.gz"), folder.At("s.nii"), folder.At("b.nii.gz")).Split('\n', StringSplitOptions.RemoveEmptyEntries);
        Check(lines[0], "float32 4 3 2 estimate 2 2", n => values[n]);
        Check(lines[1], "int16 4 3 2 label 2 2", n => 2 * values[n]);
        Check(lines[2], "uint8 4 3 2 label 2 2", n => 2 * values[n] + 6);

        void Check(string line, string start, Func<int, double> value)
        {
            Assert.StartsWith(start + " ", line, StringComparison.Ordinal);
            double[] numbers = [.. line[start.Length..].Split(' ', StringSplitOptions.RemoveEmptyEntries).Select(t => double.Parse(t, CultureInfo.InvariantCulture))];
            Assert.Equal(Enumerable.Range(0, 24).Select(value), numbers[..24]);
            for (int form = 0; form < 2; form++)
            {
                double[] a = numbers[(24 + 12 * form)..(36 + 12 * form)];
                Affine map = new(new(a[0], a[1], a[2]), new(a[4], a[5], a[6]), new(a[8], a[9], a[10]), new(a[3], a[7], a[11]));
                Assert.True((map.Apply(new(3, 2, 1)) / 1000 - grid.Centre(3, 2, 1)).Norm < 1e-8, $"form {form}: printed with 6 decimals of a millimetre");
            }
        }
    }

    private static string Run(string program, params string[] arguments)
    {
        ProcessStartInfo start = new(program, arguments) { RedirectStandardOutput = true, RedirectStandardError = true };
        using Process process = Process.Start(start)!;
        Task<string> error = process.StandardError.ReadToEndAsync();
        string output = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        Assert.True(process.ExitCode == 0, error.Result);
        return output;
    }
}
