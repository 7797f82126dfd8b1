using System.Buffers.Binary;
using System.Globalization;
using System.Runtime.InteropServices;
using System.Security.Cryptography;

using DeepSourceCheck.Core.Leadfields.Voxels;

using Microsoft.Win32.SafeHandles;

namespace DeepSourceCheck.Files.Leadfields;

/// <summary>Transfer rows of voxel heads in a folder, one file a <see cref="RowKey"/>: a second study on the same head does not solve again.</summary>
/// <remarks>
/// <para>An entry is `KEY.rows`: header, values in the machine's byte order, SHA-256 over the header and the hashes of all stretches of values. It is written under a temporary
/// name and renamed, so that other processes see it whole or not at all; it is verified when it is read, and one that does not hold is removed. Two processes may write the
/// same entry: the later one replaces the earlier one of equal content.</para>
/// <para>The folder is bounded: before an entry is written, those that were used longest ago are removed. Trouble with the cache never stops a run: it is told and the rows are solved for.</para>
/// </remarks>
public sealed class RowCache
{
    /// <summary>Most bytes that entries may take unless told otherwise: 4 GiB.</summary>
    public const long DefaultLimit = 4L << 30;

    private const string Suffix = ".rows", PartialSuffix = ".partial";
    private const int HeaderLength = 72, DigestLength = SHA256.HashSizeInBytes, KeyLength = 32;
    private const int Stretch = 1 << 22;                     // values hashed at a time, 16 MiB

    private static readonly byte[] Magic = "rows-v1\n"u8.ToArray();

    // Between dropping the lock of a file and renaming it lie microseconds.
    private static readonly TimeSpan UnlockedGrace = TimeSpan.FromMinutes(1);

    private static int _counter;

    private readonly long _limit;
    private readonly TimeProvider _clock;

    /// <param name="folder">Folder; made when first written to.</param>
    /// <param name="limit">Most bytes of all entries together.</param>
    /// <param name="clock">Tells when an entry was used, which decides what is removed first; never reaches a result.</param>
    public RowCache(string folder, long limit = DefaultLimit, TimeProvider? clock = null) =>
        (Folder, _limit, _clock) = (Path.GetFullPath(folder), limit, clock ?? TimeProvider.System);

    /// <summary>Folder of the entries.</summary>
    public string Folder { get; }

    /// <summary>`deepsourcecheck` below XDG_CACHE_HOME where that is an absolute path, else below the system's folder for caches of the user.</summary>
    public static string DefaultFolder()
    {
        string? stated = Environment.GetEnvironmentVariable("XDG_CACHE_HOME");
        string parent = Path.IsPathFullyQualified(stated ?? "") ? stated!
            : OperatingSystem.IsWindows() ? Environment.GetFolderPath(Environment.SpecialFolder.LocalApplicationData)
            : Path.Combine(Environment.GetFolderPath(Environment.SpecialFolder.UserProfile), ".cache");
        return Path.Combine(parent, "deepsourcecheck");
    }

    /// <summary>Number and bytes of the entries.</summary>
    public (int Count, long Bytes) Size()
    {
        FileInfo[] entries = Entries();
        return (entries.Length, entries.Sum(e => e.Length));
    }

    /// <summary>Reads an entry into rows of the same nodes and sensors.</summary>
    /// <param name="key">Its key.</param>
    /// <param name="rows">Overwritten; undefined where the entry does not hold.</param>
    /// <param name="figures">How the rows were solved for.</param>
    /// <param name="trouble">Why an entry that is there was not taken; null otherwise.</param>
    /// <returns>True where the rows are those that were written.</returns>
    public bool TryRead(string key, TransferRows rows, out RowFigures figures, out string? trouble)
    {
        (figures, trouble) = (default, null);
        string path = PathOf(key);
        if (!File.Exists(path))
        {
            return false;
        }

        try
        {
            using (SafeFileHandle file = File.OpenHandle(path, FileMode.Open, FileAccess.Read, FileShare.Read | FileShare.Delete))
            {
                trouble = ReadAll(file, key, rows, out figures);
            }

            if (trouble is null)
            {
                Touch(path);
                return true;
            }

            trouble = $"{path}: {trouble}; it was removed and the rows are solved for again";
            File.Delete(path);
        }
        catch (Exception e) when (e is FileNotFoundException or DirectoryNotFoundException)
        {
            trouble = null;                                  // another process removed it meanwhile: as if it had never been
        }
        catch (Exception e) when (IsTrouble(e))
        {
            trouble = $"{path}: cannot be read ({Cause(e)}); the rows are solved for again";
        }

        return false;
    }

