namespace DeepSourceCheck.Core.Studies;

/// <summary>Electrodes: a layout or a table; neither for imported leadfields.</summary>
public sealed record EegChoice(string? Layout, string? ElectrodesFile, string? CoordinatesFile, ReferenceChoice Reference);

/// <summary>The reference of the EEG.</summary>
/// <param name="Kind">Average, none or named electrodes.</param>
/// <param name="Electrodes">The named electrodes; empty otherwise.</param>
public sealed record ReferenceChoice(ReferenceKind Kind, IReadOnlyList<string> Electrodes);

/// <summary>What the EEG is measured against.</summary>
public enum ReferenceKind
{
    /// <summary>The mean of the electrodes in use.</summary>
    Average,

    /// <summary>As computed: mean zero over the sphere.</summary>
    None,

    /// <summary>The mean of named electrodes.</summary>
    Electrodes,
}

/// <summary>MEG channels: a table or a generated array; neither for imported leadfields.</summary>
public sealed record MegChoice(string? CoilsFile, CoilArrayChoice? Generated);

/// <summary>A generated array.</summary>
/// <param name="Coil">magnetometer, axial-gradiometer, planar-gradiometer, on-scalp or on-scalp-triaxial.</param>
/// <param name="Sites">Number of sites.</param>
/// <param name="Baseline">Distance between the coils of a gradiometer [m]; 0 for magnetometers.</param>
/// <param name="Gap">Scalp to the nearest coil [m].</param>
/// <param name="EdgeFront">Elevation of the lower edge in front, seen from the centre [rad].</param>
/// <param name="EdgeBack">Elevation of the lower edge at the back [rad].</param>
public sealed record CoilArrayChoice(string Coil, int Sites, double Baseline, double Gap, double EdgeFront, double EdgeBack);
