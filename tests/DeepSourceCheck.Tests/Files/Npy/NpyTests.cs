using System.Buffers.Binary;
using System.Diagnostics;
using System.Text;

using CsCheck;

using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Npy;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Npy;

public sealed class NpyTests
{
    [Fact]
    public void WrittenArrays_AreReadBackExactly()
    {
        using ScratchFolder folder = new();
        Gen.Select(Gen.Int[1, 4], Gen.Int[1, 4], Gen.Int[1, 4]).SelectMany(s => Gen.Double.Array[s.Item1 * s.Item2 * s.Item3].Select(v => (s, v))).Sample(t =>
        {
            NpyWriter.Write(folder.At("a.npy"), [t.s.Item1, t.s.Item2, t.s.Item3], t.v);
            NpyArray read = NpyReader.Read(folder.At("a.npy"), "a.npy");
            return read.Values.AsSpan().SequenceEqual(t.v) && read.Header.Shape.SequenceEqual([t.s.Item1, t.s.Item2, t.s.Item3]) && read.Header.DataOffset % 64 == 0;
        }, threads: 1);
    }

    // The bytes that the format's description prescribes, written by hand.
    [Fact]
    public void Writer_ProducesThePrescribedBytes()
    {
        using MemoryStream target = new();
        NpyWriter.Write(target, [1], [1.0]);
        byte[] bytes = target.ToArray();
        Assert.Equal([0x93, (byte)'N', (byte)'U', (byte)'M', (byte)'P', (byte)'Y', 1, 0, 118, 0], bytes[..10]);
        Assert.Equal("{'descr': '<f8', 'fortran_order': False, 'shape': (1,), }".PadRight(117) + "\n", Encoding.ASCII.GetString(bytes[10..128]));
        Assert.Equal([0, 0, 0, 0, 0, 0, 0xf0, 0x3f], bytes[128..]);
        Assert.Throws<ArgumentException>(() => NpyWriter.Write(target, [2, 2], [1.0]));
    }

    [Theory]
    [InlineData("<f8", 1)]
    [InlineData(">f8", 2)]
    [InlineData("<f4", 3)]
    [InlineData(">f4", 1)]
    public void EveryTypeOrderAndVersion_GivesTheValues(string descr, int version)
    {
        // Shape 2 x 3, first axis fastest: the file's order 0 3 1 4 2 5 stands for rows (0 1 2), (3 4 5).
        double[] c = [0, 1, 2, 3, 4, -5.5], fortran = [0, 3, 1, 4, 2, -5.5];
        Assert.Equal(c, Read(Bytes($"{{'descr': '{descr}', 'fortran_order': False, 'shape': (2, 3), }}", descr, c, version)).Values);
        Assert.Equal(c, Read(Bytes($"{{\"shape\":(2L,3),'fortran_order':True,'descr':'{descr}'}}", descr, fortran, version)).Values);
    }

    [Fact]
    public void FortranOrderOfThreeAxes_IsReordered()
    {
        int[] shape = [2, 3, 4];
        double[] stored = new double[24], wanted = new double[24];
        for (int i = 0; i < 2; i++)
        {
            for (int j = 0; j < 3; j++)
            {
                for (int k = 0; k < 4; k++)
                {
                    stored[i + 2 * (j + 3 * k)] = wanted[(i * 3 + j) * 4 + k] = 100 * i + 10 * j + k;
                }
            }
        }

        Assert.Equal(wanted, Read(Bytes($"{{'descr': '<f8', 'fortran_order': True, 'shape': ({string.Join(", ", shape)}), }}", "<f8", stored)).Values);
    }

    [Fact]
    public void NonFiniteNumber_IsFoundByItsIndex()
    {
        NpyArray array = Read(Bytes("{'descr': '<f8', 'fortran_order': False, 'shape': (2, 3), }", "<f8", [0, 1, 2, 3, double.NaN, 5]));
        Assert.Equal("[1, 1]", array.IndexText(array.FirstNonFinite));
        Assert.Equal(-1, Read(Bytes("{'descr': '<f8', 'fortran_order': False, 'shape': (), }", "<f8", [7])).FirstNonFinite);
    }

