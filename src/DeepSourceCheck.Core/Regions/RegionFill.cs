using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Regions;

// Nodes stand at (i h, j h, k h) of the region's own frame. The products are formed in decimal arithmetic from h in millimetres, so that each coordinate is
// the double nearest to the number that a person would write; they are never sums of steps. They are listed with x fastest, then y, then z, each ascending.

/// <summary>Fills regions with dipoles.</summary>
public static class RegionFill
{
    /// <summary>Share of dropped dipoles above which a region says so.</summary>
    public const double WarnDroppedShare = 0.10;

    /// <summary>Share above which a library region says so: its place is ours, not the study's.</summary>
    public const double WarnDroppedShareOfLibrary = 0.01;

    // Nodes of the box that are tried at most: refinement stops before, and a stated spacing that needs more is refused.
    private const double MostRefined = 1e8, MostTried = 1e9;

    /// <summary>Fills a solid shape.</summary>
    /// <param name="name">Name of the region.</param>
    /// <param name="shape">Ellipsoid or mask.</param>
    /// <param name="spacing">Stated spacing [m], never refined; null: 2 mm, halved until the shape holds at least 50 nodes (six halvings at most).</param>
    /// <param name="head">Head; refuses points with a reason.</param>
    /// <param name="origin">Where the shape comes from, for results.</param>
    /// <param name="file">Study, for messages.</param>
    /// <param name="key">Key of the region in the study, for messages.</param>
    /// <exception cref="InputException">Too many dipoles, no node in the shape, or none that the head keeps.</exception>
    public static FilledRegion Fill(
        string name, RegionShape shape, double? spacing, IHead head, string origin, string? file = null, string? key = null) =>
        Fill(name, shape, spacing, head, origin, file, key, WarnDroppedShare);

    /// <summary>Fills a region of the library: an ellipsoid, or the cortex of the head.</summary>
    /// <param name="region">Region, already scaled to the head.</param>
    /// <param name="spacing">Stated spacing [m], or null.</param>
    /// <param name="head">Head; cortex needs one that knows its brain: spheres or voxels.</param>
    /// <exception cref="InputException">As for shapes; cortex on imported leadfields.</exception>
    public static FilledRegion Fill(LibraryRegion region, double? spacing, IHead head)
    {
        if (region.Shape is not { } ellipsoid)
        {
            return head switch
            {
                LayeredSphere sphere => CortexShell.Fill(sphere, spacing ?? CortexShell.DefaultSpacing, region.Name),
                VoxelHead voxels => CortexVoxels.Fill(voxels, spacing ?? CortexShell.DefaultSpacing, region.Name),
                _ => throw new InputException(null, "responses", $"region '{region.Name}' is computed for heads of spheres or voxels; give a region of your own"),
            };
        }

        FilledRegion filled = Fill(region.Name, ellipsoid.Shape, spacing, head, "library", null, null, WarnDroppedShareOfLibrary).WithRealisticHead(region.RealisticHead);
        return region.SphereLimits is { } limits && head is LayeredSphere ? filled.WithWarning($"{region.Name}: {limits}") : filled;
    }

    /// <summary>Expected number of dipoles of a library region, before anything is allocated; 0 where the head cannot hold it.</summary>
    /// <param name="region">Region, already scaled to the head.</param>
    /// <param name="spacing">Stated spacing [m], or null.</param>
    /// <param name="head">Head.</param>
    public static long PredictCount(LibraryRegion region, double? spacing, IHead head) => region.Shape is { } ellipsoid
        ? GridSpacing.PredictCount(ellipsoid.Volume, spacing)
        : head switch
        {
            LayeredSphere sphere => CortexShell.Count(sphere, spacing ?? CortexShell.DefaultSpacing),
            VoxelHead voxels => CortexVoxels.Count(voxels, spacing ?? CortexShell.DefaultSpacing),
            _ => 0,
        };

