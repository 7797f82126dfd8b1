using System.Buffers.Binary;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>The raw fields of a NIfTI-1 or NIfTI-2 header that matter here, brought to one form. Nothing is judged yet but what decides how to read them.</summary>
/// <remarks>Source: nifti1.h and nifti2.h of the NIfTI standard (byte offsets of the fields).</remarks>
internal sealed class NiftiFields
{
    /// <summary>Bytes of a NIfTI-1 header.</summary>
    public const int Size1 = 348;

    /// <summary>Bytes of a NIfTI-2 header.</summary>
    public const int Size2 = 540;

    private NiftiFields(ReadOnlySpan<byte> bytes, int version, bool bigEndian)
    {
        (Version, BigEndian) = (version, bigEndian);
        bool first = version == 1;
        Field h = new(bytes, bigEndian, first);
        for (int k = 0; k < 8; k++)
        {
            Dim[k] = first ? h.Short(40 + 2 * k) : h.Long(16 + 8 * k);
            Pixdim[k] = h.Real(first ? 76 + 4 * k : 104 + 8 * k);
        }

        IntentCode = first ? h.Short(68) : h.Int(504);
        DataType = h.Short(first ? 70 : 12);
        Bitpix = h.Short(first ? 72 : 14);
        VoxOffset = first ? h.Real(108) : h.Long(168);
        Slope = h.Real(first ? 112 : 176);
        Intercept = h.Real(first ? 116 : 184);
        Units = first ? bytes[123] : h.Int(500);
        QformCode = first ? h.Short(252) : h.Int(344);
        SformCode = first ? h.Short(254) : h.Int(348);
        int step = first ? 4 : 8;
        int quaternion = first ? 256 : 352, rows = first ? 280 : 400;
        Quaternion = new(h.Real(quaternion), h.Real(quaternion + step), h.Real(quaternion + 2 * step));
        QuaternionOffset = new(h.Real(quaternion + 3 * step), h.Real(quaternion + 4 * step), h.Real(quaternion + 5 * step));
        double[] s = new double[12];
        for (int k = 0; k < 12; k++)
        {
            s[k] = h.Real(rows + step * k);
        }

        Sform = new(new(s[0], s[1], s[2]), new(s[4], s[5], s[6]), new(s[8], s[9], s[10]), new(s[3], s[7], s[11]));
    }

    public int Version { get; }

    public bool BigEndian { get; }

    /// <summary>True for the magic of a two-file pair.</summary>
    public bool IsPair { get; private init; }

    public long[] Dim { get; } = new long[8];

    public double[] Pixdim { get; } = new double[8];

    /// <summary>What the values mean; 1005: symmetric matrices.</summary>
    public int IntentCode { get; }

    public int DataType { get; }

    public int Bitpix { get; }

    /// <summary>As stored: a real number in NIfTI-1.</summary>
    public double VoxOffset { get; }

    public double Slope { get; }

    public double Intercept { get; }

    public int Units { get; }

    public int QformCode { get; }

    public int SformCode { get; }

    /// <summary>b, c, d.</summary>
    public Vec3 Quaternion { get; }

    public Vec3 QuaternionOffset { get; }

    /// <summary>srow_x, srow_y, srow_z, in the header's unit.</summary>
    public Affine Sform { get; }

    /// <summary>Smallest data offset of a single file: the header and the four bytes that announce extensions.</summary>
    public int SmallestOffset => Version == 1 ? 352 : 544;