    [Theory]
    [InlineData("shape", "{'descr': '<f8', 'fortran_order': False, 'shape': (-1,), }")]
    [InlineData("shape", "{'descr': '<f8', 'fortran_order': False, 'shape': (3,), }")]
    [InlineData("shape", "{'descr': '<f8', 'fortran_order': False, 'shape': (1,), }")]
    [InlineData("shape", "{'descr': '<f8', 'fortran_order': False, 'shape': (4294967296, 4294967296), }")]
    [InlineData("shape", "{'descr': '<f8', 'fortran_order': False, 'shape': (2147483647, 2147483647, 3), }")]
    [InlineData("header", "{'descr': '<f8', 'fortran_order': False, 'shape': (99999999999999999999999999999999,), }")]
    [InlineData("header", "{'descr': '<f8', 'fortran_order': False, 'shape': (1e3,), }")]
    [InlineData("header", "{'descr': '<f8', 'fortran_order': False, 'shape': (2, ")]
    [InlineData("header", "{'descr': '<f8', 'fortran_order': Maybe, 'shape': (2,), }")]
    [InlineData("header", "{'describe': '<f8', 'fortran_order': False, 'shape': (2,), }")]
    [InlineData("header", "{'descr': '<f8', 'descr': '<f8', 'fortran_order': False, 'shape': (2,), }")]
    [InlineData("header", "{'descr': '<f8', 'fortran_order': False, }")]
    [InlineData("header", "{'descr': '<f8', 'fortran_order': False, 'shape': (2,), } x")]
    [InlineData("header", "__import__('os')")]
    [InlineData("header", "")]
    [InlineData("descr", "{'descr': '<i8', 'fortran_order': False, 'shape': (2,), }")]
    [InlineData("descr", "{'descr': '|O', 'fortran_order': False, 'shape': (2,), }")]
    [InlineData("descr", "{'descr': '<c16', 'fortran_order': False, 'shape': (2,), }")]
    public void MalformedHeader_IsRefusedByField(string field, string header)
    {
        InputProblem problem = Assert.Single(Assert.Throws<InputException>(() => Read(Bytes(header, "<f8", [1, 2]))).Problems);
        Assert.Equal(field, problem.Key);
        Assert.Equal("a.npy", problem.File);
    }

    [Fact]
    public void DamagedAndTruncatedFiles_EndInAMessage()
    {
        using ScratchFolder folder = new();
        byte[] good = Bytes("{'descr': '<f8', 'fortran_order': False, 'shape': (2,), }", "<f8", [1, 2]);
        for (int length = 0; length < good.Length; length++)
        {
            Assert.Throws<InputException>(() => NpyReader.Read(folder.Write("a.npy", good[..length]), "a.npy"));
        }

        for (int at = 0; at < good.Length; at++)
        {
            foreach (byte value in new byte[] { 0, 0x27, 0x7f, 0xff })
            {
                byte[] damaged = [.. good];
                damaged[at] = value;
                Exception? error = Record.Exception(() => NpyReader.Read(folder.Write("a.npy", damaged), "a.npy"));
                Assert.True(error is null or InputException, $"byte {at} = {value}: {error}");
            }
        }
    }

    // Independent reference: NumPy, which defines the format (Debian package python3-numpy).
    [FactIfPresent("apt-get install python3-numpy", "/usr/bin/python3", "/usr/lib/python3/dist-packages/numpy")]
    public void NumPy_ReadsWhatIsWritten_AndIsRead()
    {
        using ScratchFolder folder = new();
        double[] values = [.. Enumerable.Range(0, 24).Select(n => Math.Sin(n) * 1e-13)];
        NpyWriter.Write(folder.At("a.npy"), [4, 2, 3], values);
        const string Script = "import numpy, sys; a = numpy.load(sys.argv[1]); assert a.shape == (4, 2, 3) and a.dtype == '<f8'; numpy.save(sys.argv[2], numpy.asfortranarray(a.astype('>f8')))";
        using Process process = Process.Start(new ProcessStartInfo("/usr/bin/python3", ["-c", Script, folder.At("a.npy"), folder.At("b.npy")]))!;
        process.WaitForExit();
        Assert.Equal(0, process.ExitCode);
        NpyArray back = NpyReader.Read(folder.At("b.npy"), "b.npy");
        Assert.True(back.Header is { FortranOrder: true, BigEndian: true });
        Assert.Equal(values, back.Values);
    }

    private static NpyArray Read(byte[] file)
    {
        using ScratchFolder folder = new();
        return NpyReader.Read(folder.Write("a.npy", file), "a.npy");
    }

    private static byte[] Bytes(string header, string descr, double[] values, int version = 1)
    {
        byte[] text = Encoding.ASCII.GetBytes(header + "\n");
        byte[] prefix = version == 1
            ? [0x93, .. "NUMPY"u8, 1, 0, (byte)text.Length, (byte)(text.Length >> 8)]
            : [0x93, .. "NUMPY"u8, (byte)version, 0, (byte)text.Length, (byte)(text.Length >> 8), 0, 0];
        int size = descr[2] - '0';
        byte[] data = new byte[size * values.Length];
        for (int n = 0; n < values.Length; n++)
        {
            Span<byte> item = data.AsSpan(n * size, size);
            if (size == 4)
            {
                BinaryPrimitives.WriteSingleLittleEndian(item, (float)values[n]);
            }
            else
            {
                BinaryPrimitives.WriteDoubleLittleEndian(item, values[n]);
            }

            if (descr[0] == '>')
            {
                item.Reverse();
            }
        }

        return [.. prefix, .. text, .. data];
    }
}
