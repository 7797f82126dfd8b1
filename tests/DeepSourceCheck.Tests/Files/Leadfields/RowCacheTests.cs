using System.Globalization;
using System.Runtime.InteropServices;
using System.Security.Cryptography;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Files.Leadfields;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Leadfields;

public class RowCacheTests
{
    private const int Electrodes = 18, Channels = 5;

    private static readonly KeptNodes Kept = KeptNodes.All(new(HexMesh.Plain(Block())));

    private static readonly RowFigures Figures = new(7, 3.25e-7);

    private static TissueVolume Block()
    {
        VoxelGrid grid = new(4, 5, 6, new(new(0.01, 0, 0), new(0, 0.01, 0), new(0, 0, 0.01), Vec3.Zero));
        return new(grid, [.. Enumerable.Repeat((byte)1, grid.Count)], [new(0, "air", TissueKind.Air, 0), new(1, "grey", TissueKind.Grey, 0.33)]);
    }

    private static string Key(int n) => n.ToString("x64", CultureInfo.InvariantCulture);

    private static TransferRows Rows(int seed = 1)
    {
        TransferRows rows = Empty();
        var block = new float[210 * 16];
        for (int b = 0; b < 2; b++)
        {
            for (int n = 0; n < block.Length; n++)
            {
                block[n] = (float)Math.Sin(seed + 0.7 * n + b);
            }

            rows.Take(b, block);
        }

        return rows;
    }

    private static TransferRows Empty() => new(Kept, Electrodes, Channels);

    private static long EntryLength => 72 + 4L * Empty().Values.Length + 32;

    [Fact]
    public void Entry_ThatWasWritten_IsReadByteForByte()
    {
        using ScratchFolder scratch = new();
        RowCache cache = new(scratch.At("below/rows"));
        TransferRows rows = Rows(), read = Empty();
        Assert.False(cache.TryRead(Key(1), read, out _, out string? trouble));
        Assert.Null(trouble);
        Assert.Null(cache.TryWrite(Key(1), rows, Figures));
        Assert.True(cache.TryRead(Key(1), read, out RowFigures figures, out trouble));
        Assert.Null(trouble);
        Assert.Equal(Figures, figures);
        Assert.True(MemoryMarshal.AsBytes(rows.Values).SequenceEqual(MemoryMarshal.AsBytes(read.Values)));
        Assert.Equal((1, EntryLength), cache.Size());
        Assert.Equal([Key(1) + ".rows"], Directory.GetFiles(cache.Folder).Select(Path.GetFileName));
    }

    [Theory]
    [InlineData(0)]                                          // magic
    [InlineData(20)]                                         // key
    [InlineData(50)]                                         // row length
    [InlineData(61)]                                         // iterations
    [InlineData(70)]                                         // residual
    [InlineData(5000)]                                       // a value
    [InlineData(-1)]                                         // the hash itself
    public void Entry_WithOneChangedByte_IsRemovedAndNotTaken(int at)
    {
        using ScratchFolder scratch = new();
        RowCache cache = new(scratch.Path);
        cache.TryWrite(Key(1), Rows(), Figures);
        string path = scratch.At(Key(1) + ".rows");
        byte[] bytes = File.ReadAllBytes(path);
        bytes[at < 0 ? bytes.Length - 1 : at] ^= 4;
        File.WriteAllBytes(path, bytes);
        Assert.False(cache.TryRead(Key(1), Empty(), out _, out string? trouble));
        Assert.Contains(path, trouble, StringComparison.Ordinal);
        Assert.Contains("solved for again", trouble, StringComparison.Ordinal);
        Assert.False(File.Exists(path));
        Assert.False(cache.TryRead(Key(1), Empty(), out _, out trouble));
        Assert.Null(trouble);
    }

    [Theory]
    [InlineData(-1)]
    [InlineData(1)]
    [InlineData(-100_000)]
    public void Entry_OfWrongLength_IsRemoved(int by)
    {
        using ScratchFolder scratch = new();
        RowCache cache = new(scratch.Path);
        cache.TryWrite(Key(1), Rows(), Figures);
        string path = scratch.At(Key(1) + ".rows");
        using (FileStream file = new(path, FileMode.Open))
        {
            file.SetLength(Math.Max(0, file.Length + by));
        }

        Assert.False(cache.TryRead(Key(1), Empty(), out _, out string? trouble));
        Assert.Contains($"{EntryLength} belong", trouble, StringComparison.Ordinal);
        Assert.False(File.Exists(path));
    }

