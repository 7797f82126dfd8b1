using System.Globalization;

namespace DeepSourceCheck.Core.Leadfields;

/// <summary>How many dipoles of a region each kind of load carries, where a grid cannot carry every dipole alike.</summary>
/// <param name="Whole">By all nodes around them.</param>
/// <param name="Partial">By fewer nodes, all within source tissue.</param>
/// <param name="Border">By nodes on the border of source tissue too.</param>
/// <param name="Element">By the gradient of their element, as nothing else gives the moment.</param>
public sealed record SupportCounts(int Whole, int Partial, int Border, int Element)
{
    /// <summary>Share of dipoles on border or element above which the user is told: medians over a region then rest on them.</summary>
    public const double WarnShare = 0.10;

    /// <summary>All dipoles.</summary>
    public int Total => Whole + Partial + Border + Element;

    /// <summary>Counts of two regions together.</summary>
    public static SupportCounts operator +(SupportCounts a, SupportCounts b) =>
        new(a.Whole + b.Whole, a.Partial + b.Partial, a.Border + b.Border, a.Element + b.Element);

    /// <summary>The counts in words.</summary>
    public string Text => string.Create(CultureInfo.InvariantCulture,
        $"{Whole:#,0} of {Total:#,0} on all nodes around them, {Partial:#,0} on fewer nodes within source tissue (near its border), {Border:#,0} on nodes of the border itself, {Element:#,0} on the gradient of their voxel");

    /// <summary>What the user must know; null where few dipoles fall back.</summary>
    public string? Warning => Total > 0 && Border + Element > WarnShare * Total
        ? string.Create(CultureInfo.InvariantCulture,
            $"{100.0 * (Border + Element) / Total:0} % of its dipoles stand in source tissue one or two voxels thick, where the finite elements carry a dipole less well ({Border:#,0} on nodes of the tissue's border, {Element:#,0} on the gradient of their voxel, of {Total:#,0}): smaller voxels, or a region that keeps off fluid and bone, show whether that matters")
        : null;
}
