using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels.Phantom;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Tests.References;

namespace DeepSourceCheck.Tests.Support;

/// <summary>What must hold of the phantom at every voxel size and age.</summary>
internal static class PhantomClaims
{
    /// <summary>Least share of a library region in grey and white.</summary>
    private const double LibraryShare = 0.9;

    /// <summary>Volumes [mL] by label.</summary>
    public static double[] Volumes(PhantomHead head)
    {
        double[] volumes = new double[PhantomHead.Fontanelle + 1];
        foreach (byte label in head.Labels)
        {
            volumes[label] += 1e6 * head.Grid.VoxelVolume;
        }

        return volumes;
    }

    /// <summary>Volume [mL] of a region.</summary>
    public static double Volume(PhantomHead head, string region)
    {
        int label = PhantomHead.Regions.Single(r => r.Name == region).Label, count = 0;
        foreach (byte l in head.RegionLabels)
        {
            count += l == label ? 1 : 0;
        }

        return 1e6 * head.Grid.VoxelVolume * count;
    }

    public static void AdultVolumes(PhantomHead head)
    {
        double[] v = Volumes(head);
        double brain = v[PhantomHead.Grey] + v[PhantomHead.White];

        // Adult MRI norms, from memory: brain 1,100 to 1,500 mL, grey 50 to 60 % of it, inside of the skull 1,200 to 1,800 mL, of which fluid 10 to 25 %.
        Assert.InRange(brain, 1100, 1500);
        Assert.InRange(v[PhantomHead.Grey] / brain, 0.50, 0.60);
        Assert.InRange(brain + v[PhantomHead.Csf], 1200, 1800);
        Assert.InRange(v[PhantomHead.Csf] / (brain + v[PhantomHead.Csf]), 0.10, 0.25);

        // Published adult volumes of one side in mL, the project's facts, section E (sources there). A tenth more each way for what voxels of 2 mm make of a shape.
        foreach ((string region, double low, double high) in new[]
        {
            ("thalamus-left", 5.5, 8), ("caudate-left", 3.3, 4.7), ("putamen-left", 4.3, 5.5), ("pallidum-left", 1.1, 1.9), ("hippocampus-left", 2.8, 4.3), ("amygdala-left", 1.1, 1.9),
            ("accumbens-left", 0.4, 0.7), ("midbrain", 5, 7), ("pons", 12, 17), ("medulla", 4, 5.5), ("cerebellum-left", 50, 75), ("cerebellum-right", 50, 75),
            ("inferior-colliculus-left", 0.065, 0.15), ("substantia-nigra-right", 0.4, 0.6), ("red-nucleus-left", 0.25, 0.33), ("lateral-geniculate-left", 0.052, 0.105),
        })
        {
            Assert.InRange(Volume(head, region), 0.9 * low, 1.1 * high);
        }
    }

    public static void LibraryRegions(PhantomHead head)
    {
        double factor = head.Kind == PhantomKind.Neonate ? 49.0 / 78.0 : 1;
        foreach (LibraryRegion region in RegionLibrary.Load().Regions.Where(r => r.Shape is not null))
        {
            Ellipsoid shape = region.Scaled(factor, PhantomHead.ScalingCentre).Shape!;
            double step = Math.Min(shape.SemiAxes.X, Math.Min(shape.SemiAxes.Y, shape.SemiAxes.Z)) / 6;
            Vec3 half = shape.HalfExtent;
            int all = 0, within = 0;
            for (double x = -half.X; x <= half.X; x += step)
            {
                for (double y = -half.Y; y <= half.Y; y += step)
                {
                    for (double z = -half.Z; z <= half.Z; z += step)
                    {
                        Vec3 p = shape.Centre + new Vec3(x, y, z);
                        if (shape.Contains(p))
                        {
                            all++;
                            within += head.Labels[head.Grid.IndexAt(p)] is PhantomHead.Grey or PhantomHead.White ? 1 : 0;
                        }
                    }
                }
            }

            Assert.True(within >= LibraryShare * all, $"{region.Name}: {100.0 * within / all:F1} % in grey and white");
        }
    }

