using System.Buffers.Binary;
using System.IO.Compression;
using System.Runtime.InteropServices;
using System.Text;

using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>What the values of a volume are, as far as NIfTI has a code for it.</summary>
public enum NiftiIntent
{
    /// <summary>Not stated.</summary>
    None = 0,

    /// <summary>Estimates, for instance a map of decibels.</summary>
    Estimate = 1001,

    /// <summary>Labels.</summary>
    Label = 1002,
}

/// <summary>Writes NIfTI-1 single files, .nii or .nii.gz: three-dimensional volumes of uint8, int16 or float32.</summary>
/// <remarks>
/// Source: the NIfTI-1 standard (byte offsets of the fields; quaternion of a rotation matrix). Little-endian, millimetres, sform code 2 (aligned coordinates). The qform says the
/// same where the map is a rotation with voxel sizes, else (and where single precision cannot tell it) its code is 0. The gzip header holds no time and no system (RFC 1952), so that the same volume gives the same bytes.
/// </remarks>
public static class NiftiWriter
{
    private const int HeaderSize = 348;
    private const int DataOffset = 352;
    private const int DescriptionSize = 79;
    private const int NameSize = 15;
    private const short Aligned = 2;

    /// <summary>Values swapped or copied at a time [bytes].</summary>
    private const int Stretch = 1 << 20;

    /// <summary>Cosine between two axes from which a quaternion no longer tells the map.</summary>
    private const double Oblique = 1e-6;

    /// <summary>Distance [mm] at a corner of the volume up to which the qform may differ from the sform: near half a turn, single precision tells a rotation badly.</summary>
    private const double QformTolerance = 0.01;

    /// <summary>Writes a file; its name decides whether it is compressed.</summary>
    /// <typeparam name="T">byte, short or float.</typeparam>
    /// <param name="path">The file, ending in .nii or .nii.gz; an existing one is replaced.</param>
    /// <param name="grid">Where the voxels lie [m].</param>
    /// <param name="values">One value a voxel, first axis fastest, unit by context.</param>
    /// <param name="intent">What they are.</param>
    /// <param name="intentName">Their name, at most 15 ASCII characters.</param>
    /// <param name="description">Free text, at most 79 ASCII characters.</param>
    /// <exception cref="ArgumentException">The name's ending, a length, a size over 32,767 voxels, the type, or text that does not fit.</exception>
    public static void Write<T>(string path, VoxelGrid grid, ReadOnlySpan<T> values, NiftiIntent intent = NiftiIntent.None, string intentName = "", string description = "")
        where T : unmanaged
    {
        bool zipped = path.EndsWith(".nii.gz", StringComparison.OrdinalIgnoreCase);
        if (!zipped && !path.EndsWith(".nii", StringComparison.OrdinalIgnoreCase))
        {
            throw new ArgumentException("The name must end in .nii or .nii.gz.", nameof(path));
        }

        byte[] header = Header<T>(grid, values.Length, intent, intentName, description);
        using FileStream file = new(path, FileMode.Create, FileAccess.Write);
        if (zipped)
        {
            WriteZipped(file, header, values);
        }
        else
        {
            file.Write(header);
            ForEachStretch(values, file.Write);
        }
    }

    private delegate void Sink(ReadOnlySpan<byte> bytes);

    private static void WriteZipped<T>(Stream file, byte[] header, ReadOnlySpan<T> values)
        where T : unmanaged
    {
        // Magic, deflate, no flags, no time, no hint of speed, system unknown.
        file.Write([0x1f, 0x8b, 8, 0, 0, 0, 0, 0, 0, 0xff]);
        uint checksum = 0;
        uint length = 0;
        using (DeflateStream zip = new(file, CompressionLevel.Optimal, leaveOpen: true))
        {
            void Both(ReadOnlySpan<byte> bytes)
            {
                zip.Write(bytes);
                checksum = Crc32.Append(checksum, bytes);
                length = unchecked(length + (uint)bytes.Length);
            }

            Both(header);
            ForEachStretch(values, Both);
        }

        Span<byte> end = stackalloc byte[8];
        BinaryPrimitives.WriteUInt32LittleEndian(end, checksum);
        BinaryPrimitives.WriteUInt32LittleEndian(end[4..], length);
        file.Write(end);
    }

    /// <summary>Hands the values on as little-endian bytes.</summary>
    private static void ForEachStretch<T>(ReadOnlySpan<T> values, Sink sink)
        where T : unmanaged
    {
        int size = Marshal.SizeOf<T>(), count = Stretch / size;
        for (int start = 0; start < values.Length; start += count)
        {
            ReadOnlySpan<byte> bytes = MemoryMarshal.AsBytes(values.Slice(start, Math.Min(count, values.Length - start)));
            if (!BitConverter.IsLittleEndian && size > 1)
            {
                byte[] swapped = bytes.ToArray();
                for (int n = 0; n < swapped.Length; n += size)
                {
                    swapped.AsSpan(n, size).Reverse();
                }

                bytes = swapped;
            }

            sink(bytes);
        }
    }

