using System.Numerics;
using System.Runtime.InteropServices;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>Reads NIfTI-1 and NIfTI-2 volumes: .nii, .hdr with .img, plain or gzip, either byte order, every integer and real type.</summary>
/// <remarks>
/// Source: the NIfTI-1 and NIfTI-2 standards. The sform places the volume if its code is above 0, else the qform if its code is above 0.
/// Sizes are held against the file before anything is allocated, and a gzip stream is never unpacked far beyond what the header announces.
/// </remarks>
public static class NiftiReader
{
    /// <summary>Bytes after the data that are still read to reach a gzip checksum.</summary>
    private const long Slack = 1 << 16;

    /// <summary>Bytes that are allocated at once; larger volumes grow as their data arrive.</summary>
    private const int FirstAllocation = 1 << 26;

    /// <summary>Whole numbers above 2^53 are not all told apart by double precision.</summary>
    private const double LargestExact = 9007199254740992.0;

    /// <summary>Reads the header alone.</summary>
    /// <param name="path">The file; of a pair, either.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <exception cref="InputException">The file cannot be read, is malformed or of a kind that is not supported; names file, field and reason.</exception>
    public static NiftiHeader ReadHeader(string path, string displayName)
    {
        NamedFile file = NiftiFileNames.Header(path, displayName);
        using ByteSource source = new(file.Path, file.Display);
        NiftiHeader header = NiftiHeaderParser.Parse(source, file.Display);
        if (header.IsPair)
        {
            NamedFile data = NiftiFileNames.Data(file);
            using ByteSource image = new(data.Path, data.Display);
            CheckRoom(image, header, data.Display);
        }

        return header;
    }

    /// <summary>Reads header and values.</summary>
    /// <inheritdoc cref="ReadHeader"/>
    public static NiftiVolume Read(string path, string displayName)
    {
        NamedFile file = NiftiFileNames.Header(path, displayName);
        using ByteSource source = new(file.Path, file.Display);
        NiftiHeader header = NiftiHeaderParser.Parse(source, file.Display);
        List<string> warnings = [.. header.Warnings];
        VoxelValues values;
        if (header.IsPair)
        {
            NamedFile data = NiftiFileNames.Data(file);
            using ByteSource image = new(data.Path, data.Display);
            CheckRoom(image, header, data.Display);
            values = ReadValues(image, header, data.Display, warnings);
        }
        else
        {
            values = ReadValues(source, header, file.Display, warnings);
        }

        ValueVolume volume = new(displayName, header.Grid, values);
        WarnOfValues(volume, warnings);
        return new(header, volume, warnings);
    }

    /// <summary>Reads a volume of symmetric 3 x 3 matrices, one entry of the lower triangle after the other: xx, xy, yy, xz, yz, zz.</summary>
    /// <param name="path">The file; of a pair, either.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="accept">Judges the header before any value is read.</param>
    /// <param name="take">Takes an entry's number, 0 to 5, and its values, first axis fastest; they are not kept here.</param>
    /// <returns>What the user must know.</returns>
    /// <exception cref="InputException">As <see cref="Read"/>, or the file holds no symmetric matrices.</exception>
    public static IReadOnlyList<string> ReadTensors(string path, string displayName, Action<NiftiHeader> accept, Action<int, VoxelValues> take)
    {
        NamedFile file = NiftiFileNames.Header(path, displayName);
        using ByteSource source = new(file.Path, file.Display);
        NiftiHeader header = NiftiHeaderParser.Parse(source, file.Display, tensors: true);
        List<string> warnings = [.. header.Warnings];
        accept(header);
        if (header.IsPair)
        {
            NamedFile data = NiftiFileNames.Data(file);
            using ByteSource image = new(data.Path, data.Display);
            CheckRoom(image, header, data.Display);
            ReadComponents(image, header, data.Display, take, warnings);
        }
        else
        {
            ReadComponents(source, header, file.Display, take, warnings);
        }

        return warnings;
    }

    private static void ReadComponents(ByteSource source, NiftiHeader header, string displayName, Action<int, VoxelValues> take, List<string> warnings)
    {
        SkipToData(source, header, displayName);
        for (int component = 0; component < header.Components; component++)
        {
            take(component, ReadVolume(source, header, component, displayName));
        }

        Finish(source, displayName, warnings);
    }

    private static void CheckRoom(ByteSource image, NiftiHeader header, string displayName) => NiftiHeaderParser.CheckRoom(
        image, header.DataOffset, (double)header.Grid.Count * header.Components, [header.Grid.Nx, header.Grid.Ny, header.Grid.Nz], header.DataType, displayName);

    private static VoxelValues ReadValues(ByteSource source, NiftiHeader header, string displayName, List<string> warnings)
    {
        SkipToData(source, header, displayName);
        VoxelValues values = ReadVolume(source, header, 0, displayName);
        Finish(source, displayName, warnings);
        return values;
    }

