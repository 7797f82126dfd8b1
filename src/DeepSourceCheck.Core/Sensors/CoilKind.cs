namespace DeepSourceCheck.Core.Sensors;

/// <summary>What a MEG channel measures.</summary>
public enum CoilKind
{
    /// <summary>One field component [T].</summary>
    Magnetometer,

    /// <summary>Near minus far field along the axis [T].</summary>
    AxialGradiometer,

    /// <summary>Difference over the baseline across the axis [T/m].</summary>
    PlanarGradiometer,
}
