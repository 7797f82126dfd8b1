using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

using static System.FormattableString;

namespace DeepSourceCheck.Core.Sensors;

// Directions: the evenly spread ones of the sphere's cap, seen from the centre of the sphere fitted to the inner skull (without a skull: to the upper scalp), so that the
// edge means the same as on spherical heads.
//
// magnetometer, axial-gradiometer, planar-gradiometer: a rigid smooth helmet. The ellipsoid along the world's axes that fits the scalp above the edge best, each semi-axis
// made longer by one length d, such that the smallest distance between helmet and scalp anywhere above the edge is gap_mm. Sites are where the rays leave it; the coil's
// axis is the ellipsoid's normal. A smaller head in a helmet made for it: elsewhere the gap is larger (stated).
//
// on-scalp, on-scalp-triaxial: each site by itself, gap_mm from the scalp point on its ray along the scalp's normal (mean over 8 mm, the size of a sensor's foot), and
// farther where another part of the scalp would come nearer than gap_mm.

/// <summary>A generated MEG array about a real head.</summary>
public sealed class HeadArray
{
    /// <summary>Radius of the patch of scalp whose mean normal an on-scalp sensor follows [m].</summary>
    public const double PatchRadius = 0.008;

    // A helmet twice as long as broad fits no head: such a fit comes from a scalp of which little lies above the edge.
    private const double LargestElongation = 1.6;

    private const double GapTolerance = 1e-6;

    private HeadArray(IReadOnlyList<MegChannel> channels, Vec3 centre, AlignedEllipsoid? helmet, double[] gaps) =>
        (Channels, Centre, Helmet, SmallestGap, MedianGap, LargestGap) = (channels, centre, helmet, gaps[0], gaps[gaps.Length / 2], gaps[^1]);

    /// <summary>Channels, as <see cref="CoilArray.Generate(CoilArrayChoice, Vec3, double)"/> names them.</summary>
    public IReadOnlyList<MegChannel> Channels { get; }

    /// <summary>Point that the sites' directions are seen from [m].</summary>
    public Vec3 Centre { get; }

    /// <summary>The helmet's surface [m]; null for on-scalp sensors.</summary>
    public AlignedEllipsoid? Helmet { get; }

    /// <summary>Smallest distance of a site from the scalp [m].</summary>
    public double SmallestGap { get; }

    /// <summary>Median distance of a site from the scalp [m].</summary>
    public double MedianGap { get; }

    /// <summary>Largest distance of a site from the scalp [m].</summary>
    public double LargestGap { get; }

    /// <summary>One sentence on where the array lies, for the user.</summary>
    public string Description => Helmet is { } h
        ? Invariant($"MEG helmet: an ellipsoid of semi-axes {Si.ToMm(h.SemiAxes.X):0}, {Si.ToMm(h.SemiAxes.Y):0} and {Si.ToMm(h.SemiAxes.Z):0} mm; its sites lie {Si.ToMm(SmallestGap):0.0} to {Si.ToMm(LargestGap):0.0} mm from the scalp (median {Si.ToMm(MedianGap):0.0} mm)")
        : Invariant($"on-scalp MEG: sites lie {Si.ToMm(SmallestGap):0.0} to {Si.ToMm(LargestGap):0.0} mm from the scalp (median {Si.ToMm(MedianGap):0.0} mm)");