    private static void SkipToData(ByteSource source, NiftiHeader header, string displayName)
    {
        long skipped = source.Skip(header.DataOffset - source.Consumed);
        if (source.Consumed < header.DataOffset)
        {
            throw new InputException(displayName, "vox_offset",
                $"the data should begin at byte {header.DataOffset:N0}, but the file unpacks to {source.Consumed:N0} bytes ({skipped:N0} after the header): it is cut short or the header is damaged");
        }
    }

    private static VoxelValues ReadVolume(ByteSource source, NiftiHeader header, int component, string displayName) => header.DataType switch
    {
        NiftiDataType.UInt8 => ReadAs<byte>(source, header, component, displayName),
        NiftiDataType.Int8 => ReadAs<sbyte>(source, header, component, displayName),
        NiftiDataType.Int16 => ReadAs<short>(source, header, component, displayName),
        NiftiDataType.UInt16 => ReadAs<ushort>(source, header, component, displayName),
        NiftiDataType.Int32 => ReadAs<int>(source, header, component, displayName),
        NiftiDataType.UInt32 => ReadAs<uint>(source, header, component, displayName),
        NiftiDataType.Int64 => ReadAs<long>(source, header, component, displayName),
        NiftiDataType.UInt64 => ReadAs<ulong>(source, header, component, displayName),
        NiftiDataType.Float32 => ReadAs<float>(source, header, component, displayName),
        _ => ReadAs<double>(source, header, component, displayName),
    };

    private static void Finish(ByteSource source, string displayName, List<string> warnings)
    {
        switch (source.Finish(Slack))
        {
            case null:
                warnings.Add($"{displayName} goes on for more than {Slack:N0} bytes beyond the data that its header announces; the rest was not read and its checksum not verified");
                break;
            case > 0:
                warnings.Add($"{displayName} holds bytes beyond the data that its header announces; they are ignored");
                break;
            default:
                break;
        }
    }

    private static VoxelValues ReadAs<T>(ByteSource source, NiftiHeader header, int component, string displayName)
        where T : unmanaged, INumberBase<T>
    {
        int count = header.Grid.Count, size = header.DataType.Size();
        T[] stored = new T[Math.Min(count, FirstAllocation / size)];
        long have = 0, wanted = (long)count * size;
        while (true)
        {
            // Array.MaxLength holds for elements, so spans of bytes are taken in pieces below 2^31.
            int from = (int)(have / size);
            int piece = Math.Min(stored.Length - from, FirstAllocation / size);
            int read = source.Fill(MemoryMarshal.AsBytes(stored.AsSpan(from, piece)));
            have += read;
            if (read < piece * size)
            {
                throw new InputException(displayName, null,
                    $"the file ends after {component * wanted + have:N0} of {header.DataBytes:N0} bytes of data ({header.Grid.Nx} x {header.Grid.Ny} x {header.Grid.Nz} voxels of {header.DataType.ToString().ToLowerInvariant()}): it is cut short or the header is damaged; copy or export it again");
            }

            if (have == wanted)
            {
                break;
            }

            if (from + piece == stored.Length)
            {
                Array.Resize(ref stored, (int)Math.Min(count, 2L * stored.Length));
            }
        }

        if (header.BigEndian == BitConverter.IsLittleEndian)
        {
            SwapBytes(stored, size);
        }

        return VoxelValues.Of(stored, header.Slope, header.Intercept);
    }

    private static void SwapBytes<T>(T[] stored, int size)
        where T : unmanaged
    {
        if (size > 1)
        {
            for (int n = 0; n < stored.Length; n++)
            {
                MemoryMarshal.AsBytes(stored.AsSpan(n, 1)).Reverse();
            }
        }
    }

    private static void WarnOfValues(ValueVolume volume, List<string> warnings)
    {
        if (volume.NotANumber + volume.Infinite > 0)
        {
            int listed = volume.NonFiniteVoxels.Count, more = volume.NotANumber + volume.Infinite - listed;
            string places = string.Join(", ", volume.NonFiniteVoxels.Select(v => $"({v.I}, {v.J}, {v.K})"));
            warnings.Add($"{volume.Name} holds {volume.NotANumber:N0} NaN and {volume.Infinite:N0} infinite values, at voxels {places}{(more > 0 ? $" and {more:N0} more" : "")}; they belong to no region");
        }

        if (Math.Max(Math.Abs(volume.Smallest), Math.Abs(volume.Largest)) > LargestExact && volume.IsWhole)
        {
            warnings.Add(Invariant($"{volume.Name} holds whole numbers beyond 2^53 (up to {volume.Largest:G17}), which are not all told apart"));
        }
    }
}
