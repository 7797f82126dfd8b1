using System.Buffers.Binary;
using System.IO.Compression;

namespace DeepSourceCheck.Tests.Support;

/// <summary>Hand-written NIfTI bytes: field offsets stand here a second time, from nifti1.h and nifti2.h, so that the reader is not checked against itself.</summary>
internal sealed class NiftiBytes
{
    public bool Version2 { get; init; }

    public bool BigEndian { get; init; }

    public string Magic { get; init; } = "n+1";

    public long[] Dim { get; init; } = [3, 4, 3, 2, 1, 1, 1, 1];

    public int Intent { get; init; }

    public int DataType { get; init; } = 2;

    public int Bitpix { get; init; } = 8;

    public double[] Pixdim { get; init; } = [1, 2, 3, 4, 1, 0, 0, 0];

    public double VoxOffset { get; init; } = 352;

    public double Slope { get; init; }

    public double Intercept { get; init; }

    public int Units { get; init; } = 2;

    public int Qform { get; init; }

    public int Sform { get; init; } = 1;

    /// <summary>b, c, d and the three offsets.</summary>
    public double[] Quaternion { get; init; } = [0, 0, 0, 0, 0, 0];

    /// <summary>Three rows of four.</summary>
    public double[] Rows { get; init; } = [2, 0, 0, -3, 0, 3, 0, -5, 0, 0, 4, 7];

    /// <summary>Stored values; written in <see cref="DataType"/>.</summary>
    public double[] Values { get; init; } = [0, 1, 0, 0, 2, 0, 0, 3, 0, 0, 0, 0, 1, 1, 0, 0, 0, 0, 5, 0, 0, 0, 0, 7];

    /// <summary>The header, padded to the data's offset where that lies behind it.</summary>
    public byte[] Header()
    {
        int size = Version2 ? 540 : 348;
        byte[] h = new byte[size];
        Int(h, 0, size);
        if (Version2)
        {
            Ascii(h, 4, Magic + "\0\r\n\u001a\n");
            Short(h, 12, DataType);
            Short(h, 14, Bitpix);
            for (int k = 0; k < 8; k++)
            {
                Long(h, 16 + 8 * k, Dim[k]);
                Double(h, 104 + 8 * k, Pixdim[k]);
            }

            Long(h, 168, (long)VoxOffset);
            Double(h, 176, Slope);
            Double(h, 184, Intercept);
            Int(h, 344, Qform);
            Int(h, 348, Sform);
            for (int k = 0; k < 6; k++)
            {
                Double(h, 352 + 8 * k, Quaternion[k]);
            }

            for (int k = 0; k < 12; k++)
            {
                Double(h, 400 + 8 * k, Rows[k]);
            }

            Int(h, 500, Units);
            Int(h, 504, Intent);
            return h;
        }

        for (int k = 0; k < 8; k++)
        {
            Short(h, 40 + 2 * k, (int)Dim[k]);
            Single(h, 76 + 4 * k, Pixdim[k]);
        }

        Short(h, 68, Intent);
        Short(h, 70, DataType);
        Short(h, 72, Bitpix);
        Single(h, 108, VoxOffset);
        Single(h, 112, Slope);
        Single(h, 116, Intercept);
        h[123] = (byte)Units;
        Short(h, 252, Qform);
        Short(h, 254, Sform);
        for (int k = 0; k < 6; k++)
        {
            Single(h, 256 + 4 * k, Quaternion[k]);
        }

        for (int k = 0; k < 12; k++)
        {
            Single(h, 280 + 4 * k, Rows[k]);
        }

        Ascii(h, 344, Magic);
        return h;
    }

    /// <summary>The data alone.</summary>
    public byte[] Data()
    {
        int size = DataType switch { 2 or 256 => 1, 4 or 512 => 2, 8 or 768 or 16 => 4, _ => 8 };
        byte[] d = new byte[size * Values.Length];
        for (int n = 0; n < Values.Length; n++)
        {
            double v = Values[n];
            switch (DataType)
            {
                case 2: d[n] = (byte)v; break;
                case 256: d[n] = unchecked((byte)(sbyte)v); break;
                case 4: Short(d, 2 * n, (int)v); break;
                case 512: Short(d, 2 * n, unchecked((short)(ushort)v)); break;
                case 8: Int(d, 4 * n, (int)v); break;
                case 768: Int(d, 4 * n, unchecked((int)(uint)v)); break;
                case 16: Single(d, 4 * n, v); break;
                case 64: Double(d, 8 * n, v); break;
                case 1024: Long(d, 8 * n, (long)v); break;
                case 1280: Long(d, 8 * n, unchecked((long)(ulong)v)); break;
                default: break;
            }
        }

        return d;
    }

    /// <summary>Header, padding and data.</summary>
    public byte[] File()
    {
        byte[] header = Header();
        int offset = VoxOffset is > 0 and < 1e6 ? Math.Max(header.Length, (int)VoxOffset) : header.Length + 4;
        return [.. header, .. new byte[offset - header.Length], .. Data()];
    }

    public static byte[] Gzip(byte[] bytes)
    {
        using MemoryStream target = new();
        using (GZipStream zip = new(target, CompressionLevel.Optimal, leaveOpen: true))
        {
            zip.Write(bytes);
        }

        return target.ToArray();
    }

    private static void Ascii(byte[] h, int at, string text)
    {
        for (int k = 0; k < text.Length; k++)
        {
            h[at + k] = (byte)text[k];
        }
    }

    private void Short(byte[] h, int at, int v)
    {
        short s = unchecked((short)v);
        if (BigEndian)
        {
            BinaryPrimitives.WriteInt16BigEndian(h.AsSpan(at), s);
        }
        else
        {
            BinaryPrimitives.WriteInt16LittleEndian(h.AsSpan(at), s);
        }
    }

    private void Int(byte[] h, int at, int v)
    {
        if (BigEndian)
        {
            BinaryPrimitives.WriteInt32BigEndian(h.AsSpan(at), v);
        }
        else
        {
            BinaryPrimitives.WriteInt32LittleEndian(h.AsSpan(at), v);
        }
    }

    private void Long(byte[] h, int at, long v)
    {
        if (BigEndian)
        {
            BinaryPrimitives.WriteInt64BigEndian(h.AsSpan(at), v);
        }
        else
        {
            BinaryPrimitives.WriteInt64LittleEndian(h.AsSpan(at), v);
        }
    }

    private void Single(byte[] h, int at, double v) => Int(h, at, BitConverter.SingleToInt32Bits((float)v));

    private void Double(byte[] h, int at, double v) => Long(h, at, BitConverter.DoubleToInt64Bits(v));
}
