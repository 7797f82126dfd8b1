using System.Buffers;
using System.Text;

using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Report.Tables;

/// <summary>dipoles.csv: a row per response, region and dipole, written as the dipoles are computed.</summary>
/// <remarks>
/// UTF-8, LF, RFC 4180. Numbers have the shortest text that reads back to the same double. Undefined and silent values are empty cells.
/// Positions in mm; v1 to v3 unit vectors; s in 1/(A m); SNR in dB.
/// </remarks>
public sealed class DipolesCsv : IDipoleSink, IDisposable
{
    /// <summary>The columns before those of SNR.</summary>
    public const string FixedHeader = "response,region,point,x_mm,y_mm,z_mm,v1x,v1y,v1z,v2x,v2y,v2z,v3x,v3y,v3z,s1,s2,s3,split";

    // Longest shortest-round-trip text of a double: sign, 17 digits, point, E-308.
    private const int LongestNumber = 25;
    private const int FixedNumbers = 15;

    private readonly Stream _stream;
    private int _columns;

    /// <summary>Writes to <paramref name="stream"/>, which is closed on <see cref="Dispose"/>.</summary>
    public DipolesCsv(Stream stream) => _stream = stream;

    /// <inheritdoc/>
    public void Begin(IReadOnlyList<DipoleColumn> columns)
    {
        _columns = columns.Count;
        string names = string.Concat(columns.Select(c => "," + CsvField.Quote(c.Name)));
        _stream.Write(Encoding.UTF8.GetBytes(FixedHeader + names + "\n"));
    }

    /// <inheritdoc/>
    public byte[] Format(DipoleChunk chunk)
    {
        if (chunk.SnrDb.Length != _columns)
        {
            throw new ArgumentException($"The chunk has {chunk.SnrDb.Length} columns of SNR, {_columns} were announced.", nameof(chunk));
        }

        byte[] head = Encoding.UTF8.GetBytes($"{CsvField.Quote(chunk.Response)},{CsvField.Quote(chunk.Region)},");
        int longestName = 0;
        for (int k = 0; k < chunk.Count; k++)
        {
            longestName = Math.Max(longestName, Encoding.UTF8.GetByteCount(CsvField.Quote(chunk.Points[k])));
        }

        int longestRow = head.Length + longestName + (FixedNumbers + _columns) * (LongestNumber + 1) + 16;
        byte[] buffer = ArrayPool<byte>.Shared.Rent(checked(longestRow * Math.Max(1, chunk.Count)));
        try
        {
            int n = 0;
            for (int k = 0; k < chunk.Count; k++)
            {
                n = Row(chunk, k, head, buffer, n);
            }

            return buffer[..n];
        }
        finally
        {
            ArrayPool<byte>.Shared.Return(buffer);
        }
    }

    /// <inheritdoc/>
    public void Append(byte[] formatted) => _stream.Write(formatted);

    /// <summary>Closes the stream.</summary>
    public void Dispose() => _stream.Dispose();

    private static int Row(DipoleChunk chunk, int k, byte[] head, byte[] buffer, int n)
    {
        head.CopyTo(buffer, n);
        n += head.Length;
        n += Encoding.UTF8.GetBytes(CsvField.Quote(chunk.Points[k]), buffer.AsSpan(n));
        Vec3 p = chunk.Positions[k];
        n = Numbers(new(Si.ToMm(p.X), Si.ToMm(p.Y), Si.ToMm(p.Z)), buffer, n);
        for (int axis = 0; axis < 3; axis++)
        {
            n = Numbers(chunk.Directions[3 * k + axis], buffer, n);
        }

        n = Numbers(chunk.SingularValues[k], buffer, n);
        ReadOnlySpan<byte> state = chunk.States[k] switch
        {
            SplitState.Ok => ",ok"u8,
            SplitState.Degenerate => ",degenerate"u8,
            _ => ",undefined"u8,
        };
        state.CopyTo(buffer.AsSpan(n));
        n += state.Length;
        foreach (double[] column in chunk.SnrDb)
        {
            n = Number(column[k], buffer, n);
        }

        buffer[n++] = (byte)'\n';
        return n;
    }

    private static int Numbers(Vec3 v, byte[] buffer, int n) => Number(v.Z, buffer, Number(v.Y, buffer, Number(v.X, buffer, n)));

    private static int Number(double value, byte[] buffer, int n)
    {
        buffer[n++] = (byte)',';
        if (double.IsFinite(value))
        {
            // Adding 0 turns -0 into 0.
            (value + 0.0).TryFormat(buffer.AsSpan(n), out int written, default, System.Globalization.CultureInfo.InvariantCulture);
            n += written;
        }

        return n;
    }
}
