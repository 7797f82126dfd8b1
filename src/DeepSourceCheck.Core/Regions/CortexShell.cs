using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Regions;

/// <summary>The cortex of a spherical head: points spread evenly on the sphere 6 mm inside the inner skull.</summary>
/// <remarks>A sphere has neither neck nor skull base: the shell closes below, where a head has no cortex.</remarks>
public static class CortexShell
{
    /// <summary>Depth below the inner skull [m].</summary>
    public const double Depth = LayeredSphere.CortexDepth;

    /// <summary>Spacing where none is stated [m].</summary>
    public const double DefaultSpacing = 0.006;

    /// <summary>Radius of the shell [m].</summary>
    public static double Radius(LayeredSphere head) => head.CortexRadius;

    /// <summary>Number of points: round(4 pi r^2 / h^2), so that each stands for an area of h^2; saturates at the largest integer.</summary>
    public static long Count(LayeredSphere head, double spacing)
    {
        double count = Math.Round(4 * Math.PI * Math.Pow(Radius(head) / spacing, 2));
        return count < 9.2e18 ? (long)count : long.MaxValue;
    }

    /// <summary>The shell's points, golden-angle spiral from the top down.</summary>
    /// <param name="head">Head.</param>
    /// <param name="spacing">Spacing [m]; positive.</param>
    /// <param name="name">Name of the region.</param>
    /// <exception cref="InputException">The inner skull is too small, the spacing too fine, or the head keeps no point.</exception>
    public static FilledRegion Fill(LayeredSphere head, double spacing = DefaultSpacing, string name = "cortex")
    {
        double radius = Radius(head);
        long count = spacing > 0 ? Count(head, spacing) : 0;
        if (radius <= 0 || count is < 1 or > GridSpacing.MostDipoles)
        {
            throw new InputException(null, null, string.Create(
                CultureInfo.InvariantCulture,
                $"region '{name}' would hold {count} points on a sphere of {Si.ToMm(radius):0.#} mm "
                + $"at a spacing of {Si.ToMm(spacing):0.####} mm; 1 to {GridSpacing.MostDipoles} are allowed"));
        }

        Vec3[] points = [.. Enumerable.Range(0, (int)count).Select(k => head.Centre + radius * GoldenSpiral.Point(k, (int)count))];
        FilledRegion all = new() { Name = name, Positions = points, Rows = [], Spacing = spacing, IsSurface = true, Origin = "library" };
        return RegionFill.Admit(all, head, null, null, RegionFill.WarnDroppedShare);
    }
}
