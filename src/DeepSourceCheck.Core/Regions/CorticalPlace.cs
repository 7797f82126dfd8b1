using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Regions;

/// <summary>Where a dipole stands in the cortex, and which way the cortex faces there.</summary>
/// <param name="Depth">Depth below the inner skull [m].</param>
/// <param name="Normal">Unit vector from white matter to the surface of the cortex.</param>
/// <param name="SourceAngle">Angle between that normal and the normal of the nearest inner skull [rad], 0 (crown of a gyrus) to pi/2 (wall of a sulcus).</param>
public readonly record struct CorticalPlace(double Depth, Vec3 Normal, double SourceAngle);