    /// <summary>Fluid and brain meet air and soft tissue, corners included, nowhere but in the gap under the skull's base.</summary>
    public static void NoLeak(PhantomHead head)
    {
        double scale = head.Kind == PhantomKind.Neonate ? 49.0 / 78.0 : 1, edge = Math.Cbrt(head.Grid.VoxelVolume);
        VoxelGrid grid = head.Grid;
        int contacts = 0;
        for (int n = 0; n < head.Labels.Length; n++)
        {
            if (head.Labels[n] is not (PhantomHead.Csf or PhantomHead.Grey or PhantomHead.White))
            {
                continue;
            }

            (int i, int j, int k) = grid.Voxel(n);
            for (int c = 0; c < 27; c++)
            {
                (int di, int dj, int dk) = (i + c % 3 - 1, j + c / 3 % 3 - 1, k + c / 9 - 1);
                if (dk >= 0 && head.Labels[grid.Index(di, dj, dk)] <= PhantomHead.Scalp)
                {
                    contacts++;

                    // Fluid, not brain, and around the canal between skull base and first vertebra, in millimetres of an adult.
                    Vec3 mm = 1000 * (grid.Centre(i, j, k) - PhantomHead.ScalingCentre) / scale + 1000 * PhantomHead.ScalingCentre;
                    double slack = 1000 * edge / scale;
                    Assert.True(head.Labels[n] == PhantomHead.Csf && mm.Z < -70 + slack && mm.Z > -86 - slack && Math.Abs(mm.X) < 18 && mm.Y is < -25 and > -62, $"leak at {mm}");
                }
            }
        }

        Assert.True(contacts > 0, "the base is closed");
    }

    /// <summary>Nearly all of a tissue is one piece; fluid includes the ventricles, which narrow ways join.</summary>
    public static void HangTogether(PhantomHead head)
    {
        List<List<int>> pieces = PlainPieces.Of(head.Labels, head.Grid).Voxels;
        foreach ((byte label, double share) in new[]
        {
            (PhantomHead.Scalp, 0.999), (PhantomHead.CompactBone, 0.9), (PhantomHead.Csf, 0.95), (PhantomHead.Grey, 0.98), (PhantomHead.White, 0.95),
        })
        {
            int[] sizes = [.. pieces.Where(p => head.Labels[p[0]] == label).Select(p => p.Count)];
            Assert.True(sizes.Max() >= share * sizes.Sum(), $"label {label}: {sizes.Max()} of {sizes.Sum()} voxels in one piece");
        }

        // Outside air is one piece; what other air there is are sinuses and the nose, a few pieces and not crumbs.
        Assert.InRange(pieces.Count(p => head.Labels[p[0]] == PhantomHead.Air), 2, 8);
    }

    public static void FreeFaces(PhantomHead head)
    {
        VoxelGrid g = head.Grid;
        for (int n = 0; n < head.Labels.Length; n++)
        {
            (int i, int j, int k) = g.Voxel(n);
            Assert.True(head.Labels[n] == PhantomHead.Air || (i > 0 && i < g.Nx - 1 && j > 0 && j < g.Ny - 1 && k < g.Nz - 1));
        }

        Assert.True(head.Labels[..(g.Nx * g.Ny)].ContainsAnyExcept(PhantomHead.Air), "there is no neck");
    }

    /// <summary>Bone [m] that rays meet on their way out over the upper head, one value a ray of a golden-angle lattice.</summary>
    public static double[] VaultThickness(PhantomHead head)
    {
        double step = 0.1 * Math.Cbrt(head.Grid.VoxelVolume);
        List<double> thickness = [];
        for (int n = 0; n < 2000; n++)
        {
            double z = 1 - (n + 0.5) / 2000 * 1.15, rho = Math.Sqrt(1 - z * z), turn = Math.PI * (3 - Math.Sqrt(5)) * n;
            Vec3 u = new(rho * Math.Cos(turn), rho * Math.Sin(turn), z);
            int bone = 0;
            for (double r = 0; r < 0.12; r += step)
            {
                int at = head.Grid.IndexAt(PhantomHead.ScalingCentre + r * u);
                bone += at >= 0 && head.Labels[at] is (PhantomHead.CompactBone or PhantomHead.SpongyBone) ? 1 : 0;
            }

            thickness.Add(bone * step);
        }

        return [.. thickness];
    }
}
