using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Regions;

/// <summary>The cortex of a head of voxels: every n-th grey voxel of the outermost 6 mm below the inner skull, the depth at which the spheres have theirs.</summary>
/// <remarks>Where grey matter has no label of its own, `brain` counts as grey: the limit of depth is what keeps deep nuclei and white matter out. Without bone every grey voxel counts.</remarks>
public static class CortexVoxels
{
    /// <summary>Largest depth below the inner skull [m].</summary>
    public const double Deepest = LayeredSphere.CortexDepth;

    /// <summary>Number of dipoles: each stands for a volume of the spacing cubed, and no voxel holds two.</summary>
    /// <param name="head">Head.</param>
    /// <param name="spacing">Spacing [m]; positive.</param>
    public static long Count(VoxelHead head, double spacing)
    {
        long voxels = head.GreyVoxels(Deepest);
        double wanted = Math.Round(voxels * head.Volume.Grid.VoxelVolume / (spacing * spacing * spacing));
        return (long)Math.Min(wanted, voxels);
    }

    /// <summary>The dipoles, at the centres of their voxels.</summary>
    /// <param name="head">Head.</param>
    /// <param name="spacing">Spacing [m]; positive.</param>
    /// <param name="name">Name of the region.</param>
    /// <exception cref="InputException">No grey voxel lies so near to the skull, the spacing is too wide, or it makes too many dipoles.</exception>
    public static FilledRegion Fill(VoxelHead head, double spacing = CortexShell.DefaultSpacing, string name = "cortex")
    {
        long voxels = head.GreyVoxels(Deepest), count = spacing > 0 ? Count(head, spacing) : 0;
        if (count is < 1 or > GridSpacing.MostDipoles)
        {
            throw new InputException(null, null, string.Create(
                CultureInfo.InvariantCulture,
                $"region '{name}' would hold {count:N0} dipoles at a spacing of {Si.ToMm(spacing):0.####} mm: {voxels:N0} grey voxels lie within {Si.ToMm(Deepest):0.#} mm of the inner skull; "
                + $"1 to {GridSpacing.MostDipoles:N0} are allowed"));
        }

        Vec3[] places = [.. head.GreyPlaces(count, Deepest)];
        FilledRegion all = new()
        {
            Name = name,
            Positions = places,
            Rows = [],
            Spacing = spacing,
            ShapeVolume = voxels * head.Volume.Grid.VoxelVolume,
            Origin = "library",
        };
        return RegionFill.Admit(all, head, null, null, RegionFill.WarnDroppedShare);
    }
}
