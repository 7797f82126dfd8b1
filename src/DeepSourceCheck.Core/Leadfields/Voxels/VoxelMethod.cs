using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

using static System.FormattableString;

namespace DeepSourceCheck.Core.Leadfields.Voxels;

/// <summary>What is said of the finite elements behind a figure.</summary>
internal static class VoxelMethod
{
    private const string Rows = "transfer rows of trilinear finite elements, Weinstein et al. 2000, Gencer and Acar 2004";

    /// <summary>Elements, grid, load of the dipole, solve.</summary>
    /// <param name="load">Load of the dipoles, and with it the mesh.</param>
    /// <param name="figures">How the rows were solved for; null where that is not known.</param>
    public static LeadfieldMethod Of(DipoleLoad load, RowFigures? figures)
    {
        HexMesh mesh = load.Tissue.Mesh;
        VoxelGrid grid = mesh.Volume.Grid;
        int elements = grid.Count - mesh.Volume.Cells.Count((byte)0);
        string nodes = mesh.IsAdapted ? "nodes at borders of tissues moved by a third of a voxel (Wolters et al. 2007)" : "nodes at the corners of the voxels";
        string dipole = load is MonopoleLoad
            ? "a dipole is a set of monopoles on the nodes around it (Saint-Venant's principle: Buchner et al. 1997)"
            : "a dipole is the gradient of the shape functions of its element (partial integration: Yan et al. 1991)";
        string solve = figures is { } f
            ? Invariant($"; one row a sensor, solved by conjugate gradients with multigrid to a relative residual of at most {f.LargestResidual:0.0e-0} in at most {f.MostIterations} iterations") : "";
        return new(
            $"EEG leadfield: {Rows}",
            $"MEG leadfield: field of the dipole itself (Biot-Savart) and {Rows}",
            Invariant($"finite elements on {elements:#,0} voxels of {Edges(grid)} mm, {nodes}; {dipole}{solve}"));
    }

    /// <summary>Edges of a voxel in mm, once where all are alike.</summary>
    public static string Edges(VoxelGrid grid)
    {
        string[] edges = [.. Enumerable.Range(0, 3).Select(axis => Invariant($"{Si.ToMm(grid.ToWorld.Column(axis).Norm):0.##}"))];
        return edges.Distinct().Count() == 1 ? edges[0] : string.Join(" x ", edges);
    }
}
