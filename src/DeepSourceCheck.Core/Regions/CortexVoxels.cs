using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Regions;

/// <summary>The cortex of a head of voxels: every n-th grey voxel down to 30 mm below the inner skull, which the floors of sulci reach, with the way the cortex faces there.</summary>
/// <remarks>
/// Deeper grey matter is nuclei; grey matter of the cerebellum near the skull belongs to it, a label volume does not tell them apart. Where grey matter has no label of its own, `brain` counts as
/// grey and only its outermost 6 mm are taken, the depth at which the spheres have theirs: that keeps white matter and nuclei out, and no place knows which way its cortex faces. Without bone every
/// grey voxel counts.
/// </remarks>
public static class CortexVoxels
{
    /// <summary>Largest depth below the inner skull [m] where grey matter has a label of its own.</summary>
    public const double DeepestGrey = 0.030;

    /// <summary>Largest depth below the inner skull [m] where it has none.</summary>
    public const double DeepestBrain = LayeredSphere.CortexDepth;

    /// <summary>Largest depth below the inner skull [m] in a head.</summary>
    /// <param name="head">Head.</param>
    public static double Deepest(VoxelHead head) => head.KnowsCortex ? DeepestGrey : DeepestBrain;

    /// <summary>Number of dipoles: each stands for a volume of the spacing cubed, and no voxel holds two.</summary>
    /// <param name="head">Head.</param>
    /// <param name="spacing">Spacing [m]; positive.</param>
    public static long Count(VoxelHead head, double spacing)
    {
        long voxels = head.GreyVoxels(Deepest(head));
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
        double deepest = Deepest(head);
        long voxels = head.GreyVoxels(deepest), count = spacing > 0 ? Count(head, spacing) : 0;
        if (count is < 1 or > GridSpacing.MostDipoles)
        {
            throw new InputException(null, null, string.Create(
                CultureInfo.InvariantCulture,
                $"region '{name}' would hold {count:N0} dipoles at a spacing of {Si.ToMm(spacing):0.####} mm: {voxels:N0} grey voxels lie within {Si.ToMm(deepest):0.#} mm of the inner skull; "
                + $"1 to {GridSpacing.MostDipoles:N0} are allowed"));
        }

        Vec3[] places = [.. head.GreyPlaces(count, deepest)];
        FilledRegion all = new()
        {
            Name = name,
            Positions = places,
            Rows = [],
            CorticalPlaces = head.KnowsCortex ? Array.ConvertAll(places, p => CorticalPlaceAt(head, p)) : [],
            Spacing = spacing,
            ShapeVolume = voxels * head.Volume.Grid.VoxelVolume,
            Origin = "library",
        };
        FilledRegion filled = RegionFill.Admit(all, head, null, null, RegionFill.WarnDroppedShare);
        return filled.WithWarning(string.Create(CultureInfo.InvariantCulture,
            $"{name}: all grey matter within {Si.ToMm(deepest):0} mm of the inner skull counts, that of the cerebellum and of whatever else is grey near bone too: labels of tissues do not tell them apart; for the cerebrum alone give a mask"));
    }

    private static CorticalPlace? CorticalPlaceAt(VoxelHead head, Vec3 point)
    {
        if (head.DepthBelowInnerSkull(point) is not { } depth || head.InnerSkullNormal(point) is not { } wall || head.CorticalNormal(point) is not { } normal)
        {
            return null;
        }

        // SNR does not change when a source turns by 180 degrees: the acute angle of the two lines.
        return new(depth, normal, Math.Atan2(Vec3.Cross(normal, wall).Norm, Math.Abs(Vec3.Dot(normal, wall))));
    }
}
