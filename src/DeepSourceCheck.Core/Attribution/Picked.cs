using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Regions;

namespace DeepSourceCheck.Core.Attribution;

/// <summary>Evenly picked dipoles of a region: what figures that need no every dipole are read from.</summary>
public static class Picked
{
    /// <summary>Indices of every n-th dipole, in order; all where the region has no more than <paramref name="most"/>.</summary>
    /// <param name="region">The region.</param>
    /// <param name="most">Largest number.</param>
    public static int[] Of(FilledRegion region, int most)
    {
        int dipoles = region.Positions.Length, every = Math.Max(1, (dipoles + most - 1) / most);
        return [.. Enumerable.Range(0, (dipoles + every - 1) / every).Select(k => k * every)];
    }

    /// <summary>Loads up to eight dipoles of a region.</summary>
    /// <param name="block">Receives them.</param>
    /// <param name="region">The region.</param>
    /// <param name="some">Their indices.</param>
    /// <returns>Their number.</returns>
    public static int Load(LeadfieldBlock block, FilledRegion region, ReadOnlySpan<int> some)
    {
        Span<Vec3> places = stackalloc Vec3[LeadfieldBlock.Lanes];
        Span<int> indices = stackalloc int[LeadfieldBlock.Lanes];
        for (int k = 0; k < some.Length; k++)
        {
            places[k] = region.Positions[some[k]];
            indices[k] = region.SourceIndices.Length == 0 ? -1 : region.SourceIndices[some[k]];
        }

        block.Load(places[..some.Length], indices[..some.Length]);
        return some.Length;
    }
}
