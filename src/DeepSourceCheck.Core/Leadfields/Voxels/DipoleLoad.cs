using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>Turns a dipole into currents on a few nodes.</summary>
/// <remarks>Immutable; may run on several threads at once.</remarks>
public abstract class DipoleLoad
{
    /// <summary>Most nodes that a dipole takes.</summary>
    public const int MostNodes = 64;

    private protected DipoleLoad(SourceTissue tissue) => Tissue = tissue;

    /// <summary>Where dipoles may stand.</summary>
    public SourceTissue Tissue { get; }

    /// <summary>The load of a kind.</summary>
    public static DipoleLoad Of(DipoleLoadKind kind, SourceTissue tissue) => kind switch
    {
        DipoleLoadKind.Monopoles => new MonopoleLoad(tissue),
        DipoleLoadKind.ElementGradient => new ElementGradientLoad(tissue),
        _ => throw new ArgumentOutOfRangeException(nameof(kind), kind, "There are monopoles and the element's gradient."),
    };

    /// <summary>The current that flows into each node is weight . moment; the weights sum to zero.</summary>
    /// <param name="position">Place [m], in source tissue.</param>
    /// <param name="nodes">Nodes of the mesh; at least <see cref="MostNodes"/> long.</param>
    /// <param name="weights">Weights [1/m] of those nodes; as long.</param>
    /// <param name="support">What carries the dipole.</param>
    /// <returns>Number of nodes.</returns>
    /// <exception cref="ArgumentOutOfRangeException">The place is not in source tissue.</exception>
    public abstract int Place(Vec3 position, Span<int> nodes, Span<Vec3> weights, out DipoleSupport support);

    /// <summary>What carries a dipole at a place [m], without its load where that is cheaper.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The place is not in source tissue.</exception>
    public virtual DipoleSupport SupportAt(Vec3 position)
    {
        Span<int> nodes = stackalloc int[MostNodes];
        Span<Vec3> weights = stackalloc Vec3[MostNodes];
        Place(position, nodes, weights, out DipoleSupport support);
        return support;
    }
}
