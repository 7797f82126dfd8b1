using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`regions`: ellipsoids, masks and points of the study's own.</summary>
internal static class RegionBinder
{
    // More dipoles than any region needs; a spacing of a thousandth of what was meant asks for a billion times as many.
    private const double MostDipoles = 2e7;

    private static readonly string[] MaskKeys = ["label", "threshold"];

    public static IReadOnlyList<RegionChoice> Bind(Section root, BoundSensors sensors, Reading reading)
    {
        var regions = new List<RegionChoice>();
        var names = new HashSet<string>(StringComparer.Ordinal);
        foreach (Section entry in root.Entries("regions"))
        {
            string? name = entry.Text("name");
            if (name is not null && !names.Add(name))
            {
                entry.Problem("name", $"the name {Shown.Quoted(name)} stands twice; every region needs a name of its own");
            }
            else if (name is not null && !sensors.Imported && reading.LibraryRegions.Contains(name))
            {
                entry.Warn("name", $"this region stands in for the library's region {name}");
            }

            if (Region(entry, sensors) is { } region && name is not null)
            {
                regions.Add(region with { Name = name });
            }
        }

        return regions;
    }

    private static RegionChoice? Region(Section entry, BoundSensors sensors)
    {
        string? which = entry.OneOf("a region is one of them", "ellipsoid", "mask", "points");
        if (sensors.Imported && which is ("ellipsoid" or "mask"))
        {
            entry.Problem(which, "is not used with head.leadfields, which knows its own points only; write points with the names of imported points");
        }

        if (which is not null && which != "mask")
        {
            foreach (string name in MaskKeys.Where(entry.States))
            {
                entry.Problem(name, "belongs to a mask; remove it");
            }
        }

        if (which == "points" && entry.States("spacing_mm"))
        {
            entry.Problem("spacing_mm", "belongs to an ellipsoid or a mask, points have places of their own; remove it");
        }

        if (entry.States("label") && entry.States("threshold"))
        {
            entry.Problem("threshold", "stands beside label; write label for a label volume, or threshold for a probability mask");
        }

        RegionChoice? region = which switch
        {
            "ellipsoid" when Ellipsoid(entry) is { } ellipsoid => new() { Name = "", Key = entry.Key, Ellipsoid = ellipsoid },
            "mask" when entry.Text("mask") is { } mask =>
                new() { Name = "", Key = entry.Key, Mask = mask, Label = entry.Number("label"), Threshold = entry.Number("threshold") },
            "points" when entry.Text("points") is { } points => new() { Name = "", Key = entry.Key, Points = points },
            _ => null,
        };
        if (region is null || which == "points")
        {
            return region;
        }

        double? spacing = entry.Number("spacing_mm") is { } mm ? Si.FromMm(mm) : null;
        if (spacing is { } h && region.Ellipsoid is { } shape && Volume(shape) / (h * h * h) is > MostDipoles and var count)
        {
            entry.Problem("spacing_mm", $"fills the ellipsoid with about {KeyShape.Text(Math.Round(count))} dipoles, "
                + $"more than {KeyShape.Text(MostDipoles)}; state a wider spacing");
        }

        return region with { Spacing = spacing };
    }

    private static double Volume(EllipsoidChoice shape) => 4.0 / 3.0 * Math.PI * shape.SemiAxes.X * shape.SemiAxes.Y * shape.SemiAxes.Z;

    private static EllipsoidChoice? Ellipsoid(Section entry)
    {
        if (entry.Map("ellipsoid") is not { } section)
        {
            return null;
        }

        Vec3? centre = section.Millimetres("centre_mm"), axes = section.Millimetres("semi_axes_mm"), turn = section.Vector("rotation_deg");
        return centre is { } c && axes is { } a && turn is { } t
            ? new(c, a, Rotation.FromFixedAxes(Si.FromDegrees(t.X), Si.FromDegrees(t.Y), Si.FromDegrees(t.Z)))
            : null;
    }
}
