using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Nifti;

/// <summary>A mask region or a listing from a NIfTI volume, with everything the user must be told.</summary>
public static class MaskFile
{
    /// <summary>Chooses a region's voxels from a volume that was read: see <see cref="VoxelMask.Of"/>.</summary>
    /// <exception cref="InputException">The volume states no orientation, or the choice is empty or out of range.</exception>
    public static (VoxelMask Mask, IReadOnlyList<string> Warnings) Select(NiftiVolume volume, double? label, double? threshold)
    {
        if (!volume.Header.IsPlaced)
        {
            throw new InputException(volume.Volume.Name, "sform_code",
                "the file states no orientation (sform_code and qform_code are 0), so nobody knows where the region lies in the head; give the file an sform or a qform");
        }

        VoxelMask mask = VoxelMask.Of(volume.Volume, label, threshold);
        return (mask, [.. volume.Warnings, .. mask.Warnings]);
    }

    /// <summary>Reads a volume and chooses a region's voxels.</summary>
    /// <inheritdoc cref="Select"/>
    public static (VoxelMask Mask, IReadOnlyList<string> Warnings) Read(string path, string displayName, double? label, double? threshold) =>
        Select(NiftiReader.Read(path, displayName), label, threshold);

    /// <summary>Reads a volume and lists its labels.</summary>
    /// <exception cref="InputException">The file cannot be read, or holds too many values for a label volume.</exception>
    public static (IReadOnlyList<LabelEntry> Labels, IReadOnlyList<string> Warnings) List(string path, string displayName)
    {
        NiftiVolume volume = NiftiReader.Read(path, displayName);
        LabelListing listing = LabelListing.Of(volume.Volume);
        return (listing.Entries, [.. volume.Warnings, .. listing.Warnings]);
    }
}
