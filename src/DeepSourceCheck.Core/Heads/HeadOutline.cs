using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads;

/// <summary>Where a plane across one axis of the world cuts a surface of a head.</summary>
/// <param name="Surface">`scalp`, `bone` or `brain`.</param>
/// <param name="Axis">Axis that the plane stands across: 0 x, 1 y, 2 z.</param>
/// <param name="Lines">Closed lines [m], first point not repeated.</param>
public sealed record HeadOutline(string Surface, int Axis, IReadOnlyList<IReadOnlyList<Vec3>> Lines);