    /// <summary>Takes explicit points in their order.</summary>
    /// <param name="name">Name of the region.</param>
    /// <param name="pointNames">Names, as many as positions.</param>
    /// <param name="positions">Positions [m]; at least one. Kept, not copied.</param>
    /// <param name="head">Head; refuses points with a reason.</param>
    /// <param name="origin">Where they come from, for results.</param>
    /// <param name="file">Study or table, for messages.</param>
    /// <param name="key">Key of the region in the study, for messages.</param>
    /// <exception cref="InputException">No point, or none that the head keeps.</exception>
    public static FilledRegion Points(
        string name, PointNames pointNames, Vec3[] positions, IHead head, string origin, string? file = null, string? key = null)
    {
        if (pointNames.Length != positions.Length)
        {
            throw new ArgumentException($"{pointNames.Length} names and {positions.Length} positions.", nameof(positions));
        }

        return positions.Length > 0
            ? Admit(
                new() { Name = name, Positions = positions, Rows = [], PointNames = pointNames, Origin = origin },
                head, file, key, WarnDroppedShare)
            : throw new InputException(file, key, $"region '{name}' has no points; give at least one");
    }

    /// <summary>Share of a shape's volume that a head refuses, on a grid of at least 20,000 nodes.</summary>
    public static double ShareRefused(RegionShape shape, IHead head)
    {
        Vec3[] nodes = Nodes(shape, GridSpacing.InMillimetres(Math.Cbrt(shape.Volume / 25_000)));
        return nodes.Count(node => head.WhyRefused(node) is not null) / (double)nodes.Length;
    }

    private static FilledRegion Fill(
        string name, RegionShape shape, double? stated, IHead head, string origin, string? file, string? key, double warnShare)
    {
        GridSpacing.Check(name, shape.Volume, stated, file, key);
        double spacing = stated ?? GridSpacing.Default;
        if (Tried(shape, spacing) > MostTried)
        {
            throw new InputException(file, key, string.Create(
                CultureInfo.InvariantCulture,
                $"region '{name}' spreads over a box of more than {MostTried:0e+0} nodes at its spacing; state a larger spacing_mm"));
        }

        Vec3[] nodes = Nodes(shape, GridSpacing.InMillimetres(spacing));
        bool refined = false;
        int halvings = stated is null ? GridSpacing.MostHalvings : 0;
        for (int k = 0; k < halvings && nodes.Length < GridSpacing.LeastDipoles && Tried(shape, spacing / 2) <= MostRefined; k++)
        {
            spacing /= 2;
            refined = true;
            nodes = Nodes(shape, GridSpacing.InMillimetres(spacing));
        }

        if (nodes.Length == 0)
        {
            throw new InputException(file, key, string.Create(
                CultureInfo.InvariantCulture,
                $"region '{name}' holds no grid node at a spacing of {Si.ToMm(spacing):0.####} mm: "
                + $"state a smaller spacing_mm, or leave it out to have it refined"));
        }

        FilledRegion all = new()
        {
            Name = name,
            Positions = nodes,
            Rows = [],
            Spacing = spacing,
            SpacingRefined = refined,
            ShapeVolume = shape.Volume,
            Origin = origin,
        };
        return Admit(all, head, file, key, warnShare);
    }

