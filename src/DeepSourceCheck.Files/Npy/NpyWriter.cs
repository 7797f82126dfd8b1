using System.Buffers.Binary;
using System.Text;

namespace DeepSourceCheck.Files.Npy;

/// <summary>Writes .npy arrays: version 1.0, little-endian float64, last axis fastest, data at a multiple of 64 bytes.</summary>
/// <remarks>Source: the .npy format description of the NumPy documentation.</remarks>
public static class NpyWriter
{
    private const int Alignment = 64;
    private const int Piece = 8192;

    /// <summary>Writes header and numbers.</summary>
    /// <param name="target">Stream to append to.</param>
    /// <param name="shape">Sizes of the axes; their product is the number of values.</param>
    /// <param name="values">Numbers, last axis fastest; unit by context.</param>
    /// <exception cref="ArgumentException">The shape does not fit the values.</exception>
    public static void Write(Stream target, IReadOnlyList<int> shape, ReadOnlySpan<double> values)
    {
        if (shape.Aggregate(1L, (product, size) => product * size) != values.Length)
        {
            throw new ArgumentException($"{values.Length} values do not fill {string.Join(" x ", shape)}.", nameof(values));
        }

        WriteHeader(target, shape);
        WriteValues(target, values);
    }

    /// <summary>Writes an array to a new file.</summary>
    /// <inheritdoc cref="Write(Stream, IReadOnlyList{int}, ReadOnlySpan{double})"/>
    public static void Write(string path, IReadOnlyList<int> shape, ReadOnlySpan<double> values)
    {
        using FileStream file = new(path, FileMode.Create, FileAccess.Write, FileShare.None, 1 << 16);
        Write(file, shape, values);
    }

    /// <summary>Writes the header alone, for arrays whose numbers follow piece by piece.</summary>
    public static void WriteHeader(Stream target, IReadOnlyList<int> shape)
    {
        string sizes = string.Join(", ", shape) + (shape.Count == 1 ? "," : "");
        string text = $"{{'descr': '<f8', 'fortran_order': False, 'shape': ({sizes}), }}";
        const int Prefix = 10;
        int length = Prefix + text.Length + 1;
        text = text.PadRight(text.Length + (Alignment - length % Alignment) % Alignment) + "\n";
        Span<byte> start = [0x93, (byte)'N', (byte)'U', (byte)'M', (byte)'P', (byte)'Y', 1, 0, 0, 0];
        BinaryPrimitives.WriteUInt16LittleEndian(start[8..], checked((ushort)text.Length));
        target.Write(start);
        target.Write(Encoding.ASCII.GetBytes(text));
    }

    /// <summary>Appends numbers.</summary>
    public static void WriteValues(Stream target, ReadOnlySpan<double> values)
    {
        byte[] buffer = new byte[Piece * sizeof(double)];
        while (!values.IsEmpty)
        {
            ReadOnlySpan<double> piece = values[..Math.Min(Piece, values.Length)];
            for (int n = 0; n < piece.Length; n++)
            {
                BinaryPrimitives.WriteDoubleLittleEndian(buffer.AsSpan(n * sizeof(double)), piece[n]);
            }

            target.Write(buffer, 0, piece.Length * sizeof(double));
            values = values[piece.Length..];
        }
    }
}
