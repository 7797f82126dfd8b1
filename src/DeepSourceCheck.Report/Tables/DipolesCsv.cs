using System.Buffers;
using System.Text;

using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Report.Tables;

/// <summary>dipoles.csv: a row per response, region and dipole, written as the dipoles are computed.</summary>
/// <remarks>
/// UTF-8, LF, RFC 4180. Numbers have the shortest text that reads back to the same double (<see cref="ShortestDecimal"/>). Undefined and silent values are empty cells.
/// Positions in mm; v1 to v3 unit vectors; s in 1/(A m); SNR in dB.
/// </remarks>
public sealed class DipolesCsv : IDipoleSink, IDisposable
{
    /// <summary>The columns before those of SNR.</summary>
    public const string FixedHeader = "response,region,point,x_mm,y_mm,z_mm,v1x,v1y,v1z,v2x,v2y,v2z,v3x,v3y,v3z,s1,s2,s3,split";

    private const int FixedNumbers = 15;
    private const int LongestState = 16;                        // `,degenerate` and the end of the line

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
    public void Format(DipoleChunk chunk, IBufferWriter<byte> text)
    {
        if (chunk.SnrDb.Length != _columns)
        {
            throw new ArgumentException($"The chunk has {chunk.SnrDb.Length} columns of SNR, {_columns} were announced.", nameof(chunk));
        }

        byte[] head = Encoding.UTF8.GetBytes($"{CsvField.Quote(chunk.Response)},{CsvField.Quote(chunk.Region)},");
        int longestNumbers = (FixedNumbers + _columns) * (ShortestDecimal.Longest + 1) + LongestState;
        for (int k = 0; k < chunk.Count; k++)
        {
            string name = CsvField.Quote(chunk.Points[k]);
            Span<byte> row = text.GetSpan(head.Length + Encoding.UTF8.GetMaxByteCount(name.Length) + longestNumbers);
            head.CopyTo(row);
            int n = head.Length;
            n += Encoding.UTF8.GetBytes(name, row[n..]);
            text.Advance(Row(chunk, k, row, n));
        }
    }

    /// <inheritdoc/>
    public void Append(ReadOnlySpan<byte> formatted) => _stream.Write(formatted);

    /// <summary>Closes the stream.</summary>
    public void Dispose() => _stream.Dispose();

    private static int Row(DipoleChunk chunk, int k, Span<byte> row, int n)
    {
        Vec3 p = chunk.Positions[k];
        n = Numbers(new(Si.ToMm(p.X), Si.ToMm(p.Y), Si.ToMm(p.Z)), row, n);
        for (int axis = 0; axis < 3; axis++)
        {
            n = Numbers(chunk.Directions[3 * k + axis], row, n);
        }

        n = Numbers(chunk.SingularValues[k], row, n);
        ReadOnlySpan<byte> state = chunk.States[k] switch
        {
            SplitState.Ok => ",ok"u8,
            SplitState.Degenerate => ",degenerate"u8,
            _ => ",undefined"u8,
        };
        state.CopyTo(row[n..]);
        n += state.Length;
        foreach (double[] column in chunk.SnrDb)
        {
            n = Number(column[k], row, n);
        }

        row[n++] = (byte)'\n';
        return n;
    }

    private static int Numbers(Vec3 v, Span<byte> row, int n) => Number(v.Z, row, Number(v.Y, row, Number(v.X, row, n)));

    private static int Number(double value, Span<byte> row, int n)
    {
        row[n++] = (byte)',';
        return double.IsFinite(value) ? n + ShortestDecimal.Write(value, row[n..]) : n;
    }
}
