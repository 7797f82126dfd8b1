using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>One integration point of a coil.</summary>
/// <param name="Position">Place [m].</param>
/// <param name="Axis">Unit vector of the field component.</param>
/// <param name="Share">Weight in the channel's sum; 1/m for planar gradiometers, else without unit.</param>
public readonly record struct CoilPoint(Vec3 Position, Vec3 Axis, double Share);

/// <summary>One MEG channel: the sum over its points of share times field component.</summary>
/// <param name="Name">Unique name.</param>
/// <param name="Kind">Decides the unit: T, or T/m for planar gradiometers.</param>
/// <param name="Points">At least one.</param>
public sealed record MegChannel(string Name, CoilKind Kind, IReadOnlyList<CoilPoint> Points)
{
    /// <summary>Where the channel sits: its first point [m].</summary>
    public Vec3 Site => Points[0].Position;
}
