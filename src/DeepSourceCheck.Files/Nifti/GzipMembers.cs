using System.Buffers.Binary;
using System.IO.Compression;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>Reads a gzip file and holds it to its checksums: a stream that is cut short never passes for a shorter one.</summary>
/// <remarks>
/// Source: RFC 1952. The platform's reader ends silently at the end of a truncated file, so members, trailers (CRC-32 and length) and what follows are handled here;
/// only the deflated data go through the platform. Several members in a row are one stream; zero padding and foreign bytes after the last are left alone.
/// </remarks>
internal sealed class GzipMembers : IDisposable
{
    /// <summary>First two bytes of every member.</summary>
    public const ushort Magic = 0x1f8b;

    /// <summary>No deflated stream grows by more than this (258 bytes from 2 bits).</summary>
    public const long LargestExpansion = 1032;

    private const int TrailerSize = 8;
    private const int MostEmptyMembers = 1000;

    private readonly FileStream _file;
    private readonly Feed _feed;
    private DeflateStream? _member;
    private uint _checksum;
    private uint _size;
    private int _emptyMembers;
    private bool _ended;

    public GzipMembers(FileStream file)
    {
        _file = file;
        _feed = new(file);
    }

    /// <summary>True when bytes that are neither padding nor a further member follow the last one.</summary>
    public bool HasForeignTail { get; private set; }

    /// <summary>Reads up to the target's length; 0 at the end of the last member, whose checksums then hold.</summary>
    /// <exception cref="InvalidDataException">The stream is damaged or cut short.</exception>
    public int Read(Span<byte> target)
    {
        while (!_ended && !target.IsEmpty)
        {
            if (_member is null)
            {
                if (!BeginMember())
                {
                    _ended = true;
                    break;
                }
            }

            int read = _member!.Read(target);
            if (read > 0)
            {
                _checksum = Crc32.Append(_checksum, target[..read]);
                _size = unchecked(_size + (uint)read);
                return read;
            }

            EndMember();
        }

        return 0;
    }

    public void Dispose()
    {
        _member?.Dispose();
        _feed.Dispose();
    }

    private bool BeginMember()
    {
        bool first = _file.Position == 0;
        int value = _file.ReadByte();
        while (value == 0 && !first)
        {
            value = _file.ReadByte();
        }

        if (value < 0)
        {
            return false;
        }

        if (value != Magic >> 8 || _file.ReadByte() != (Magic & 0xff))
        {
            HasForeignTail = true;
            return false;
        }

        Span<byte> rest = stackalloc byte[8];
        ReadHeaderBytes(rest);
        int flags = rest[1];
        if (rest[0] != 8 || (flags & 0xe0) != 0)
        {
            throw new InvalidDataException("its gzip header is damaged");
        }

        if ((flags & 4) != 0)
        {
            ReadHeaderBytes(rest[..2]);
            _file.Seek(BinaryPrimitives.ReadUInt16LittleEndian(rest), SeekOrigin.Current);
        }

        for (int texts = (flags >> 3 & 1) + (flags >> 4 & 1); texts > 0; texts--)
        {
            do
            {
                ReadHeaderBytes(rest[..1]);
            }
            while (rest[0] != 0);
        }

        if ((flags & 2) != 0)
        {
            ReadHeaderBytes(rest[..2]);
        }

        (_checksum, _size) = (0, 0);
        _feed.Restart();
        _member = new(_feed, CompressionMode.Decompress, leaveOpen: true);
        return true;
    }

    private void ReadHeaderBytes(Span<byte> target)
    {
        if (_file.ReadAtLeast(target, target.Length, throwOnEndOfStream: false) < target.Length)
        {
            throw new InvalidDataException("it ends inside a gzip header");
        }
    }

    /// <summary>
    /// Finds the member's trailer. Deflate reads ahead, so where it stopped is known only to lie in the last piece that it was handed; the trailer's own eight bytes, already known, give the place.
    /// </summary>
    private void EndMember()
    {
        _member!.Dispose();
        _member = null;
        _emptyMembers = _size == 0 ? _emptyMembers + 1 : 0;

        Span<byte> trailer = stackalloc byte[TrailerSize];
        BinaryPrimitives.WriteUInt32LittleEndian(trailer, _checksum);
        BinaryPrimitives.WriteUInt32LittleEndian(trailer[4..], _size);
        byte[] piece = new byte[_feed.LastCount + TrailerSize];
        _file.Seek(_feed.LastStart, SeekOrigin.Begin);
        int read = _file.ReadAtLeast(piece, piece.Length, throwOnEndOfStream: false);
        int at = piece.AsSpan(0, read).IndexOf(trailer);
        if (at < 0 || _emptyMembers > MostEmptyMembers)
        {
            throw new InvalidDataException("it ends without the gzip checksum of its data, or with a wrong one");
        }

        _file.Seek(_feed.LastStart + at + TrailerSize, SeekOrigin.Begin);
    }

    /// <summary>Hands the file to the inflater and remembers the last piece.</summary>
    private sealed class Feed(FileStream file) : Stream
    {
        public long LastStart { get; private set; }

        public int LastCount { get; private set; }

        public void Restart() => (LastStart, LastCount) = (file.Position, 0);

        public override bool CanRead => true;

        public override bool CanSeek => false;

        public override bool CanWrite => false;

        public override long Length => throw new NotSupportedException();

        public override long Position { get => throw new NotSupportedException(); set => throw new NotSupportedException(); }

        public override int Read(byte[] buffer, int offset, int count) => Read(buffer.AsSpan(offset, count));

        public override int Read(Span<byte> buffer)
        {
            long start = file.Position;
            int read = file.Read(buffer);
            if (read > 0)
            {
                (LastStart, LastCount) = (start, read);
            }

            return read;
        }

        public override void Flush()
        {
        }

        public override long Seek(long offset, SeekOrigin origin) => throw new NotSupportedException();

        public override void SetLength(long value) => throw new NotSupportedException();

        public override void Write(byte[] buffer, int offset, int count) => throw new NotSupportedException();
    }
}
