namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>A tape stretched along an outline: hollows are bridged, as a measuring tape on a head bridges them.</summary>
/// <remarks>Graham's scan over points in the order of their angle about an inner point; both ends stay.</remarks>
internal static class TautString
{
    /// <summary>Indices of the points at which the tape lies on the outline, first and last included.</summary>
    /// <param name="outline">Points (u, v) [m] anticlockwise about the origin, less than a full turn.</param>
    public static List<int> Over(IReadOnlyList<(double U, double V)> outline)
    {
        List<int> held = [];
        for (int n = 0; n < outline.Count; n++)
        {
            while (held.Count >= 2 && Turn(outline[held[^2]], outline[held[^1]], outline[n]) <= 0)
            {
                held.RemoveAt(held.Count - 1);
            }

            held.Add(n);
        }

        return held;
    }

    private static double Turn((double U, double V) a, (double U, double V) b, (double U, double V) c) => (b.U - a.U) * (c.V - b.V) - (b.V - a.V) * (c.U - b.U);
}
