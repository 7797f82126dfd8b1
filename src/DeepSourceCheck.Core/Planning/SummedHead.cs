using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;

namespace DeepSourceCheck.Core.Planning;

/// <summary>
/// The head as a summed source sees it: its one place is the mean of its parts, where no dipole stands. Two sources on both sides of a sphere's centre have their mean there, and fields all the same.
/// </summary>
/// <param name="inner">The head.</param>
internal sealed class SummedHead(IHead inner) : IHead
{
    /// <inheritdoc/>
    public string Name => inner.Name;

    /// <inheritdoc/>
    public string? WhyRefused(Vec3 point) => inner.WhyRefused(point);

    /// <inheritdoc/>
    public string? TissueAt(Vec3 point) => inner.TissueAt(point);

    /// <inheritdoc/>
    public Vec3? Outward(Vec3 point) => inner.Outward(point);

    /// <inheritdoc/>
    public bool IsSymmetryCentre(Vec3 point) => false;

    /// <inheritdoc/>
    public double? Depth(Vec3 point) => inner.Depth(point);

    /// <inheritdoc/>
    public double? DepthBelowInnerSkull(Vec3 point) => inner.DepthBelowInnerSkull(point);

    /// <inheritdoc/>
    public IReadOnlyList<Vec3> BackgroundPlaces(int count) => inner.BackgroundPlaces(count);
}
