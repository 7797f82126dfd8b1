using System.Buffers.Binary;

using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Npy;

/// <summary>Reads .npy arrays of float32 or float64, either byte order, C or Fortran order.</summary>
public static class NpyReader
{
    private const int Piece = 1 << 16;

    /// <summary>Reads the header alone; the shape is held against the file's length.</summary>
    /// <exception cref="InputException">Malformed or not supported; names file, field and reason.</exception>
    public static NpyHeader ReadHeader(string path, string displayName)
    {
        using FileStream file = InputFileAccess.Open(path, displayName);
        return InputFileAccess.Guard(displayName, () => NpyHeaderParser.Parse(file, displayName));
    }

    /// <summary>Reads the whole array, last axis fastest. NaN and infinities are kept: see <see cref="NpyArray.FirstNonFinite"/>.</summary>
    /// <inheritdoc cref="ReadHeader"/>
    public static NpyArray Read(string path, string displayName)
    {
        using FileStream file = InputFileAccess.Open(path, displayName);
        return InputFileAccess.Guard(displayName, () =>
        {
            NpyHeader header = NpyHeaderParser.Parse(file, displayName);
            double[] values = new double[header.Count];
            file.Seek(header.DataOffset, SeekOrigin.Begin);
            byte[] buffer = new byte[Piece];
            int step = Piece / header.ItemSize;
            for (int done = 0; done < values.Length; done += step)
            {
                Span<double> target = values.AsSpan(done, Math.Min(step, values.Length - done));
                Span<byte> bytes = buffer.AsSpan(0, target.Length * header.ItemSize);
                file.ReadExactly(bytes);
                Decode(bytes, header, target);
            }

            return new NpyArray(header, header.FortranOrder ? LastAxisFastest(values, header.Shape) : values);
        });
    }

    private static void Decode(ReadOnlySpan<byte> bytes, NpyHeader header, Span<double> target)
    {
        for (int n = 0; n < target.Length; n++)
        {
            ReadOnlySpan<byte> item = bytes[(n * header.ItemSize)..];
            target[n] = (header.ItemSize, header.BigEndian) switch
            {
                (8, false) => BinaryPrimitives.ReadDoubleLittleEndian(item),
                (8, true) => BinaryPrimitives.ReadDoubleBigEndian(item),
                (_, false) => BinaryPrimitives.ReadSingleLittleEndian(item),
                (_, true) => BinaryPrimitives.ReadSingleBigEndian(item),
            };
        }
    }

    /// <summary>Reorders an array whose first axis runs fastest.</summary>
    private static double[] LastAxisFastest(double[] values, IReadOnlyList<int> shape)
    {
        if (shape.Count < 2 || values.Length == 0)
        {
            return values;
        }

        double[] ordered = new double[values.Length];
        int[] index = new int[shape.Count];
        int[] stride = new int[shape.Count];
        for (int axis = shape.Count - 1, step = 1; axis >= 0; step *= shape[axis--])
        {
            stride[axis] = step;
        }

        int target = 0;
        foreach (double value in values)
        {
            ordered[target] = value;
            for (int axis = 0; axis < index.Length; axis++)
            {
                target += stride[axis];
                if (++index[axis] < shape[axis])
                {
                    break;
                }

                target -= stride[axis] * shape[axis];
                index[axis] = 0;
            }
        }

        return ordered;
    }
}
