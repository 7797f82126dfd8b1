using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Tests.Support;

/// <summary>A slab of cortex that is folded by a formula, under a flat skull: its depths, normals and source angles are known.</summary>
/// <remarks>
/// White matter below z = A cos(k u), grey between it and the same sheet <see cref="Thickness"/> higher, fluid above, bone from <see cref="Wall"/> on; u runs oblique to the voxels, so that each fold
/// falls on them in its own way, and no crest lies on a plane of their centres. The sheets between are copies of each other: the normal of the cortex at any place is that of z - A cos(k u) there, A k sin(k u) along u and 1 along z, normalised.
/// </remarks>
internal static class FoldedHead
{
    /// <summary>Amplitude A [m].</summary>
    public const double Amplitude = 0.005;

    /// <summary>k [1/m]: folds 24 mm apart.</summary>
    public const double Wave = 2 * Math.PI / 0.024;

    /// <summary>Height of the grey sheet [m].</summary>
    public const double Thickness = 0.005;

    /// <summary>Height of the inner skull [m].</summary>
    public const double Wall = 0.012;

    private static readonly Vec3 Across = new(Math.Cos(0.35), Math.Sin(0.35), 0);

    /// <summary>The head.</summary>
    /// <param name="edge">Edge of a voxel [m].</param>
    public static VoxelHead Of(double edge)
    {
        int nx = (int)Math.Round(0.104 / edge), nz = (int)Math.Round(0.060 / edge);
        var grid = new VoxelGrid(nx, nx, nz, new(new(edge, 0, 0), new(0, edge, 0), new(0, 0, edge), new(-(nx - 1) * edge / 2, -(nx - 1) * edge / 2, -0.030 + 0.3 * edge)));
        return new("voxels: folded", SphereVolumes.Filled(grid, p =>
        {
            bool inside = Math.Abs(p.X) < 0.048 && Math.Abs(p.Y) < 0.048 && p.Z is > -0.024 and < 0.022;
            double above = p.Z - Amplitude * Math.Cos(Wave * Vec3.Dot(Across, p));
            return (byte)(!inside ? 0 : p.Z > Wall ? 2 : above > Thickness ? 4 : above > 0 ? 5 : 6);
        }, [.. LabelledHeads.Tissues]));
    }

    /// <summary>The cortex's normal.</summary>
    public static Vec3 Normal(Vec3 p) => (Amplitude * Wave * Math.Sin(Wave * Vec3.Dot(Across, p)) * Across + new Vec3(0, 0, 1)).Unit();
}
