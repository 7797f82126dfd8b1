using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>How much of the skull's inner surface has less than two voxels of bone behind it.</summary>
/// <param name="Thin">Voxels of the inner surface behind which the skull is thin.</param>
/// <param name="Surface">Voxels of the inner surface: those inside the skull that share a face with bone.</param>
/// <param name="Place">Centre of the largest thin place [m]; without unit where there is none.</param>
/// <remarks>
/// Thin: a voxel of scalp or air lies within two and a half voxel edges (centre to centre) of a voxel inside. Behind n straight layers of bone it is n + 1 edges away, behind a slanting
/// wall of n diagonal layers (n + 1)/sqrt 2.
/// </remarks>
public sealed record SkullThickness(int Thin, int Surface, Vec3 Place)
{
    /// <summary>Distance [voxel edges], without unit, within which the skull counts as thin.</summary>
    public const double Reach = 2.5;

    /// <summary>Share of the inner surface that is thin.</summary>
    public double Share => Surface == 0 ? 0 : Thin / (double)Surface;

    /// <summary>Measures a head.</summary>
    /// <param name="volume">The head with its margin.</param>
    /// <param name="touched">Faces of the file's volume that the head touches.</param>
    public static SkullThickness Of(TissueVolume volume, IReadOnlyList<TouchedFace> touched)
    {
        VoxelGrid grid = volume.Grid;
        var known = new KnownBox(grid, touched);
        (int I, int J, int K)[] near = Near(grid);
        bool[] inside = [.. volume.Tissues.Select(t => VoxelHead.IsInSkull(t.Kind))];
        bool[] outside = [.. volume.Tissues.Select(t => t.Kind is TissueKind.Scalp or TissueKind.Air)];
        bool[] bone = [.. volume.Tissues.Select(t => t.Kind == TissueKind.Skull)];
        int surface = 0;
        HashSet<int> thin = [];
        ReadOnlySpan<byte> cells = volume.Cells;
        int stepY = grid.Nx, stepZ = grid.Nx * grid.Ny;
        for (int k = HeadCrop.Margin; k < grid.Nz - HeadCrop.Margin; k++)
        {
            for (int j = HeadCrop.Margin; j < grid.Ny - HeadCrop.Margin; j++)
            {
                for (int i = HeadCrop.Margin; i < grid.Nx - HeadCrop.Margin; i++)
                {
                    int at = grid.Index(i, j, k);
                    if (!inside[cells[at]]
                        || !(bone[cells[at - 1]] || bone[cells[at + 1]] || bone[cells[at - stepY]] || bone[cells[at + stepY]] || bone[cells[at - stepZ]] || bone[cells[at + stepZ]]))
                    {
                        continue;
                    }

                    surface++;
                    foreach ((int di, int dj, int dk) in near)
                    {
                        if (known.Holds((i + di, j + dj, k + dk)) && outside[cells[grid.Index(i + di, j + dj, k + dk)]])
                        {
                            thin.Add(at);
                            break;
                        }
                    }
                }
            }
        }

        Vec3 place = thin.Count == 0 ? Vec3.Zero : ConnectedVoxels.Find(grid, thin.Contains, corners: true)[0].Centre;
        return new(thin.Count, surface, place);
    }

    /// <summary>Steps to the voxels within reach, by distance in the world.</summary>
    private static (int I, int J, int K)[] Near(VoxelGrid grid)
    {
        double reach = Reach * Math.Cbrt(grid.VoxelVolume) * (1 - 1e-9);
        int most = (int)Math.Ceiling(reach / Enumerable.Range(0, 3).Min(axis => grid.ToWorld.Column(axis).Norm));
        List<(int, int, int)> near = [];
        for (int k = -most; k <= most; k++)
        {
            for (int j = -most; j <= most; j++)
            {
                for (int i = -most; i <= most; i++)
                {
                    double away = grid.ToWorld.ApplyLinear(new(i, j, k)).Norm;
                    if (away > 0 && away < reach)
                    {
                        near.Add((i, j, k));
                    }
                }
            }
        }

        return [.. near];
    }
}
