using System.Buffers.Binary;
using System.Globalization;
using System.Numerics;
using System.Text;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Tables;

// CleanPoints.cs - points.tsv as programs write it, read from its bytes on all processors.
//   1. newlines of equal ranges of bytes are counted: every piece then knows the row that it begins with;
//   2. each piece, from line start to line start, is parsed into its part of arrays of known size;
//   3. names are entered into a hash table of row numbers, each processor its own share of the hashes.
// Whatever is not plainly sound - other characters than printable ASCII, a blank line, a cell too many, a number out of range, a repeated name - ends the attempt, and the reader of every
// table takes the file from its start: it alone knows problems and words them. A test holds both to the same points.

/// <summary>Reads a table of points that holds nothing unusual.</summary>
internal sealed class CleanPoints
{
    // A piece of bytes worth a thread of its own, and names that may collide before the attempt is given up.
    private const int LeastPiece = 1 << 17, MostProbes = 256;

    private static readonly string[] Wanted = ["name", "x", "y", "z"];

    private readonly byte[] _bytes;
    private readonly Role[] _roles;
    private readonly int _body;
    private Vec3[] _positions = [];
    private int[] _starts = [], _lengths = [];
    private uint[] _hashes = [];
    private volatile bool _unusual;

    private CleanPoints(byte[] bytes, Role[] roles, int body) => (_bytes, _roles, _body) = (bytes, roles, body);

    private enum Role
    {
        Other,
        Name,
        X,
        Y,
        Z,
    }

    /// <summary>Names and positions [m]; false where anything is unusual, though it may be right.</summary>
    /// <param name="bytes">The file; the names keep it.</param>
    /// <param name="names">Names in the order of the file.</param>
    /// <param name="positions">Positions [m] likewise.</param>
    public static bool TryRead(byte[] bytes, out PointNames names, out Vec3[] positions)
    {
        names = [];
        positions = [];
        int start = bytes.AsSpan().StartsWith("\ufeff"u8) ? 3 : 0, end = bytes.AsSpan(start).IndexOf((byte)'\n');
        if (end < 0 || Roles(bytes.AsSpan(start, end)) is not { } roles)
        {
            return false;
        }

        var reading = new CleanPoints(bytes, roles, start + end + 1);
        if (!reading.Rows() || !reading.NamesDiffer())
        {
            return false;
        }

        names = PointNames.Slices(bytes, reading._starts, reading._lengths);
        positions = reading._positions;
        return true;
    }

    // What each column holds; null where the header is unusual, or has directions.
    private static Role[]? Roles(ReadOnlySpan<byte> header)
    {
        header = header is [.., (byte)'\r'] ? header[..^1] : header;
        if (header.ContainsAnyExceptInRange((byte)' ', (byte)'~') && header.ToArray().Any(b => b is not ((byte)'\t' or >= (byte)' ' and <= (byte)'~')))
        {
            return null;
        }

        string[] cells = Encoding.ASCII.GetString(header).Split('\t', StringSplitOptions.TrimEntries);
        if (new HashSet<string>(cells).Count < cells.Length || !Wanted.All(cells.Contains) || cells.Any(c => c.StartsWith("direction_", StringComparison.Ordinal)))
        {
            return null;
        }

        return Array.ConvertAll(cells, c => c switch { "name" => Role.Name, "x" => Role.X, "y" => Role.Y, "z" => Role.Z, _ => Role.Other });
    }

    private bool Rows()
    {
        int length = _bytes.Length - _body, pieces = Math.Clamp(length / LeastPiece, 1, 16 * Environment.ProcessorCount);
        int Cut(int piece) => _body + (int)((long)length * piece / pieces);
        var before = new int[pieces + 1];
        Each(pieces, p => before[p + 1] = _bytes.AsSpan(Cut(p)..Cut(p + 1)).Count((byte)'\n'));
        for (int p = 0; p < pieces; p++)
        {
            before[p + 1] += before[p];
        }

        int rows = before[pieces] + (length > 0 && _bytes[^1] != '\n' ? 1 : 0);
        if (rows == 0)
        {
            return false;
        }

        _positions = GC.AllocateUninitializedArray<Vec3>(rows);
        _starts = GC.AllocateUninitializedArray<int>(rows);
        _lengths = GC.AllocateUninitializedArray<int>(rows);
        _hashes = GC.AllocateUninitializedArray<uint>(rows);

        // A piece begins after the first newline at or behind its cut, the first at the body's start.
        int Begin(int piece) => piece == 0 ? _body : piece == pieces || _bytes.AsSpan(Cut(piece)).IndexOf((byte)'\n') is not (>= 0 and var at) ? _bytes.Length : Cut(piece) + at + 1;
        Each(pieces, p => Piece(Begin(p), Begin(p + 1), p == 0 ? 0 : before[p] + 1));
        return !_unusual;
    }

