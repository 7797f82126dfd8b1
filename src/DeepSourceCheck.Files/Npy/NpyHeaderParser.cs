using System.Buffers.Binary;
using System.Text;

using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Npy;

/// <summary>Reads the header of a .npy file: a dictionary with exactly descr, fortran_order and shape, never evaluated as code.</summary>
/// <remarks>Source: the .npy format description of the NumPy documentation, versions 1.0, 2.0 and 3.0.</remarks>
internal static class NpyHeaderParser
{
    private const int LargestHeader = 1 << 16;
    private const int MostAxes = 32;

    /// <summary>Reads the header at the start of a stream of known length.</summary>
    /// <exception cref="InputException">Malformed, of a type that is not supported, or in disagreement with the file's length.</exception>
    public static NpyHeader Parse(Stream file, string displayName)
    {
        Span<byte> start = stackalloc byte[12];
        int have = file.ReadAtLeast(start, 10, throwOnEndOfStream: false);
        Demand(have >= 10 && start[0] == 0x93 && start[1..6].SequenceEqual("NUMPY"u8), displayName, null,
            "this is no .npy file: it does not begin with the bytes 93 4e 55 4d 50 59");
        int version = start[6];
        Demand(version is >= 1 and <= 3 && start[7] == 0, displayName, "version", $"version {version}.{start[7]} of the format is not known; 1.0 to 3.0 are read");
        int prefix = version == 1 ? 10 : 12;
        Demand(have >= prefix || file.ReadAtLeast(start[have..prefix], prefix - have, throwOnEndOfStream: false) >= prefix - have, displayName, "header", "the file ends inside its header");
        uint length = version == 1 ? BinaryPrimitives.ReadUInt16LittleEndian(start[8..]) : BinaryPrimitives.ReadUInt32LittleEndian(start[8..]);
        Demand(prefix + length <= file.Length && length <= LargestHeader, displayName, "header", $"the header is said to have {length:N0} bytes, more than the file holds or the {LargestHeader:N0} that are read");
        byte[] text = new byte[length];
        file.Seek(prefix, SeekOrigin.Begin);
        file.ReadExactly(text);
        NpyDictionary dictionary = new(Encoding.Latin1.GetString(text), displayName);
        dictionary.Read();
        return Judge(dictionary, file.Length, prefix + length, displayName);
    }

    private static NpyHeader Judge(NpyDictionary dictionary, long fileLength, long offset, string displayName)
    {
        string descr = dictionary.Descr;
        (bool bigEndian, int size) = descr switch
        {
            "<f8" or "=f8" => (false, 8),
            "<f4" or "=f4" => (false, 4),
            ">f8" => (true, 8),
            ">f4" => (true, 4),
            _ => throw new InputException(displayName, "descr",
                $"numbers of type {Shown.Quoted(descr)} are not read; save the array as float32 or float64 (<f4, <f8, >f4, >f8), for instance with astype('float64')"),
        };
        List<int> shape = [];
        double count = 1;
        Demand(dictionary.Shape.Count <= MostAxes, displayName, "shape", $"{dictionary.Shape.Count} axes are more than the {MostAxes} that the format allows");
        foreach (decimal axis in dictionary.Shape)
        {
            Demand(axis is >= 0 and <= int.MaxValue, displayName, "shape", Invariant($"an axis of size {axis} is not possible; 0 to {int.MaxValue} are"));
            shape.Add((int)axis);
            count *= (double)axis;
        }

        string shapeText = string.Join(" x ", shape);
        double needed = count * size, there = fileLength - offset;
        Demand(count <= Array.MaxLength, displayName, "shape", $"{shapeText} numbers are more than the {Array.MaxLength:N0} that are read");
        Demand(needed <= there, displayName, "shape", Invariant($"{shapeText} numbers of {size} bytes need {needed:N0} bytes, but {there:N0} follow the header: the file is cut short or its header is damaged"));
        Demand(needed == there, displayName, "shape", Invariant($"{there - needed:N0} bytes follow the {shapeText} numbers that the header announces: save one array a file"));
        return new()
        {
            Shape = shape,
            FortranOrder = dictionary.FortranOrder,
            BigEndian = bigEndian,
            ItemSize = size,
            DataOffset = offset,
            Count = (int)count,
        };
    }

    private static void Demand(bool condition, string displayName, string? field, string message)
    {
        if (!condition)
        {
            throw new InputException(displayName, field, message);
        }
    }
}
