using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Regions;

/// <summary>Sides of regions in a frame with x to the right.</summary>
public static class RegionSide
{
    /// <summary>Distance from the plane x = 0 within which a centroid is on neither side [m].</summary>
    public const double MidlineTolerance = 1e-6;

    /// <summary>`left`, `right` or `midline`, by a centroid [m].</summary>
    public static string Of(Vec3 centroid) =>
        centroid.X < -MidlineTolerance ? "left" : centroid.X > MidlineTolerance ? "right" : "midline";

    /// <summary>What to tell the user when a region's name ends in -left or -right and its centroid [m] lies on the other side; else null.</summary>
    /// <remarks>Some atlases carry labels on the wrong side of their names: only the position decides.</remarks>
    public static string? Contradiction(string name, Vec3 centroid)
    {
        string? named = name.EndsWith("-left", StringComparison.OrdinalIgnoreCase) ? "left"
            : name.EndsWith("-right", StringComparison.OrdinalIgnoreCase) ? "right"
            : null;
        string side = Of(centroid);
        return named is null || side == named || side == "midline"
            ? null
            : string.Create(
                CultureInfo.InvariantCulture,
                $"{name}: its centroid lies on the {side} (x = {Si.ToMm(centroid.X):0.0} mm with x to the right); "
                + $"check the label, or whether the volume's left and right are swapped");
    }
}
