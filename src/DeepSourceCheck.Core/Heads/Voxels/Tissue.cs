namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>What a tissue is to the checks of a head and to the admission of sources.</summary>
public enum TissueKind
{
    /// <summary>Outside the head, or a cavity in it.</summary>
    Air,

    /// <summary>Skin, fat, muscle, eyes: everything outside the skull that conducts.</summary>
    Scalp,

    /// <summary>Bone of any kind.</summary>
    Skull,

    /// <summary>Cerebrospinal fluid.</summary>
    Csf,

    /// <summary>Grey matter, or brain where grey and white are one label.</summary>
    Grey,

    /// <summary>White matter.</summary>
    White,
}

/// <summary>A tissue of a labelled volume.</summary>
/// <param name="Label">Its label in the file.</param>
/// <param name="Name">Its name in the study.</param>
/// <param name="Kind">What it is.</param>
/// <param name="Conductivity">Conductivity [S/m]; positive, 0 for air.</param>
public sealed record Tissue(int Label, string Name, TissueKind Kind, double Conductivity);
