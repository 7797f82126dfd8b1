using System.Diagnostics.CodeAnalysis;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>Data types of the NIfTI standard, by their codes in the header.</summary>
[SuppressMessage("Naming", "CA1720", Justification = "The standard names its types so.")]
public enum NiftiDataType
{
    UInt8 = 2,
    Int16 = 4,
    Int32 = 8,
    Float32 = 16,
    Float64 = 64,
    Int8 = 256,
    UInt16 = 512,
    UInt32 = 768,
    Int64 = 1024,
    UInt64 = 1280,
}

/// <summary>Sizes and names of data types.</summary>
internal static class NiftiDataTypes
{
    /// <summary>Bytes of one value.</summary>
    public static int Size(this NiftiDataType type) => type switch
    {
        NiftiDataType.UInt8 or NiftiDataType.Int8 => 1,
        NiftiDataType.Int16 or NiftiDataType.UInt16 => 2,
        NiftiDataType.Int32 or NiftiDataType.UInt32 or NiftiDataType.Float32 => 4,
        _ => 8,
    };

    /// <summary>Name of a code that the standard defines and that is not read here, or null for codes it does not define.</summary>
    public static string? UnsupportedName(int code) => code switch
    {
        1 => "binary (1 bit)",
        32 => "complex64",
        128 => "RGB24 (colour)",
        1536 => "float128",
        1792 => "complex128",
        2048 => "complex256",
        2304 => "RGBA32 (colour)",
        _ => null,
    };
}
