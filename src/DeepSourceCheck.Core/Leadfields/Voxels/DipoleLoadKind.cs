namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>How a dipole becomes a load on nodes.</summary>
public enum DipoleLoadKind
{
    /// <summary>Monopoles on the nodes around it, see <see cref="MonopoleLoad"/>.</summary>
    Monopoles,

    /// <summary>Partial integration: the gradient of the element's shape functions, see <see cref="ElementGradientLoad"/>.</summary>
    ElementGradient,
}