    /// <summary>Writes an entry.</summary>
    /// <param name="key">Its key.</param>
    /// <param name="rows">Rows, complete.</param>
    /// <param name="figures">How they were solved for.</param>
    /// <returns>Null, or why the rows were not kept.</returns>
    public string? TryWrite(string key, TransferRows rows, RowFigures figures)
    {
        string path = PathOf(key);
        long length = HeaderLength + (long)rows.Values.Length * sizeof(float) + DigestLength;
        if (length > _limit)
        {
            return string.Create(CultureInfo.InvariantCulture, $"{length >> 20} MiB of rows exceed the cache's limit of {_limit >> 20} MiB; they are not kept for the next run");
        }

        string partial = $"{path}.{Environment.ProcessId}-{Interlocked.Increment(ref _counter)}{PartialSuffix}";
        try
        {
            Directory.CreateDirectory(Folder);
            RemoveStalePartials();
            MakeRoom(length, path);
            using (SafeFileHandle file = File.OpenHandle(partial, FileMode.CreateNew, FileAccess.ReadWrite, FileShare.None, FileOptions.None, length))
            {
                WriteAll(file, key, rows, figures);
            }

            File.Move(partial, path, overwrite: true);
            Touch(path);
            return null;
        }
        catch (Exception e) when (IsTrouble(e))
        {
            TryDelete(partial);
            return $"{Folder}: rows cannot be kept for the next run ({Cause(e)})";
        }
    }

    /// <summary>Removes every entry and what killed runs left; other files in the folder stay.</summary>
    /// <returns>Number and bytes of the removed entries.</returns>
    public (int Count, long Bytes) Clear()
    {
        RemoveStalePartials();
        (int count, long bytes) = (0, 0);
        foreach (FileInfo entry in Entries())
        {
            long length = entry.Length;
            if (TryDelete(entry.FullName))
            {
                (count, bytes) = (count + 1, bytes + length);
            }
        }

        return (count, bytes);
    }

    private static string? ReadAll(SafeFileHandle file, string key, TransferRows rows, out RowFigures figures)
    {
        figures = default;
        int count = rows.Values.Length;
        long expected = HeaderLength + (long)count * sizeof(float) + DigestLength, length = RandomAccess.GetLength(file);
        if (length != expected)
        {
            return string.Create(CultureInfo.InvariantCulture, $"holds {length} bytes where {expected} belong");
        }

        var header = new byte[HeaderLength];
        ReadExactly(file, header, 0);
        byte[] wanted = Header(key, rows, default);
        const int Compared = 60;                                   // all but the figures
        if (!header.AsSpan(0, Compared).SequenceEqual(wanted.AsSpan(0, Compared)))
        {
            return "was written for other rows or by another version";
        }

        var digests = new byte[Stretches(count) * DigestLength];
        Parallel.For(0, Stretches(count), stretch => rows.Load(stretch * Stretch, Math.Min(Stretch, count - stretch * Stretch), values =>
        {
            Span<byte> bytes = MemoryMarshal.AsBytes(values);
            ReadExactly(file, bytes, HeaderLength + (long)stretch * Stretch * sizeof(float));
            SHA256.HashData(bytes, digests.AsSpan(stretch * DigestLength, DigestLength));
        }));
        var digest = new byte[DigestLength];
        ReadExactly(file, digest, length - DigestLength);
        if (!SHA256.HashData([.. header, .. digests]).AsSpan().SequenceEqual(digest))
        {
            return "is damaged: its hash is not that of its content";
        }

        figures = new(BinaryPrimitives.ReadInt32LittleEndian(header.AsSpan(60)), BinaryPrimitives.ReadDoubleLittleEndian(header.AsSpan(64)));
        return null;
    }

    private static void WriteAll(SafeFileHandle file, string key, TransferRows rows, RowFigures figures)
    {
        int count = rows.Values.Length;
        byte[] header = Header(key, rows, figures);
        RandomAccess.Write(file, header, 0);
        var digests = new byte[Stretches(count) * DigestLength];
        Parallel.For(0, Stretches(count), stretch =>
        {
            ReadOnlySpan<byte> bytes = MemoryMarshal.AsBytes(rows.Values.Slice(stretch * Stretch, Math.Min(Stretch, count - stretch * Stretch)));
            SHA256.HashData(bytes, digests.AsSpan(stretch * DigestLength, DigestLength));
            RandomAccess.Write(file, bytes, HeaderLength + (long)stretch * Stretch * sizeof(float));
        });
        RandomAccess.Write(file, SHA256.HashData([.. header, .. digests]), HeaderLength + (long)count * sizeof(float));
    }