    private static byte[] Header<T>(VoxelGrid grid, int values, NiftiIntent intent, string intentName, string description)
    {
        if (values != grid.Count)
        {
            throw new ArgumentException($"{values} values for {grid.Count} voxels.", nameof(values));
        }

        if (grid.Nx > short.MaxValue || grid.Ny > short.MaxValue || grid.Nz > short.MaxValue)
        {
            throw new ArgumentException($"{grid.Nx} x {grid.Ny} x {grid.Nz} voxels are more than NIfTI-1 can count along an axis.", nameof(grid));
        }

        (NiftiDataType type, short bits) = default(T) switch
        {
            byte => (NiftiDataType.UInt8, (short)8),
            short => (NiftiDataType.Int16, (short)16),
            float => (NiftiDataType.Float32, (short)32),
            _ => throw new ArgumentException($"Values of {typeof(T).Name} are not written; byte, short or float are.", nameof(values)),
        };
        byte[] h = new byte[DataOffset];
        Int(h, 0, HeaderSize);
        short[] dims = [3, (short)grid.Nx, (short)grid.Ny, (short)grid.Nz, 1, 1, 1, 1];
        for (int k = 0; k < dims.Length; k++)
        {
            Short(h, 40 + 2 * k, dims[k]);
        }

        Short(h, 68, (short)intent);
        Short(h, 70, (short)type);
        Short(h, 72, bits);
        Affine map = grid.ToWorld.ThenScale(1000);
        for (int axis = 0; axis < 3; axis++)
        {
            Real(h, 80 + 4 * axis, map.Column(axis).Norm);
        }

        Real(h, 108, DataOffset);
        Real(h, 112, 1);
        h[123] = 2;
        Text(h, 148, description, DescriptionSize);
        Text(h, 328, intentName, NameSize);
        WritePlacement(h, map, grid);
        "n+1\0"u8.CopyTo(h.AsSpan(344));
        return h;
    }

    private static void WritePlacement(byte[] h, Affine map, VoxelGrid grid)
    {
        Vec3 x = map.Column(0).Unit(), y = map.Column(1).Unit(), z = map.Column(2).Unit();
        double handedness = map.Determinant < 0 ? -1 : 1;
        Real(h, 76, handedness);
        if (Math.Abs(Vec3.Dot(x, y)) < Oblique && Math.Abs(Vec3.Dot(y, z)) < Oblique && Math.Abs(Vec3.Dot(z, x)) < Oblique)
        {
            (double b, double c, double d) = Quaternion(x, y, handedness * z);
            double[] q = [b, c, d, map.Offset.X, map.Offset.Y, map.Offset.Z];
            Vec3 spacing = new(map.Column(0).Norm, map.Column(1).Norm, map.Column(2).Norm);
            Affine asRead = Affine.FromQuaternion((float)b, (float)c, (float)d, map.Offset, spacing, handedness);
            Short(h, 252, Distance(asRead, map, grid) <= QformTolerance ? Aligned : (short)0);
            for (int k = 0; k < q.Length; k++)
            {
                Real(h, 256 + 4 * k, q[k]);
            }
        }

        Short(h, 254, Aligned);
        Vec3[] rows = [map.Row0, map.Row1, map.Row2];
        for (int row = 0; row < 3; row++)
        {
            for (int axis = 0; axis < 3; axis++)
            {
                Real(h, 280 + 16 * row + 4 * axis, rows[row][axis]);
            }

            Real(h, 292 + 16 * row, map.Offset[row]);
        }
    }

    /// <summary>Largest distance between the images of the volume's corners.</summary>
    private static double Distance(Affine a, Affine b, VoxelGrid grid)
    {
        double worst = 0;
        for (int corner = 0; corner < 8; corner++)
        {
            Vec3 v = new((corner & 1) * (grid.Nx - 1.0), (corner >> 1 & 1) * (grid.Ny - 1.0), (corner >> 2) * (grid.Nz - 1.0));
            worst = Math.Max(worst, (a.Apply(v) - b.Apply(v)).Norm);
        }

        return worst;
    }

    /// <summary>b, c, d of the rotation with these columns; a is not negative.</summary>
    /// <remarks>The largest of the four squares is taken first, so that no small number is divided by.</remarks>
    private static (double B, double C, double D) Quaternion(Vec3 x, Vec3 y, Vec3 z)
    {
        double aa = 1 + x.X + y.Y + z.Z, bb = 1 + x.X - y.Y - z.Z, cc = 1 - x.X + y.Y - z.Z, dd = 1 - x.X - y.Y + z.Z;
        double largest = Math.Max(Math.Max(aa, bb), Math.Max(cc, dd));
        double twice = Math.Sqrt(largest), a, b, c, d;
        if (largest == aa)
        {
            (a, b, c, d) = (twice / 2, (y.Z - z.Y) / (2 * twice), (z.X - x.Z) / (2 * twice), (x.Y - y.X) / (2 * twice));
        }
        else if (largest == bb)
        {
            (a, b, c, d) = ((y.Z - z.Y) / (2 * twice), twice / 2, (x.Y + y.X) / (2 * twice), (z.X + x.Z) / (2 * twice));
        }
        else if (largest == cc)
        {
            (a, b, c, d) = ((z.X - x.Z) / (2 * twice), (x.Y + y.X) / (2 * twice), twice / 2, (y.Z + z.Y) / (2 * twice));
        }
        else
        {
            (a, b, c, d) = ((x.Y - y.X) / (2 * twice), (z.X + x.Z) / (2 * twice), (y.Z + z.Y) / (2 * twice), twice / 2);
        }

        return a < 0 ? (-b, -c, -d) : (b, c, d);
    }

    private static void Text(byte[] h, int at, string text, int most)
    {
        if (text.Length > most || !Ascii.IsValid(text))
        {
            throw new ArgumentException($"At most {most} ASCII characters fit, not '{text}'.", nameof(text));
        }

        Encoding.ASCII.GetBytes(text, h.AsSpan(at));
    }

    private static void Short(byte[] h, int at, short v) => BinaryPrimitives.WriteInt16LittleEndian(h.AsSpan(at), v);

    private static void Int(byte[] h, int at, int v) => BinaryPrimitives.WriteInt32LittleEndian(h.AsSpan(at), v);

    private static void Real(byte[] h, int at, double v) => BinaryPrimitives.WriteSingleLittleEndian(h.AsSpan(at), (float)v);
}
