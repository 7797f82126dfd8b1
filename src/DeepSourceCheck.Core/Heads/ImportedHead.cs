using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads;

/// <summary>The head behind imported leadfields: nothing is known of it but the points at which it was computed.</summary>
public sealed class ImportedHead : IHead
{
    /// <inheritdoc/>
    public string Name => "imported leadfields";

    /// <inheritdoc/>
    public string? WhyRefused(Vec3 point) => null;

    /// <inheritdoc/>
    public string? TissueAt(Vec3 point) => null;

    /// <inheritdoc/>
    public Vec3? Outward(Vec3 point) => null;

    /// <inheritdoc/>
    public bool IsSymmetryCentre(Vec3 point) => false;

    /// <inheritdoc/>
    public double? Depth(Vec3 point) => null;

    /// <inheritdoc/>
    public double? DepthBelowInnerSkull(Vec3 point) => null;

    /// <inheritdoc/>
    public IReadOnlyList<Vec3> BackgroundPlaces(int count) => [];
}
