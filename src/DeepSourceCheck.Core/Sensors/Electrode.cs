using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>One electrode: on the scalp, or a contact inside the head.</summary>
/// <param name="Name">Unique name.</param>
/// <param name="Position">Place on the head's surface, or inside it for an interior contact [m].</param>
/// <param name="InAverage">False for mastoids that only joined because a derivation or the reference names them.</param>
/// <param name="MovedBy">How far the given position was moved to reach the surface [m].</param>
/// <param name="IsInterior">True for a contact of a depth electrode or a grid below the skull, which stays where it was given.</param>
public sealed record Electrode(string Name, Vec3 Position, bool InAverage, double MovedBy, bool IsInterior = false);
