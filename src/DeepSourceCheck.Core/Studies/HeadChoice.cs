using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Core.Studies;

/// <summary>Which head.</summary>
public abstract record HeadChoice;

/// <summary>Layered spheres.</summary>
/// <param name="Sphere">The head.</param>
/// <param name="Preset">Name of the preset, or null for stated layers.</param>
/// <param name="LibraryScale">Factor by which library regions scale about the centre (child and neonate presets), else 1.</param>
public sealed record SphereHeadChoice(LayeredSphere Sphere, string? Preset, double LibraryScale) : HeadChoice;

/// <summary>Imported leadfields: paths relative to the study.</summary>
public sealed record ImportedHeadChoice(string? Eeg, string? Meg, string Points, string Rows) : HeadChoice;

/// <summary>A labelled volume: paths relative to the study.</summary>
public sealed record VoxelHeadChoice : HeadChoice
{
    /// <summary>The label volume.</summary>
    public required string Labels { get; init; }

    /// <summary>Every label of the volume with its tissue, in the study's order; air (label 0) stands here only where the study lists it.</summary>
    public required IReadOnlyList<Tissue> Tissues { get; init; }

    /// <summary>True: nodes at borders between tissues move; false: the plain grid.</summary>
    public bool Adapted { get; init; } = true;

    /// <summary>How a dipole loads the grid.</summary>
    public DipoleLoadName DipoleLoad { get; init; } = DipoleLoadName.Monopoles;

    /// <summary>Conductivity tensors, or null.</summary>
    public TensorChoice? Tensors { get; init; }

    /// <summary>Landmarks that the study gives [m], by name: Nz, Iz, LPA, RPA; the others are found.</summary>
    public IReadOnlyDictionary<string, Vec3> Landmarks { get; init; } = new Dictionary<string, Vec3>();

    /// <summary>Masks that replace the tissue, in order.</summary>
    public IReadOnlyList<OverlayChoice> Overlays { get; init; } = [];
}

/// <summary>How a dipole loads a grid of finite elements.</summary>
public enum DipoleLoadName
{
    /// <summary>Monopoles on the nodes around it (Saint-Venant).</summary>
    Monopoles,

    /// <summary>The gradient of the element's shape functions (partial integration).</summary>
    ElementGradient,
}

/// <summary>Conductivity tensors from a file.</summary>
/// <param name="File">Path relative to the study.</param>
/// <param name="Tissues">Names of the tissues that take their tensors.</param>
public sealed record TensorChoice(string File, IReadOnlyList<string> Tissues);

/// <summary>A mask that replaces the tissue.</summary>
/// <param name="Mask">Path relative to the study.</param>
/// <param name="Tissue">The tissue inside.</param>
/// <param name="Key">Key of the overlay in the study, for messages: `head.voxels.overlays[0]`.</param>
public sealed record OverlayChoice(string Mask, Tissue Tissue, string Key);