    /// <summary>Reads the header at the start of a source.</summary>
    /// <exception cref="InputException">Too short, or no NIfTI header.</exception>
    public static NiftiFields Read(ByteSource source, string displayName)
    {
        byte[] bytes = new byte[Size2];
        int have = source.Fill(bytes.AsSpan(0, Size1));
        Demand(have >= Size1, displayName, "sizeof_hdr", $"the file holds {have:N0} bytes{(source.IsGzip ? " when unpacked" : "")}, fewer than the {Size1} of a NIfTI header");

        int little = BinaryPrimitives.ReadInt32LittleEndian(bytes), big = BinaryPrimitives.ReadInt32BigEndian(bytes);
        bool bigEndian = big is Size1 or Size2;
        int size = bigEndian ? big : little;
        Demand(size is Size1 or Size2, displayName, "sizeof_hdr",
            $"this is no NIfTI file: it begins with {Convert.ToHexStringLower(bytes.AsSpan(0, 4))}, where {Size1} (NIfTI-1) or {Size2} (NIfTI-2) is expected in either byte order");
        return size == Size1 ? Read1(bytes, bigEndian, displayName) : Read2(source, bytes, bigEndian, displayName);
    }

    private static NiftiFields Read1(byte[] bytes, bool bigEndian, string displayName)
    {
        ReadOnlySpan<byte> magic = bytes.AsSpan(344, 4);
        bool pair = magic.SequenceEqual("ni1\0"u8);
        Demand(pair || magic.SequenceEqual("n+1\0"u8), displayName, "magic",
            magic[0] == 0
                ? "the magic is empty: this is the older 348-byte format, which has no trustworthy orientation; convert the file to NIfTI"
                : $"the magic is {Convert.ToHexStringLower(magic)}, where n+1 or ni1 (6e2b3100, 6e693100) is expected; the header is damaged or of another format");
        return new(bytes, 1, bigEndian) { IsPair = pair };
    }

    private static NiftiFields Read2(ByteSource source, byte[] bytes, bool bigEndian, string displayName)
    {
        int have = Size1 + source.Fill(bytes.AsSpan(Size1));
        Demand(have >= Size2, displayName, "sizeof_hdr", $"the file holds {have:N0} bytes{(source.IsGzip ? " when unpacked" : "")}, fewer than the {Size2} of a NIfTI-2 header");
        ReadOnlySpan<byte> magic = bytes.AsSpan(4, 8);
        bool pair = magic[..4].SequenceEqual("ni2\0"u8);
        Demand(pair || magic[..4].SequenceEqual("n+2\0"u8), displayName, "magic",
            $"the magic is {Convert.ToHexStringLower(magic[..4])}, where n+2 or ni2 (6e2b3200, 6e693200) is expected; the header is damaged or of another format");
        Demand(magic[4..].SequenceEqual("\r\n\u001a\n"u8), displayName, "magic",
            $"the magic ends in {Convert.ToHexStringLower(magic[4..])} instead of 0d0a1a0a: the file was changed by a transfer in text mode; copy it again in binary mode");
        return new(bytes, 2, bigEndian) { IsPair = pair };
    }

    private static void Demand(bool condition, string displayName, string field, string message)
    {
        if (!condition)
        {
            throw new InputException(displayName, field, message);
        }
    }

    /// <summary>Numbers at byte offsets; real numbers are single precision in NIfTI-1 and double in NIfTI-2.</summary>
    private readonly ref struct Field(ReadOnlySpan<byte> bytes, bool bigEndian, bool single)
    {
        private readonly ReadOnlySpan<byte> _bytes = bytes;

        public int Short(int at) => bigEndian ? BinaryPrimitives.ReadInt16BigEndian(_bytes[at..]) : BinaryPrimitives.ReadInt16LittleEndian(_bytes[at..]);

        public int Int(int at) => bigEndian ? BinaryPrimitives.ReadInt32BigEndian(_bytes[at..]) : BinaryPrimitives.ReadInt32LittleEndian(_bytes[at..]);

        public long Long(int at) => bigEndian ? BinaryPrimitives.ReadInt64BigEndian(_bytes[at..]) : BinaryPrimitives.ReadInt64LittleEndian(_bytes[at..]);

        public double Real(int at) => single
            ? BitConverter.Int32BitsToSingle(Int(at))
            : BitConverter.Int64BitsToDouble(Long(at));
    }
}
