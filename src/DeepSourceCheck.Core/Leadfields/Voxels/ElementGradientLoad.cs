using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

// ElementGradientLoad.cs - partial integration: f_j = int J_p . grad psi_j dx = Q . grad psi_j(x_0), on the eight nodes of the element that holds the dipole.
// Source: [Yan et al. 1991].

/// <summary>A dipole as the gradient of its element's shape functions.</summary>
/// <remarks>
/// On an adapted grid the element is that of source tissue which holds the dipole, or the nearest one where a moved face puts the dipole just outside it.
/// </remarks>
public sealed class ElementGradientLoad : DipoleLoad
{
    private readonly NearestElement _elements;

    /// <param name="tissue">Where dipoles may stand.</param>
    public ElementGradientLoad(SourceTissue tissue)
        : base(tissue) => _elements = new(tissue.Mesh, SourceTissue.Admits);

    /// <inheritdoc/>
    public override int Place(Vec3 position, Span<int> nodes, Span<Vec3> weights, out DipoleSupport support)
    {
        HexMesh mesh = Tissue.Mesh;
        (int i, int j, int k) = mesh.Volume.Grid.Voxel(Tissue.VoxelAt(position));
        Span<Vec3> places = stackalloc Vec3[TrilinearHexahedron.Corners];
        TrilinearHexahedron.Load(mesh, i, j, k, nodes, places);
        (Vec3 natural, double distance) = TrilinearHexahedron.Nearest(places, position);
        if (distance > 0)
        {
            ElementPlace at = _elements.Find(position);
            natural = at.Natural;
            TrilinearHexahedron.Load(mesh, at.I, at.J, at.K, nodes, places);
        }

        TrilinearHexahedron.Gradients(places, natural, weights);
        support = DipoleSupport.Whole;
        return TrilinearHexahedron.Corners;
    }
}