    // Magic (8), key (32), values (8), row length (4), electrodes (4), channels (4), iterations (4), residual (8).
    private static byte[] Header(string key, TransferRows rows, RowFigures figures)
    {
        var header = new byte[HeaderLength];
        Magic.CopyTo(header, 0);
        Convert.FromHexString(key).CopyTo(header, 8);
        BinaryPrimitives.WriteInt64LittleEndian(header.AsSpan(40), rows.Values.Length);
        BinaryPrimitives.WriteInt32LittleEndian(header.AsSpan(48), rows.Stride);
        BinaryPrimitives.WriteInt32LittleEndian(header.AsSpan(52), rows.Electrodes);
        BinaryPrimitives.WriteInt32LittleEndian(header.AsSpan(56), rows.Channels);
        BinaryPrimitives.WriteInt32LittleEndian(header.AsSpan(60), figures.MostIterations);
        BinaryPrimitives.WriteDoubleLittleEndian(header.AsSpan(64), figures.LargestResidual);
        return header;
    }

    private static int Stretches(int count) => (int)(((long)count + Stretch - 1) / Stretch);

    private static void ReadExactly(SafeFileHandle file, Span<byte> target, long offset)
    {
        while (target.Length > 0)
        {
            int got = RandomAccess.Read(file, target, offset);
            if (got == 0)
            {
                throw new IOException("the file ends early");
            }

            target = target[got..];
            offset += got;
        }
    }

    private static bool TryDelete(string path)
    {
        try
        {
            File.Delete(path);
            return true;
        }
        catch (Exception e) when (IsTrouble(e))
        {
            return false;                                    // another process may hold or have removed it
        }
    }

    // Also as it comes out of several threads.
    private static bool IsTrouble(Exception e) =>
        e is IOException or UnauthorizedAccessException || (e is AggregateException all && all.InnerExceptions.All(IsTrouble));

    private static string Cause(Exception e) => e.GetBaseException().Message.TrimEnd('.');

    private static bool IsKey(string name) => name.Length == 2 * KeyLength && name.All(char.IsAsciiHexDigitLower);

    private string PathOf(string key) => IsKey(key) ? Path.Combine(Folder, key + Suffix)
        : throw new ArgumentException("A key has 64 lower-case hexadecimal digits.", nameof(key));

    private FileInfo[] Entries() => Directory.Exists(Folder)
        ? [.. new DirectoryInfo(Folder).EnumerateFiles("*" + Suffix).Where(f => f.Extension == Suffix && IsKey(Path.GetFileNameWithoutExtension(f.Name)))]
        : [];

    private void Touch(string path)
    {
        try
        {
            File.SetLastWriteTimeUtc(path, _clock.GetUtcNow().UtcDateTime);
        }
        catch (Exception e) when (IsTrouble(e))
        {
            // A cache that may only be read still serves.
        }
    }

    // Those used longest ago go first; names decide among equals.
    private void MakeRoom(long length, string replaced)
    {
        FileInfo[] entries = [.. Entries().Where(e => e.FullName != replaced).OrderBy(e => e.LastWriteTimeUtc).ThenBy(e => e.Name, StringComparer.Ordinal)];
        long total = entries.Sum(e => e.Length) + length;
        for (int n = 0; n < entries.Length && total > _limit; n++)
        {
            total -= entries[n].Length;
            TryDelete(entries[n].FullName);
        }
    }

    // A run that lives holds its file locked while it writes, and renames it right after; the system frees the lock of one that was killed.
    private void RemoveStalePartials()
    {
        foreach (string partial in Directory.Exists(Folder) ? Directory.GetFiles(Folder, "*" + Suffix + ".*" + PartialSuffix) : [])
        {
            try
            {
                if (_clock.GetUtcNow().UtcDateTime - File.GetLastWriteTimeUtc(partial) < UnlockedGrace)
                {
                    continue;
                }

                using FileStream own = new(partial, FileMode.Open, FileAccess.ReadWrite, FileShare.None);
            }
            catch (Exception e) when (IsTrouble(e))
            {
                continue;
            }

            TryDelete(partial);
        }
    }
}
