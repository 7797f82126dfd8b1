using System.Text.Json;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Files.Nifti;

namespace DeepSourceCheck.Tests.Support;

/// <summary>Labelled volumes that tests share: shapes of our own, and a real head where it stands beside the checkout.</summary>
internal static class LabelledHeads
{
    /// <summary>Air, scalp, skull, CSF, grey, white: the labels of the real head are 0, 1, 2 and 3, 4, 5, 6.</summary>
    public static IReadOnlyList<Tissue> Tissues { get; } =
    [
        new(0, "air", TissueKind.Air, 0), new(1, "scalp", TissueKind.Scalp, 0.43), new(2, "compact skull", TissueKind.Skull, 0.006), new(3, "spongy skull", TissueKind.Skull, 0.02),
        new(4, "csf", TissueKind.Csf, 1.79), new(5, "grey", TissueKind.Grey, 0.33), new(6, "white", TissueKind.White, 0.14),
    ];

    /// <summary>A volume of cubic voxels around the origin of the world whose voxels take the tissue at their centres.</summary>
    /// <param name="voxel">Edge [m].</param>
    /// <param name="reach">Half the volume's extent [m].</param>
    /// <param name="tissue">Index of the tissue at a place [m].</param>
    /// <param name="turned">Rotation of the voxel axes against the world.</param>
    public static TissueVolume Of(double voxel, double reach, Func<Vec3, int> tissue, Rotation? turned = null)
    {
        int n = (int)Math.Ceiling(2 * reach / voxel);
        Rotation r = turned ?? Rotation.Identity;
        Affine toWorld = new(voxel * r.Row0, voxel * r.Row1, voxel * r.Row2, Vec3.Zero);
        toWorld = toWorld with { Offset = -toWorld.ApplyLinear(new((n - 1) / 2.0, (n - 1) / 2.0, (n - 1) / 2.0)) };
        VoxelGrid grid = new(n, n, n, toWorld);
        byte[] cells = new byte[grid.Count];
        for (int at = 0; at < cells.Length; at++)
        {
            (int i, int j, int k) = grid.Voxel(at);
            cells[at] = (byte)tissue(grid.Centre(i, j, k));
        }

        return new(grid, cells, Tissues);
    }

    /// <summary>Concentric layers as tissues 1 (scalp), 2 (skull), 4 (CSF) and 5 (grey).</summary>
    public static TissueVolume Sphere(double voxel, Vec3 centre, double scalp = 0.092, double skull = 0.086, double csf = 0.080, double brain = 0.078, Rotation? turned = null) =>
        Of(voxel, scalp + 0.010 + Math.Max(Math.Abs(centre.X), Math.Max(Math.Abs(centre.Y), Math.Abs(centre.Z))), p =>
        {
            double r = (p - centre).Norm;
            return r < brain ? 5 : r < csf ? 4 : r < skull ? 2 : r < scalp ? 1 : 0;
        }, turned);

    /// <summary>The real head of the reference cases, or null where it does not stand beside the checkout.</summary>
    public static string? RealHead(string file) =>
        RealHeadFactAttribute.Sites is { } sites && Path.Combine(Path.GetDirectoryName(sites)!, file) is var path && File.Exists(path) ? path : null;

    /// <summary>The labelled volume of the real head.</summary>
    public static TissueVolume ReadReal(string file)
    {
        ValueVolume volume = NiftiReader.Read(RealHead(file)!, file).Volume;
        byte[] cells = new byte[volume.Grid.Count];
        double[] values = new double[cells.Length];
        volume.Values.CopyTo(0, values);
        for (int n = 0; n < cells.Length; n++)
        {
            cells[n] = (byte)values[n];
        }

        return new(volume.Grid, cells, Tissues);
    }

    /// <summary>Its landmarks [m] as found by others, by name.</summary>
    public static Dictionary<string, Vec3> RealLandmarks() => Points("landmarks.json", "landmarks");

    /// <summary>Its 10-20 sites [m], by name.</summary>
    public static Dictionary<string, Vec3> RealSites() => Points("tenTwenty.json", "sites");

    private static Dictionary<string, Vec3> Points(string file, string list)
    {
        using JsonDocument document = JsonDocument.Parse(File.ReadAllText(RealHead(file)!));
        return document.RootElement.GetProperty(list).EnumerateObject().ToDictionary(p => p.Name, p =>
        {
            double[] mm = p.Value.GetProperty("mm").Numbers();
            return new Vec3(mm[0], mm[1], mm[2]) / 1000;
        });
    }
}
