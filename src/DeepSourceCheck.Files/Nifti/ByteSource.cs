using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>The bytes of a file, inflated when its first bytes are those of gzip, whatever its name says.</summary>
internal sealed class ByteSource : IDisposable
{
    private const int SkipStep = 1 << 16;

    private readonly FileStream _file;
    private readonly GzipMembers? _gzip;
    private readonly string _displayName;

    public ByteSource(string path, string displayName)
    {
        _displayName = displayName;
        _file = InputFileAccess.Open(path, displayName);
        int high = _file.ReadByte(), low = _file.ReadByte();
        _file.Seek(0, SeekOrigin.Begin);
        _gzip = (high << 8 | low) == GzipMembers.Magic ? new(_file) : null;
    }

    /// <summary>True for a gzip stream.</summary>
    public bool IsGzip => _gzip is not null;

    /// <summary>Bytes that were read or skipped.</summary>
    public long Consumed { get; private set; }

    /// <summary>Bytes of the file on disk.</summary>
    public long FileLength => _file.Length;

    /// <summary>More bytes than this cannot come out of the file.</summary>
    public long MostBytes => IsGzip ? _file.Length * GzipMembers.LargestExpansion : _file.Length;

    /// <summary>Reads until the target is full or the bytes end; returns the number read.</summary>
    /// <exception cref="InputException">The gzip stream is damaged or cut short.</exception>
    public int Fill(Span<byte> target)
    {
        int filled = 0;
        while (filled < target.Length)
        {
            int read = ReadSome(target[filled..]);
            if (read == 0)
            {
                break;
            }

            filled += read;
            Consumed += read;
        }

        return filled;
    }

    /// <summary>Skips bytes; returns how many there were.</summary>
    public long Skip(long count)
    {
        byte[] step = new byte[(int)Math.Min(SkipStep, count)];
        long left = count;
        while (left > 0)
        {
            int read = Fill(step.AsSpan(0, (int)Math.Min(step.Length, left)));
            left -= read;
            if (read == 0)
            {
                break;
            }
        }

        return count - left;
    }

    /// <summary>Reads on to the end, up to <paramref name="most"/> bytes, so that the gzip checksum is verified; null when more follow.</summary>
    /// <returns>Bytes that followed, foreign bytes after the gzip stream counted as 1.</returns>
    public long? Finish(long most)
    {
        if (!IsGzip)
        {
            return _file.Length - Consumed;
        }

        long rest = Skip(most + 1);
        return rest > most ? null : rest + (_gzip!.HasForeignTail ? 1 : 0);
    }

    public void Dispose()
    {
        _gzip?.Dispose();
        _file.Dispose();
    }

    private int ReadSome(Span<byte> target)
    {
        try
        {
            return _gzip is null ? _file.Read(target) : _gzip.Read(target);
        }
        catch (InvalidDataException error)
        {
            // The platform's inflater speaks of its own internals; only our own messages are shown.
            string reason = error.Message.StartsWith("it", StringComparison.Ordinal) ? error.Message : "its gzip data cannot be unpacked";
            throw new InputException(_displayName, null,
                $"the file is cut short or damaged: {reason}, after {Consumed:N0} unpacked bytes; copy or export it again");
        }
        catch (IOException error)
        {
            throw new InputException(_displayName, null, $"reading failed after {Consumed:N0} bytes: {error.Message.Split('\n')[0]}");
        }
    }
}
