namespace DeepSourceCheck.Core.Heads;

/// <summary>One layer of a spherical head.</summary>
/// <param name="Tissue">Name: brain, csf, skull, scalp or the study's own.</param>
/// <param name="OuterRadius">Outer radius [m].</param>
/// <param name="RadialConductivity">Conductivity along the radius [S/m].</param>
/// <param name="TangentialConductivity">Conductivity across the radius [S/m].</param>
public sealed record SphereLayer(string Tissue, double OuterRadius, double RadialConductivity, double TangentialConductivity);
