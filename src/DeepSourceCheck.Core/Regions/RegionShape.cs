using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Regions;

/// <summary>A solid shape as filling sees it: a test for membership within known bounds.</summary>
/// <remarks>Ellipsoids and masks both become one, so that one algorithm fills either.</remarks>
/// <param name="Contains">True when a point [m] belongs to the shape. Pure.</param>
/// <param name="Min">Lower corner of a box that holds the shape [m].</param>
/// <param name="Max">Upper corner of that box [m].</param>
/// <param name="Volume">Analytic or voxel volume [m^3].</param>
/// <param name="Centroid">Centroid [m].</param>
public sealed record RegionShape(Func<Vec3, bool> Contains, Vec3 Min, Vec3 Max, double Volume, Vec3 Centroid);
