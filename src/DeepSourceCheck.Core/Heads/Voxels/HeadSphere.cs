using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>The sphere that stands for a real head where one is asked for: whose centre elevations and depths are seen from, and to compare with spherical heads.</summary>
/// <param name="Sphere">The sphere [m].</param>
/// <param name="IsInnerSkull">True where it was fitted to the inside of the skull, false where the volume has no skull and it was fitted to the scalp.</param>
public sealed record HeadSphere(FittedSphere Sphere, bool IsInnerSkull)
{
    private const int LeastFaces = 100;

    /// <summary>Least squares to the upper part of the inner skull: what lies less than 0.6 of its front-back length below its top. Without a skull, of the scalp.</summary>
    /// <param name="volume">Head.</param>
    /// <param name="scalp">Its scalp.</param>
    public static HeadSphere Of(TissueVolume volume, ScalpSurface scalp) => OfSkull(volume) ?? new(FittedSphere.Of(Upper(scalp.Samples.ToArray())), false);

    /// <summary>The same from the inner skull alone; null where the volume has none to speak of, fewer than 100 faces between bone and what lies within.</summary>
    /// <param name="volume">Head.</param>
    public static HeadSphere? OfSkull(TissueVolume volume) => InnerSkull(volume) is { Count: >= LeastFaces } skull ? new(FittedSphere.Of(Upper(skull)), true) : null;

    /// <summary>Centres [m] of the faces between the inside of the skull (fluid, grey, white) and bone.</summary>
    private static List<Vec3> InnerSkull(TissueVolume volume)
    {
        VoxelGrid grid = volume.Grid;
        byte[] side = [.. volume.Tissues.Select(t => t.Kind switch
        {
            TissueKind.Skull => (byte)2,
            TissueKind.Csf or TissueKind.Grey or TissueKind.White => (byte)1,
            _ => (byte)0,
        })];
        List<Vec3> faces = [];
        ReadOnlySpan<byte> cells = volume.Cells;
        int at = 0;
        for (int k = 0; k < grid.Nz; k++)
        {
            for (int j = 0; j < grid.Ny; j++)
            {
                for (int i = 0; i < grid.Nx; i++, at++)
                {
                    int here = side[cells[at]];
                    if (here == 0)
                    {
                        continue;
                    }

                    if (i + 1 < grid.Nx && here + side[cells[at + 1]] == 3)
                    {
                        faces.Add(grid.ToWorld.Apply(new(i + 0.5, j, k)));
                    }

                    if (j + 1 < grid.Ny && here + side[cells[at + grid.Nx]] == 3)
                    {
                        faces.Add(grid.ToWorld.Apply(new(i, j + 0.5, k)));
                    }

                    if (k + 1 < grid.Nz && here + side[cells[at + grid.Nx * grid.Ny]] == 3)
                    {
                        faces.Add(grid.ToWorld.Apply(new(i, j, k + 0.5)));
                    }
                }
            }
        }

        return faces;
    }

    private static List<Vec3> Upper(IReadOnlyList<Vec3> points)
    {
        double top = points.Max(p => p.Z), limit = double.NegativeInfinity;

        // The length of the upper part and its depth follow together: from the whole length down to the length of what is kept.
        List<Vec3> kept = [.. points];
        for (int round = 0; round < 20; round++)
        {
            double next = top - HeadFrame.UpperHead * (kept.Max(p => p.Y) - kept.Min(p => p.Y));
            if (next <= limit)
            {
                break;
            }

            limit = next;
            kept = [.. points.Where(p => p.Z > limit)];
        }

        return kept;
    }
}