    [Fact]
    public void Entry_HasTheBytesOnRecord()
    {
        // By hand, and its SHA-256 by a separate script: whoever changes the layout changes the mark at its start.
        Assert.Equal("1f766c011adc8f8de4e86a29fab971bbb48adf1313d71ddb70aed0e7181cc6ec", Convert.ToHexStringLower(SHA256.HashData(ByHand("rows-v1\n"))));
        using ScratchFolder scratch = new();
        TransferRows rows = OfSmallBlock();
        rows.Load(0, rows.Values.Length, values => MemoryMarshal.Cast<byte, float>(ByHand("rows-v1\n").AsSpan(72, 4 * values.Length)).CopyTo(values));
        RowCache cache = new(scratch.Path);
        Assert.Null(cache.TryWrite(CountedKey, rows, new(7, 0.25)));
        Assert.Equal(ByHand("rows-v1\n"), File.ReadAllBytes(scratch.At(CountedKey + ".rows")));
    }

    [Fact]
    public void EntryMadeByHand_IsRead()
    {
        using ScratchFolder scratch = new();
        scratch.Write(CountedKey + ".rows", ByHand("rows-v1\n"));
        TransferRows rows = OfSmallBlock();
        Assert.True(new RowCache(scratch.Path).TryRead(CountedKey, rows, out RowFigures figures, out string? trouble), trouble);
        Assert.Equal(new RowFigures(7, 0.25), figures);
        Assert.Equal((0, 0.5f, 1, 0, 26, 27), (rows.Values[0], rows.Values[1], rows.Values[2], rows.Values[3], rows.Values[26 * 16], rows.Values[26 * 16 + 2]));
    }

    [Theory]
    [InlineData("rows-v0\n")]
    [InlineData("rows-v2\n")]
    public void Entry_OfAnotherVersion_IsNotTakenThoughItsHashHolds(string mark)
    {
        using ScratchFolder scratch = new();
        scratch.Write(CountedKey + ".rows", ByHand(mark));
        RowCache cache = new(scratch.Path);
        TransferRows rows = OfSmallBlock();
        Assert.False(cache.TryRead(CountedKey, rows, out RowFigures figures, out string? trouble));
        Assert.Contains("by another version", trouble, StringComparison.Ordinal);
        Assert.Equal(default, figures);
        Assert.All(rows.Values.ToArray(), v => Assert.Equal(0, v));
        Assert.Null(cache.TryWrite(CountedKey, rows, new(7, 0.25)));
        Assert.True(cache.TryRead(CountedKey, rows, out _, out _));
    }

    [Fact]
    public void Entry_OfAnotherVersionOfTheKey_IsLeftAlone()
    {
        // The version is part of the key: rows of an older one have another name, and go when room is needed.
        using ScratchFolder scratch = new();
        scratch.Write(Key(1) + ".rows", ByHand("rows-v1\n"));
        Assert.False(new RowCache(scratch.Path).TryRead(CountedKey, OfSmallBlock(), out _, out string? trouble));
        Assert.Null(trouble);
        Assert.True(File.Exists(scratch.At(Key(1) + ".rows")));
    }

    private static readonly string CountedKey = Convert.ToHexStringLower([.. Enumerable.Range(0, 32).Select(n => (byte)n)]);

    private static TransferRows OfSmallBlock()
    {
        VoxelGrid grid = new(2, 2, 2, new(new(0.01, 0, 0), new(0, 0.01, 0), new(0, 0, 0.01), Vec3.Zero));
        TissueVolume volume = new(grid, [.. Enumerable.Repeat((byte)1, 8)], [new(0, "air", TissueKind.Air, 0), new(1, "grey", TissueKind.Grey, 0.33)]);
        return new(KeptNodes.All(new(HexMesh.Plain(volume))), 2, 1);
    }

    // Mark (8), key (32), number of values (8), row length, electrodes, channels, cycles (4 each), residual (8); node n and sensor s: n + s / 2, rows of sixteen; SHA-256 of the header and
    // of the SHA-256 of the values.
    private static byte[] ByHand(string mark)
    {
        using MemoryStream bytes = new();
        using BinaryWriter to = new(bytes);
        to.Write(System.Text.Encoding.ASCII.GetBytes(mark));
        to.Write(Convert.FromHexString(CountedKey));
        to.Write(27L * 16);
        Array.ForEach([16, 2, 1, 7], to.Write);
        to.Write(0.25);
        to.Flush();
        byte[] header = bytes.ToArray();
        for (int n = 0; n < 27 * 16; n++)
        {
            to.Write(n % 16 < 3 ? n / 16 + n % 16 / 2f : 0f);
        }

        to.Flush();
        to.Write(SHA256.HashData([.. header, .. SHA256.HashData(bytes.ToArray().AsSpan(72))]));
        to.Flush();
        return bytes.ToArray();
    }

    [Fact]
    public void Entry_UnderTheNameOfAnother_IsNotTaken()
    {
        using ScratchFolder scratch = new();
        RowCache cache = new(scratch.Path);
        cache.TryWrite(Key(1), Rows(), Figures);
        File.Move(scratch.At(Key(1) + ".rows"), scratch.At(Key(2) + ".rows"));
        Assert.False(cache.TryRead(Key(2), Empty(), out _, out string? trouble));
        Assert.NotNull(trouble);
    }

