using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>Judges the fields of a header one by one; each fault has its own message.</summary>
internal static class NiftiHeaderParser
{
    /// <summary>Header extensions longer than this [bytes] are taken for a damaged offset.</summary>
    private const double LargestOffset = 1 << 26;

    /// <summary>Intent code of symmetric matrices.</summary>
    private const int SymmetricMatrix = 1005;

    /// <summary>Entries of the lower triangle of a 3 x 3 matrix.</summary>
    private const int MatrixEntries = 6;

    /// <summary>Reads and judges the header at the start of a source.</summary>
    /// <param name="source">The header's file, at its start.</param>
    /// <param name="displayName">The header's file as the user named it.</param>
    /// <param name="tensors">True: a volume of symmetric 3 x 3 matrices is wanted; false: one value a voxel.</param>
    /// <exception cref="InputException">Malformed or not supported; names the field.</exception>
    public static NiftiHeader Parse(ByteSource source, string displayName, bool tensors = false)
    {
        NiftiFields fields = NiftiFields.Read(source, displayName);
        List<string> warnings = [];
        int components = tensors ? MatrixEntries : 1;
        if (tensors)
        {
            CheckTensors(fields, displayName);
        }

        int[] dims = Dims(fields, components, displayName);
        NiftiDataType type = DataType(fields, displayName, warnings);
        long offset = DataOffset(fields, displayName, warnings);
        double voxels = (double)dims[0] * dims[1] * dims[2];
        if (!fields.IsPair)
        {
            CheckRoom(source, offset, voxels * components, dims, type, displayName);
        }

        if (voxels > Array.MaxLength)
        {
            throw new InputException(displayName, "dim", Invariant($"{dims[0]} x {dims[1]} x {dims[2]} voxels are more than the {Array.MaxLength:N0} that are read"));
        }

        (double slope, double intercept) = Scaling(fields, displayName, warnings);
        (Affine toWorld, NiftiOrientation orientation) = NiftiPlacement.Find(fields, dims, displayName, warnings);
        return new()
        {
            Version = fields.Version,
            BigEndian = fields.BigEndian,
            IsPair = fields.IsPair,
            Grid = new(dims[0], dims[1], dims[2], toWorld),
            Orientation = orientation,
            Components = components,
            DataType = type,
            DataOffset = offset,
            Slope = slope,
            Intercept = intercept,
            Warnings = warnings,
        };
    }

    /// <summary>Refuses data that cannot be in the file, before anything is allocated.</summary>
    /// <exception cref="InputException">The data end beyond the file's end or what it can unpack to.</exception>
    public static void CheckRoom(ByteSource source, double offset, double values, int[] dims, NiftiDataType type, string displayName)
    {
        double needed = values * type.Size();
        if (!source.IsGzip && offset >= source.FileLength)
        {
            throw new InputException(displayName, "vox_offset", Invariant($"the data should begin at byte {offset:N0}, but the file has {source.FileLength:N0} bytes: it is cut short or the header is damaged"));
        }

        if (offset + needed > source.MostBytes)
        {
            string room = source.IsGzip
                ? Invariant($"a gzip file of {source.FileLength:N0} bytes cannot hold that much")
                : Invariant($"the file has {Math.Max(0, source.FileLength - offset):N0} bytes of data");
            throw new InputException(displayName, "dim",
                Invariant($"{dims[0]} x {dims[1]} x {dims[2]} voxels of {type.ToString().ToLowerInvariant()} need {needed:N0} bytes of data, but {room}: it is cut short or the header is damaged"));
        }
    }

    /// <summary>A tensor file is a volume in five dimensions whose fifth holds the lower triangle, marked by its intent code.</summary>
    private static void CheckTensors(NiftiFields fields, string displayName)
    {
        const string Wanted = "tensors are a volume of five dimensions, nx x ny x nz x 1 x 6, with intent code 1005 (symmetric matrix: xx, xy, yy, xz, yz, zz)";
        if (fields.IntentCode != SymmetricMatrix)
        {
            throw new InputException(displayName, "intent_code", $"the intent code is {fields.IntentCode}: {Wanted}");
        }

        if (fields.Dim[0] != 5 || fields.Dim[4] != 1 || fields.Dim[5] != MatrixEntries)
        {
            string sizes = string.Join(" x ", fields.Dim.Skip(1).Take((int)Math.Clamp(fields.Dim[0], 0, 7)));
            throw new InputException(displayName, "dim", $"the file has {fields.Dim[0]} dimensions ({sizes}): {Wanted}");
        }
    }