    /// <summary>Builds the array.</summary>
    /// <param name="choice">Coil, sites, baseline, gap and edge.</param>
    /// <param name="scalp">Scalp.</param>
    /// <param name="sphere">Sphere whose centre directions are seen from.</param>
    /// <exception cref="InputException">Unknown coil, a number out of range, or a centre that no scalp surrounds.</exception>
    public static HeadArray Generate(CoilArrayChoice choice, ScalpSurface scalp, HeadSphere sphere)
    {
        CoilArray.Check(choice);
        Vec3 centre = sphere.Sphere.Centre;
        if (!scalp.Contains(centre))
        {
            throw new InputException(null, "head.voxels.labels", "the sphere fitted to the head has its centre outside the head: no MEG array can be placed about it; check the labels");
        }

        AlignedEllipsoid? helmet = choice.Coil.StartsWith("on-scalp", StringComparison.Ordinal) ? null : FitHelmet(choice, scalp, centre);
        List<double> gaps = [];
        MegChannel[] channels = CoilArray.Generate(choice, direction =>
        {
            (Vec3 Place, Vec3 Outward) site = helmet is { } h ? OnHelmet(h, centre, direction) : OnScalp(scalp, centre, direction, choice.Gap);
            gaps.Add(scalp.Nearest(site.Place).SignedDistance);
            return site;
        });
        return new(channels, centre, helmet, [.. gaps.Order()]);
    }

    private static (Vec3 Place, Vec3 Outward) OnHelmet(AlignedEllipsoid helmet, Vec3 centre, Vec3 direction)
    {
        Vec3 place = helmet.OnRay(centre, direction);
        return (place, helmet.Normal(place));
    }

    private static (Vec3 Place, Vec3 Outward) OnScalp(ScalpSurface scalp, Vec3 centre, Vec3 direction, double gap)
    {
        Vec3 foot = scalp.Outermost(centre, direction)!.Value, outward = scalp.PatchNormal(foot, PatchRadius);
        Vec3 place = foot + gap * outward;
        for (int step = 0; step < 20 && scalp.Nearest(place).SignedDistance is double found && found < gap - GapTolerance; step++)
        {
            place += (gap - found) * outward;
        }

        return (place, outward);
    }

    private static AlignedEllipsoid FitHelmet(CoilArrayChoice choice, ScalpSurface scalp, Vec3 centre)
    {
        CapEdge edge = new(choice.EdgeFront, choice.EdgeBack);
        List<Vec3> near = [], above = [];
        foreach (Vec3 p in scalp.Samples)
        {
            near.Add(p);
            if (edge.Contains((p - centre).Unit()))
            {
                above.Add(p);
            }
        }

        AlignedEllipsoid shape = AlignedEllipsoid.Fit(above) is { } fit && Elongation(fit) < LargestElongation && Inside(fit, centre) ? fit : Ball(above, near);
        double grown = choice.Gap;
        for (int round = 0; round < 50; round++)
        {
            AlignedEllipsoid helmet = shape.Grown(grown);
            double smallest = double.PositiveInfinity;
            double[] gaps = new double[near.Count];
            for (int n = 0; n < gaps.Length; n++)
            {
                (Vec3 foot, double gap) = helmet.Nearest(near[n]);
                gaps[n] = edge.Contains((foot - centre).Unit()) ? gap : double.PositiveInfinity;
                smallest = Math.Min(smallest, gaps[n]);
            }

            if (Math.Abs(smallest - choice.Gap) < GapTolerance)
            {
                break;
            }

            // Only the places that come near can decide: the others are left out from now on.
            near = [.. near.Where((_, n) => gaps[n] < smallest + 0.010)];
            grown += choice.Gap - smallest;
        }

        return shape.Grown(grown);
    }

    private static AlignedEllipsoid Ball(List<Vec3> above, List<Vec3> all)
    {
        FittedSphere sphere = FittedSphere.Of(above.Count >= 100 ? above : all);
        return new(sphere.Centre, new(sphere.Radius, sphere.Radius, sphere.Radius));
    }

    private static double Elongation(AlignedEllipsoid e) =>
        Math.Max(e.SemiAxes.X, Math.Max(e.SemiAxes.Y, e.SemiAxes.Z)) / Math.Min(e.SemiAxes.X, Math.Min(e.SemiAxes.Y, e.SemiAxes.Z));

    private static bool Inside(AlignedEllipsoid e, Vec3 point) => e.Nearest(point).Inside > 0;
}
