using System.Globalization;
using System.Runtime.InteropServices;

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