    private static int[] Dims(NiftiFields fields, int components, string displayName)
    {
        long count = fields.Dim[0];
        if (count is < 1 or > 7)
        {
            throw new InputException(displayName, "dim[0]", $"the number of dimensions is {count}; 1 to 7 are possible: the header is damaged");
        }

        int[] dims = [1, 1, 1];
        for (int k = 1; k <= count; k++)
        {
            long size = fields.Dim[k];
            if (size < 1)
            {
                throw new InputException(displayName, $"dim[{k}]", $"the size is {size}; at least 1 is needed: the header is damaged");
            }

            if (k > 3 && size > (k == 5 ? components : 1))
            {
                throw new InputException(displayName, $"dim[{k}]", k == 4
                    ? $"the file holds {size} volumes; one is needed: extract it and name that file"
                    : $"the file holds {size} values a voxel; one is needed");
            }

            if (size > int.MaxValue)
            {
                throw new InputException(displayName, $"dim[{k}]", Invariant($"{size:N0} voxels along one axis are not supported: the header is damaged"));
            }

            if (k <= 3)
            {
                dims[k - 1] = (int)size;
            }
        }

        return dims;
    }

    private static NiftiDataType DataType(NiftiFields fields, string displayName, List<string> warnings)
    {
        NiftiDataType type = (NiftiDataType)fields.DataType;
        if (!Enum.IsDefined(type))
        {
            string? name = NiftiDataTypes.UnsupportedName(fields.DataType);
            throw new InputException(displayName, "datatype", name is null
                ? $"{fields.DataType} is no data type of the standard: the header is damaged"
                : $"values of type {name} are valid NIfTI but not supported here; convert the file to an integer type, float32 or float64");
        }

        if (fields.Bitpix != 8 * type.Size())
        {
            warnings.Add($"{displayName}: bitpix is {fields.Bitpix} but the data type {type.ToString().ToLowerInvariant()} has {8 * type.Size()} bits; the data type is used");
        }

        return type;
    }

    private static long DataOffset(NiftiFields fields, string displayName, List<string> warnings)
    {
        double offset = fields.VoxOffset;
        if (!(offset >= 0 && offset <= LargestOffset) || offset != Math.Floor(offset))
        {
            throw new InputException(displayName, "vox_offset", Invariant($"the data cannot begin at byte {offset:G9}; a whole number from 0 to {LargestOffset:N0} is expected: the header is damaged"));
        }

        if (fields.IsPair || offset >= fields.SmallestOffset)
        {
            return (long)offset;
        }

        if (offset != 0)
        {
            throw new InputException(displayName, "vox_offset", Invariant($"the data cannot begin at byte {offset}, inside the header; {fields.SmallestOffset} is the smallest: the header is damaged"));
        }

        warnings.Add($"{displayName}: vox_offset is 0; the data are taken to begin right after the header, at byte {fields.SmallestOffset}");
        return fields.SmallestOffset;
    }

    private static (double Slope, double Intercept) Scaling(NiftiFields fields, string displayName, List<string> warnings)
    {
        if (fields.Slope == 0)
        {
            return (1, 0);
        }

        if (double.IsNaN(fields.Slope))
        {
            warnings.Add($"{displayName}: scl_slope is NaN; the values are taken unscaled");
            return (1, 0);
        }

        return double.IsFinite(fields.Slope) && double.IsFinite(fields.Intercept)
            ? (fields.Slope, fields.Intercept)
            : throw new InputException(displayName, "scl_slope", Invariant($"the scaling (scl_slope {fields.Slope:G6}, scl_inter {fields.Intercept:G6}) is not finite: the header is damaged"));
    }
}