    /// <summary>Keeps the points that the head admits; <paramref name="all"/> carries every point as if kept.</summary>
    internal static FilledRegion Admit(FilledRegion all, IHead head, string? file, string? key, double warnShare)
    {
        int count = all.Positions.Length;
        var rows = new int[count];
        int kept = 0;
        List<DroppedPoint> dropped = [];
        Vec3 sum = Vec3.Zero;
        for (int row = 0; row < count; row++)
        {
            Vec3 point = all.Positions[row];
            sum += point;
            if (head.WhyRefused(point) is { } reason)
            {
                dropped.Add(new(row, all.PointNames.Length > 0 ? all.PointNames[row] : "", point, reason));
            }
            else
            {
                rows[kept++] = row;
            }
        }

        Vec3 centroid = sum / count;
        if (kept == 0)
        {
            string where = head.WhyRefused(centroid) ?? "inside, but each point is refused: " + dropped[0].Reason;
            throw new InputException(file, key, $"region '{all.Name}' keeps no dipole in {head.Name}: its centroid lies {where}");
        }

        Array.Resize(ref rows, kept);
        string[] warnings = Losses(all.Name, dropped, count, head, warnShare);
        return new()
        {
            Name = all.Name,
            Positions = dropped.Count == 0 ? all.Positions : Array.ConvertAll(rows, row => all.Positions[row]),
            Rows = rows,
            PointNames = all.PointNames.Length == 0 || dropped.Count == 0 ? all.PointNames : all.PointNames.At(rows),
            CorticalPlaces = all.CorticalPlaces.Length == 0 || dropped.Count == 0 ? all.CorticalPlaces : Array.ConvertAll(rows, row => all.CorticalPlaces[row]),
            Dropped = dropped,
            Spacing = all.Spacing,
            SpacingRefined = all.SpacingRefined,
            IsSurface = all.IsSurface,
            ShapeVolume = all.ShapeVolume,
            Centroid = centroid,
            Origin = all.Origin,
            Warnings = warnings,
        };
    }

    /// <summary>What a region lost; in a head of voxels always, and to which tissues.</summary>
    private static string[] Losses(string name, List<DroppedPoint> dropped, int count, IHead head, double warnShare)
    {
        double share = dropped.Count / (double)count;
        if (dropped.Count == 0 || (share <= warnShare && head is not VoxelHead))
        {
            return [];
        }

        string what = string.Create(CultureInfo.InvariantCulture, $"{name}: {Percent(share)} of it ({dropped.Count:N0} of {count:N0} dipoles)");
        if (head is not VoxelHead)
        {
            return [$"{what} does not fit into the head ({head.Name}) and was dropped; the figures stand for the rest"];
        }

        IEnumerable<string> tissues = dropped.CountBy(p => head.TissueAt(p.Position) ?? "no tissue").OrderByDescending(t => t.Value).ThenBy(t => t.Key, StringComparer.Ordinal)
            .Select(t => string.Create(CultureInfo.InvariantCulture, $"{t.Key} ({Percent(t.Value / (double)count)})"));
        return [$"{what} fell into {string.Join(", ", tissues)}, where no source stands, and was dropped; the figures stand for the rest"];
    }

    private static string Percent(double share) => (100 * share).ToString(share < 0.01 ? "0.##" : "0", CultureInfo.InvariantCulture) + " %";

    private static Vec3[] Nodes(RegionShape shape, decimal step)
    {
        double[] xs = Coordinates(shape.Min.X, shape.Max.X, step);
        double[] ys = Coordinates(shape.Min.Y, shape.Max.Y, step);
        double[] zs = Coordinates(shape.Min.Z, shape.Max.Z, step);
        List<Vec3> nodes = [];
        foreach (double z in zs)
        {
            foreach (double y in ys)
            {
                foreach (double x in xs)
                {
                    Vec3 node = new(x, y, z);
                    if (shape.Contains(node))
                    {
                        nodes.Add(node);
                    }
                }
            }
        }

        return [.. nodes];
    }

    /// <summary>Multiples of the step [mm] within an interval [m], in metres: each the double nearest to its decimal number.</summary>
    private static double[] Coordinates(double low, double high, decimal step)
    {
        // A node on the box's face must not be lost to rounding: the box is widened by a thousandth of a step.
        int first = (int)Math.Ceiling(Si.ToMm(low) / (double)step - 0.001), last = (int)Math.Floor(Si.ToMm(high) / (double)step + 0.001);
        return [.. Enumerable.Range(first, Math.Max(0, last - first + 1)).Select(i => (double)(i * step / 1000m))];
    }

    private static double Tried(RegionShape shape, double spacing)
    {
        Vec3 size = shape.Max - shape.Min;
        return (size.X / spacing + 1) * (size.Y / spacing + 1) * (size.Z / spacing + 1);
    }
}
