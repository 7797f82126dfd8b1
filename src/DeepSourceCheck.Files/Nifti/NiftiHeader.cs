using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>Where a volume's place in space comes from.</summary>
public enum NiftiOrientation
{
    /// <summary>The affine map of the header's sform.</summary>
    Sform,

    /// <summary>The quaternion of the header's qform.</summary>
    Qform,

    /// <summary>Neither: only the voxel sizes are known, and voxel (0, 0, 0) was put at the origin. Good for counting, not for placing a region.</summary>
    VoxelSizesOnly,
}

/// <summary>What a NIfTI header says, checked.</summary>
public sealed record NiftiHeader
{
    /// <summary>1 or 2.</summary>
    public required int Version { get; init; }

    /// <summary>True when header and data are big-endian.</summary>
    public required bool BigEndian { get; init; }

    /// <summary>True when the data are in a file of their own (.hdr and .img).</summary>
    public required bool IsPair { get; init; }

    /// <summary>Where the voxels lie, in metres.</summary>
    public required VoxelGrid Grid { get; init; }

    /// <summary>Where the place in space comes from.</summary>
    public required NiftiOrientation Orientation { get; init; }

    /// <summary>Values of each voxel: 1, or 6 for symmetric 3 x 3 matrices, one volume after the other.</summary>
    public int Components { get; init; } = 1;

    /// <summary>Type of the stored values.</summary>
    public required NiftiDataType DataType { get; init; }

    /// <summary>Byte at which the data begin in their file.</summary>
    public required long DataOffset { get; init; }

    /// <summary>Values are slope times stored value plus intercept.</summary>
    public required double Slope { get; init; }

    /// <summary>See <see cref="Slope"/>.</summary>
    public required double Intercept { get; init; }

    /// <summary>What the user must know.</summary>
    public required IReadOnlyList<string> Warnings { get; init; }

    /// <summary>Bytes of the data.</summary>
    public long DataBytes => (long)Grid.Count * Components * DataType.Size();

    /// <summary>True when the orientation suffices to place a region.</summary>
    public bool IsPlaced => Orientation != NiftiOrientation.VoxelSizesOnly;
}

/// <summary>A NIfTI volume as read.</summary>
/// <param name="Header">Header.</param>
/// <param name="Volume">Values in space.</param>
/// <param name="Warnings">Those of the header and of the data.</param>
public sealed record NiftiVolume(NiftiHeader Header, ValueVolume Volume, IReadOnlyList<string> Warnings);
