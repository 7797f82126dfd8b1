using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>The curve that a head's surface and the plane through three of its points have in common, from the first over the second to the third.</summary>
internal interface ISiteCurve
{
    /// <summary>The point at a share of the curve's length, 0 at the start and 1 at the end.</summary>
    Vec3 At(double share);

    /// <summary>The point at a share of the part between the start and the middle point.</summary>
    Vec3 Before(double share);

    /// <summary>The point at a share of the part between the middle point and the end.</summary>
    Vec3 After(double share);
}
