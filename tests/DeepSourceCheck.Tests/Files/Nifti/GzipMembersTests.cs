using System.IO.Compression;

using CsCheck;

using DeepSourceCheck.Files.Nifti;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Nifti;

public sealed class GzipMembersTests
{
    // Check value of the CRC-32 of RFC 1952 over "123456789", as catalogues of such codes list it (from memory).
    [Fact]
    public void Crc32_OfTheDigits_IsTheCatalogueValue() => Assert.Equal(0xcbf43926u, Crc32.Append(0, "123456789"u8));

    [Fact]
    public void Crc32_InPieces_IsThatOfTheWhole() => Gen.Select(Gen.Byte.Array[0, 50], Gen.Byte.Array[0, 50]).Sample((a, b) =>
        Crc32.Append(Crc32.Append(0, a), b) == Crc32.Append(0, [.. a, .. b]));

    [Fact]
    public void Members_AreJoined()
    {
        byte[] a = [.. Enumerable.Range(0, 100_000).Select(n => (byte)(n * n >> 3))], b = new byte[70_000];
        Assert.Equal([.. a, .. b], Unpack([.. NiftiBytes.Gzip(a), .. NiftiBytes.Gzip([]), .. NiftiBytes.Gzip(b), .. new byte[512]], out bool tail));
        Assert.False(tail);
    }

    [Fact]
    public void IncompressibleData_ArePassedThrough()
    {
        byte[] noise = new byte[300_000];
        new Random(1).NextBytes(noise);
        using MemoryStream stored = new();
        using (GZipStream zip = new(stored, CompressionLevel.NoCompression, leaveOpen: true))
        {
            zip.Write(noise);
        }

        Assert.Equal(noise, Unpack(stored.ToArray(), out _));
        Assert.Equal(noise, Unpack(NiftiBytes.Gzip(noise), out _));
    }

    [Fact]
    public void HeaderWithNameCommentExtraAndCheck_IsSkipped()
    {
        byte[] zipped = NiftiBytes.Gzip("data"u8.ToArray());
        byte[] header = [0x1f, 0x8b, 8, 0x1f, 0, 0, 0, 0, 0, 3, 3, 0, 9, 9, 9, (byte)'n', 0, (byte)'c', 0, 7, 7];
        Assert.Equal("data"u8.ToArray(), Unpack([.. header, .. zipped[10..]], out _));
    }

    [Theory]
    [InlineData(-1)]
    [InlineData(-5)]
    public void WrongChecksumOrLength_IsRefused(int fromEnd)
    {
        byte[] zipped = NiftiBytes.Gzip("some data"u8.ToArray());
        zipped[zipped.Length + fromEnd] ^= 1;
        Assert.Throws<InvalidDataException>(() => Unpack(zipped, out _));
    }

    private static byte[] Unpack(byte[] zipped, out bool foreignTail)
    {
        using ScratchFolder folder = new();
        using FileStream file = File.OpenRead(folder.Write("x.gz", zipped));
        using GzipMembers members = new(file);
        using MemoryStream target = new();
        byte[] piece = new byte[10_000];
        for (int read = members.Read(piece); read > 0; read = members.Read(piece))
        {
            target.Write(piece, 0, read);
        }

        foreignTail = members.HasForeignTail;
        return target.ToArray();
    }
}
