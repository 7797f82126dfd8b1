using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Tests.Support;

/// <summary>Layered spheres as label volumes, labels 1 (outermost) to 4, centre at the origin: thick enough layers that nothing leaks at 4 mm.</summary>
internal static class SphereVolumes
{
    /// <summary>Outer radii of scalp, skull, csf and brain [m].</summary>
    public static readonly double[] Radii = [0.092, 0.083, 0.071, 0.064];

    /// <summary>Scalp, skull, csf, brain after air.</summary>
    public static readonly Tissue[] Tissues =
    [
        new(0, "air", TissueKind.Air, 0), new(1, "scalp", TissueKind.Scalp, 0.43), new(2, "skull", TissueKind.Skull, 0.01),
        new(3, "csf", TissueKind.Csf, 1.79), new(4, "brain", TissueKind.Grey, 0.33),
    ];

    /// <summary>A volume of cubes.</summary>
    /// <param name="edge">Edge of a voxel [m].</param>
    /// <param name="radii">Outer radii from the outermost in [m]; null: <see cref="Radii"/>.</param>
    public static TissueVolume Of(double edge, double[]? radii = null) => Of(new Vec3(edge, edge, edge), radii);

    /// <summary>A volume of boxes.</summary>
    public static TissueVolume Of(Vec3 edges, double[]? radii = null)
    {
        double[] r = radii ?? Radii;
        (int nx, int ny, int nz) = (Size(r[0], edges.X), Size(r[0], edges.Y), Size(r[0], edges.Z));
        var grid = new VoxelGrid(nx, ny, nz, new(
            new(edges.X, 0, 0), new(0, edges.Y, 0), new(0, 0, edges.Z), new(-(nx - 1) * edges.X / 2, -(ny - 1) * edges.Y / 2, -(nz - 1) * edges.Z / 2)));
        return Filled(grid, p => (byte)r.Count(radius => p.Norm <= radius));
    }

    /// <summary>A volume whose voxels take their tissue from their centre.</summary>
    public static TissueVolume Filled(VoxelGrid grid, Func<Vec3, byte> tissue, Tissue[]? tissues = null)
    {
        var cells = new byte[grid.Count];
        for (int at = 0; at < cells.Length; at++)
        {
            (int i, int j, int k) = grid.Voxel(at);
            cells[at] = tissue(grid.Centre(i, j, k));
        }

        return new(grid, cells, tissues ?? Tissues);
    }

    /// <summary>The same volume with some voxels changed.</summary>
    public static TissueVolume With(this TissueVolume volume, params (Vec3 At, byte Tissue)[] changes)
    {
        byte[] cells = volume.Cells.ToArray();
        foreach ((Vec3 at, byte tissue) in changes)
        {
            cells[volume.Grid.IndexAt(at)] = tissue;
        }

        return new(volume.Grid, cells, volume.Tissues);
    }

    /// <summary>The volume's labels as a NIfTI file.</summary>
    public static byte[] File(this TissueVolume volume) => Bytes(volume.Grid, [.. volume.Cells.ToArray().Select(c => (double)volume.Tissues[c].Label)]).File();

    /// <summary>Values on a grid as NIfTI, one byte each unless said otherwise.</summary>
    public static NiftiBytes Bytes(VoxelGrid grid, double[] values, int dataType = 2, int bitpix = 8)
    {
        Affine mm = grid.ToWorld.ThenScale(1000);
        return new()
        {
            Dim = [3, grid.Nx, grid.Ny, grid.Nz, 1, 1, 1, 1],
            Pixdim = [1, mm.Column(0).Norm, mm.Column(1).Norm, mm.Column(2).Norm, 1, 0, 0, 0],
            Rows = [mm.Row0.X, mm.Row0.Y, mm.Row0.Z, mm.Offset.X, mm.Row1.X, mm.Row1.Y, mm.Row1.Z, mm.Offset.Y, mm.Row2.X, mm.Row2.Y, mm.Row2.Z, mm.Offset.Z],
            DataType = dataType,
            Bitpix = bitpix,
            Values = values,
        };
    }

    /// <summary>The head with its margin and the findings about it.</summary>
    public static HeadFindings Findings(TissueVolume volume)
    {
        CroppedHead head = HeadCrop.Of(volume)!;
        return HeadChecks.Judge(head, HeadPieces.Largest(head.Volume));
    }

    private static int Size(double radius, double edge) => 2 * ((int)Math.Ceiling(radius / edge) + 1);
}