    [Fact]
    public void Folder_BeyondItsLimit_LosesWhatWasUsedLongestAgo()
    {
        using ScratchFolder scratch = new();
        Hours clock = new();
        RowCache cache = new(scratch.Path, 3 * EntryLength, clock);
        for (int n = 1; n <= 3; n++)
        {
            clock.Hour = n;
            Assert.Null(cache.TryWrite(Key(n), Rows(n), Figures));
        }

        clock.Hour = 4;
        Assert.True(cache.TryRead(Key(1), Empty(), out _, out _));      // now 2 is the oldest
        clock.Hour = 5;
        Assert.Null(cache.TryWrite(Key(4), Rows(4), Figures));
        Assert.Equal([Key(1), Key(3), Key(4)], Directory.GetFiles(scratch.Path).Select(f => Path.GetFileNameWithoutExtension(f)).Order());
        clock.Hour = 6;
        Assert.Null(cache.TryWrite(Key(3), Rows(3), Figures));          // in place of itself: nothing has to go
        Assert.Equal((3, 3 * EntryLength), cache.Size());
    }

    [Fact]
    public void Entry_LargerThanTheLimit_IsNotWrittenAndRemovesNothing()
    {
        using ScratchFolder scratch = new();
        new RowCache(scratch.Path).TryWrite(Key(1), Rows(), Figures);
        string? trouble = new RowCache(scratch.Path, EntryLength - 1).TryWrite(Key(2), Rows(), Figures);
        Assert.Contains("limit", trouble, StringComparison.Ordinal);
        Assert.Equal(1, new RowCache(scratch.Path).Size().Count);
    }

    [Fact]
    public void Clear_RemovesEntriesAndWhatKilledRunsLeft_AndNothingElse()
    {
        using ScratchFolder scratch = new();
        RowCache cache = new(scratch.Path);
        Assert.Equal((0, 0), cache.Clear());
        cache.TryWrite(Key(1), Rows(), Figures);
        cache.TryWrite(Key(2), Rows(), Figures);
        File.SetLastWriteTimeUtc(scratch.Write(Key(3) + ".rows.99999-1.partial", "left"), new DateTime(2020, 1, 1, 0, 0, 0, DateTimeKind.Utc));
        scratch.Write("notes.rows", "of the user");
        scratch.Write("notes.txt", "of the user");
        using FileStream running = new(scratch.At(Key(4) + ".rows.99999-2.partial"), FileMode.CreateNew, FileAccess.ReadWrite, FileShare.None);
        File.SetLastWriteTimeUtc(running.Name, new DateTime(2020, 1, 1, 0, 0, 0, DateTimeKind.Utc));
        Assert.Equal((2, 2 * EntryLength), cache.Clear());
        Assert.Equal([Key(4) + ".rows.99999-2.partial", "notes.rows", "notes.txt"], Directory.GetFiles(scratch.Path).Select(Path.GetFileName).Order());
    }

    [Fact]
    public void Folder_ThatCannotBeMade_IsToldAndStopsNothing()
    {
        using ScratchFolder scratch = new();
        RowCache cache = new(scratch.Write("file", "in the way"));
        Assert.Contains("cannot be kept", cache.TryWrite(Key(1), Rows(), Figures), StringComparison.Ordinal);
        Assert.False(cache.TryRead(Key(1), Empty(), out _, out _));
        Assert.Equal((0, 0), cache.Size());
    }

    [Fact]
    public void Entry_WrittenAndReadByManyAtOnce_IsWholeOrNotThere()
    {
        using ScratchFolder scratch = new();
        TransferRows rows = Rows();
        int taken = 0;
        Parallel.For(0, 40, n =>
        {
            RowCache cache = new(scratch.Path);
            if (n % 2 == 0)
            {
                Assert.Null(cache.TryWrite(Key(1), rows, Figures));
            }

            TransferRows read = Empty();
            if (cache.TryRead(Key(1), read, out _, out string? trouble))
            {
                Interlocked.Increment(ref taken);
                Assert.True(read.Values.SequenceEqual(rows.Values));
            }

            Assert.Null(trouble);
        });
        Assert.InRange(taken, 20, 40);
        Assert.Single(Directory.GetFiles(scratch.Path));
    }

    [Fact]
    public void Key_ThatIsNoHash_IsRefused()
    {
        using ScratchFolder scratch = new();
        Assert.Throws<ArgumentException>(() => new RowCache(scratch.Path).TryWrite("../outside", Rows(), Figures));
    }

    [Fact]
    public void DefaultFolder_StandsBelowTheStatedCacheFolder()
    {
        Assert.Equal("deepsourcecheck", Path.GetFileName(RowCache.DefaultFolder()));
        Assert.True(Path.IsPathFullyQualified(RowCache.DefaultFolder()));
    }

    private sealed class Hours : TimeProvider
    {
        public int Hour { get; set; }

        public override DateTimeOffset GetUtcNow() => new(2020, 1, 1, Hour, 0, 0, TimeSpan.Zero);
    }
}