    private void Piece(int at, int end, int row)
    {
        ReadOnlySpan<byte> bytes = _bytes.AsSpan(0, end);
        for (; at < end && !_unusual; row++)
        {
            double x = 0, y = 0, z = 0;
            for (int column = 0; column < _roles.Length; column++)
            {
                int start = at;
                while (at < end && (uint)(bytes[at] - ' ') <= '~' - ' ')
                {
                    at++;
                }

                ReadOnlySpan<byte> cell = bytes[start..at];
                bool read = _roles[column] switch
                {
                    Role.X => Millimetres(cell, out x),
                    Role.Y => Millimetres(cell, out y),
                    Role.Z => Millimetres(cell, out z),
                    Role.Name => Name(cell, start, row),
                    _ => true,
                };
                if (!read || !Ends(bytes, ref at, last: column == _roles.Length - 1))
                {
                    _unusual = true;
                    return;
                }
            }

            _positions[row] = new(Si.FromMm(x), Si.FromMm(y), Si.FromMm(z));
        }
    }

    // The tab between cells; behind the last one LF, CRLF or the end of the file.
    private static bool Ends(ReadOnlySpan<byte> bytes, ref int at, bool last)
    {
        if (last && at == bytes.Length)
        {
            return true;
        }

        at += last && at < bytes.Length && bytes[at] == '\r' ? 1 : 0;
        return at < bytes.Length && bytes[at++] == (last ? '\n' : '\t');
    }

    private static bool Millimetres(ReadOnlySpan<byte> cell, out double value) =>
        (PlainDecimal.TryParse(cell, out value) || (cell is [not (byte)' ', ..] and [.., not (byte)' '] && double.TryParse(cell, NumberStyles.Float, CultureInfo.InvariantCulture, out value)))
        && Math.Abs(value) <= TableCells.LargestPosition;

    private bool Name(ReadOnlySpan<byte> cell, int start, int row)
    {
        if (cell is not ([not (byte)' ', ..] and [.., not (byte)' ']))
        {
            return false;
        }

        (_starts[row], _lengths[row], _hashes[row]) = (start, cell.Length, Hash(cell));
        return true;
    }

    // Eight bytes a step, mixed by the finaliser of splitmix64 (public domain): every bit of a name reaches every bit of its hash.
    private static uint Hash(ReadOnlySpan<byte> name)
    {
        ulong hash = (ulong)name.Length;
        for (; name.Length >= 8; name = name[8..])
        {
            hash = Mixed(hash ^ BinaryPrimitives.ReadUInt64LittleEndian(name));
        }

        ulong rest = 0;
        for (int k = 0; k < name.Length; k++)
        {
            rest |= (ulong)name[k] << (8 * k);
        }

        return (uint)(Mixed(hash ^ rest) >> 32);
    }

    private static ulong Mixed(ulong z)
    {
        z = (z + 0x9e3779b97f4a7c15) * 0xbf58476d1ce4e5b9;
        z = (z ^ (z >> 27)) * 0x94d049bb133111eb;
        return z ^ (z >> 31);
    }

    // Equal names have equal hashes and so meet in one share.
    private bool NamesDiffer()
    {
        int shares = _starts.Length < LeastPiece / 16 ? 1 : (int)BitOperations.RoundUpToPowerOf2((uint)Environment.ProcessorCount);
        int bits = BitOperations.Log2((uint)shares), size = (int)BitOperations.RoundUpToPowerOf2((uint)(2L * _starts.Length / shares + 16));
        Each(shares, share => Enter(share, bits, size));
        return !_unusual;
    }

    private void Enter(int share, int bits, int size)
    {
        var table = new int[size];          // row + 1, or 0 for free
        int entered = 0;
        for (int row = 0; row < _hashes.Length && !_unusual; row++)
        {
            uint hash = _hashes[row];
            if ((hash & ((1u << bits) - 1)) != share)
            {
                continue;
            }

            uint at = (hash >> bits) & (uint)(size - 1);
            int probes = 0;
            for (; table[at] != 0; at = (at + 1) & (uint)(size - 1))
            {
                int other = table[at] - 1;
                if (++probes > MostProbes || (_hashes[other] == hash && Bytes(other).SequenceEqual(Bytes(row))))
                {
                    _unusual = true;
                    return;
                }
            }

            // Half of the table stays free, whatever the hashes are.
            if (++entered > size / 2)
            {
                _unusual = true;
                return;
            }

            table[at] = row + 1;
        }
    }

    private ReadOnlySpan<byte> Bytes(int row) => _bytes.AsSpan(_starts[row], _lengths[row]);

    private static void Each(int count, Action<int> body)
    {
        if (count == 1)
        {
            body(0);
        }
        else
        {
            Parallel.For(0, count, body);
        }
    }
}
