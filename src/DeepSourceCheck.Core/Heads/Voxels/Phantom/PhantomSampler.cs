using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>Samples the phantom's shapes at the centres of voxels, slab by slab.</summary>
internal sealed class PhantomSampler
{
    // The head in millimetres of the adult frame, a margin of air included but below, where the neck is cut.
    private static readonly Vec3 Low = new(-98, -130, -104), High = new(98, 114, 104);

    // Pieces of a tissue below this volume [mm^3 of the adult frame] are debris of sampling.
    private const double SmallestPiece = 160;
    private const int SmallestPieceVoxels = 12;

    private const double ThinnestSkin = 3;

    private readonly double _scale, _voxel;
    private readonly PhantomKind _kind;
    private readonly PhantomSkull _skull;
    private readonly PhantomCortex _cortex;

    /// <param name="kind">Adult or neonate.</param>
    /// <param name="voxel">Edge of a voxel [m].</param>
    public PhantomSampler(PhantomKind kind, double voxel)
    {
        (_kind, _scale) = (kind, kind.Scale());
        _voxel = 1000 * voxel / _scale;

        // Two voxels and a quarter for slanting surfaces, where that leaves a skull; else just what no diagonal step between voxel centres jumps over.
        double thinnest = kind == PhantomKind.Adult && _voxel <= 2 ? 2.25 * _voxel : 1.05 * Math.Sqrt(3) * _voxel;
        ThinnestBone = thinnest * _scale / 1000;
        _skull = new(kind, thinnest, _voxel);
        _cortex = new(Math.Clamp(0.7 * _voxel, 1, 2.1));

        (int low, int high) X = Range(0), Y = Range(1), Z = Range(2);
        Vec3 corner = new(X.low * voxel, Y.low * voxel, Z.low * voxel);
        Grid = new(X.high - X.low + 1, Y.high - Y.low + 1, Z.high - Z.low + 1, new(new(voxel, 0, 0), new(0, voxel, 0), new(0, 0, voxel), corner));

        (int, int) Range(int axis)
        {
            double centre = 1000 * PhantomHead.ScalingCentre[axis];
            double low = centre + _scale * (Low[axis] - centre), high = centre + _scale * (High[axis] - centre);
            return ((int)Math.Floor(low / (1000 * voxel)), (int)Math.Ceiling(high / (1000 * voxel)));
        }
    }

    /// <summary>Where the voxels lie.</summary>
    public VoxelGrid Grid { get; }

    /// <summary>Smallest thickness of cranial bone that is drawn [m].</summary>
    public double ThinnestBone { get; }

    /// <summary>The regions in the order of their labels.</summary>
    public static PhantomRegion[] ListRegions()
    {
        string[] sided = [.. PhantomNuclei.Structures, "cerebellum"];
        string[] names = [.. sided.SelectMany(s => new[] { s + "-left", s + "-right" }), "midbrain", "pons", "medulla"];
        return [.. names.Select((name, n) => new PhantomRegion(n + 1, name))];
    }

    /// <summary>Labels and region labels, first axis fastest.</summary>
    public (byte[] Labels, byte[] Regions) Draw(int threads, CancellationToken cancellation)
    {
        byte[] labels = new byte[Grid.Count], regions = new byte[Grid.Count];
        var options = new ParallelOptions { MaxDegreeOfParallelism = threads, CancellationToken = cancellation };
        Parallel.For(0, Grid.Nz, options, k =>
        {
            for (int j = 0, at = Grid.Index(0, 0, k); j < Grid.Ny; j++)
            {
                for (int i = 0; i < Grid.Nx; i++, at++)
                {
                    (labels[at], regions[at]) = At(AdultFrame(Grid.Centre(i, j, k)));
                }
            }
        });
        LabelPieces.Absorb(labels, Grid, Math.Max(SmallestPieceVoxels, (int)(SmallestPiece / (_voxel * _voxel * _voxel))));
        cancellation.ThrowIfCancellationRequested();
        Seal(labels, options);
        DropLostRegions(labels, regions);
        return (labels, regions);
    }

    private Vec3 AdultFrame(Vec3 world) => 1000 * (PhantomHead.ScalingCentre + (world - PhantomHead.ScalingCentre) / _scale);

    private (byte Label, byte Region) At(Vec3 p)
    {
        if (PhantomSkull.IsFarAbove(p))
        {
            return (PhantomHead.Air, 0);
        }

        double cavity = PhantomSkull.Cavity(p, out double smoothed);
        return cavity <= 0 ? Inside(p, cavity) : (Outside(p, cavity, smoothed), (byte)0);
    }

    private byte Outside(Vec3 p, double cavity, double smoothed)
    {
        if (PhantomSkull.IsFar(p, smoothed))
        {
            return PhantomHead.Air;
        }

        double thickness = _skull.Thickness(p);
        double outer = PhantomSkull.Outer(p, smoothed, thickness);
        if (outer > 0)
        {
            return PhantomHead.Air;
        }

        // Skin covers every bone, the cheek bones too.
        double bone = Math.Max(PhantomSkull.Bone(p, smoothed, thickness), outer + ThinnestSkin);

        return _skull.Air(p, cavity, bone) < 0 ? PhantomHead.Air
            : bone > 0 ? PhantomHead.Scalp
            : _skull.IsFontanelle(p) ? PhantomHead.Fontanelle
            : _skull.IsSpongy(p, cavity, bone) ? PhantomHead.SpongyBone : PhantomHead.CompactBone;
    }

    private (byte Label, byte Region) Inside(Vec3 p, double cavity)
    {
        bool right = p.X >= 0;
        int nucleus = PhantomNuclei.At(p);
        if (nucleus >= 0)
        {
            return (PhantomHead.Grey, (byte)(1 + 2 * nucleus + (right ? 1 : 0)));
        }

        double midline = PhantomMidline.MidlineVentricles(p);
        if (midline <= 0 || PhantomMidline.LateralVentricle(p) <= 0)
        {
            return (PhantomHead.Csf, 0);
        }

        if (PhantomMidline.Callosum(p) <= 0)
        {
            return (PhantomHead.White, 0);
        }

        double side = Math.Abs(p.X);
        if (p.Z < 8 && side < 36 && p.Y is > -70 and < 5 && PhantomMidline.Brainstem(p) is <= 0 and double stem)
        {
            return (PhantomMidline.IsGrey(p, midline, stem) ? PhantomHead.Grey : PhantomHead.White, Brainstem(p));
        }

        if (p.Z < 0 && p.Y < -20 && PhantomCerebellum.Hull(p, cavity) is <= 0 and double hull)
        {
            TissueKind tissue = PhantomCerebellum.At(p, hull);
            byte region = (byte)(1 + 2 * PhantomNuclei.Count + (right ? 1 : 0));
            return tissue == TissueKind.Csf ? (PhantomHead.Csf, (byte)0) : (tissue == TissueKind.Grey ? PhantomHead.Grey : PhantomHead.White, region);
        }

        double pial = _cortex.Pial(p, PhantomCortex.Hull(p, cavity), out double ribbon);
        return (pial > 0 ? PhantomHead.Csf : pial > -ribbon ? PhantomHead.Grey : PhantomHead.White, 0);
    }

    private static byte Brainstem(Vec3 p)
    {
        double midbrain = PhantomMidline.Midbrain(p), pons = PhantomMidline.Pons(p), medulla = PhantomMidline.Medulla(p);
        double least = Math.Min(midbrain, Math.Min(pons, medulla));
        int first = 1 + 2 * (PhantomNuclei.Count + 1);
        return (byte)(least > 0 ? 0 : least == midbrain ? first : least == pons ? first + 1 : first + 2);
    }

    /// <summary>Turns soft tissue and air that touch the inside of the skull, corners included, into bone, except at the opening of the base.</summary>
    private void Seal(byte[] labels, ParallelOptions options)
    {
        byte[] before = [.. labels];
        int nx = Grid.Nx, nxy = Grid.Nx * Grid.Ny;
        Parallel.For(1, Grid.Nz - 1, options, k =>
        {
            for (int j = 1; j < Grid.Ny - 1; j++)
            {
                for (int i = 1, at = Grid.Index(1, j, k); i < nx - 1; i++, at++)
                {
                    if (before[at] <= PhantomHead.Scalp && Touches(before, at, nx, nxy) && AdultFrame(Grid.Centre(i, j, k)) is var p && !IsOpening(p))
                    {
                        labels[at] = _skull.IsFontanelle(p) ? PhantomHead.Fontanelle : PhantomHead.CompactBone;
                    }
                }
            }
        });
    }

    private static bool Touches(byte[] labels, int at, int nx, int nxy)
    {
        for (int dz = -nxy; dz <= nxy; dz += nxy)
        {
            for (int dy = -nx; dy <= nx; dy += nx)
            {
                int n = at + dz + dy;
                if (IsInside(labels[n - 1]) || IsInside(labels[n]) || IsInside(labels[n + 1]))
                {
                    return true;
                }
            }
        }

        return false;
    }

    private static bool IsInside(byte label) => label is PhantomHead.Csf or PhantomHead.Grey or PhantomHead.White;

    /// <summary>The gap below the skull's base where the canal's fluid meets the soft tissue of the neck.</summary>
    private static bool IsOpening(Vec3 p) => p.Z is < -70 and > -86 && Math.Abs(p.X) < 26 && p.Y is < -18 and > -72;

    private static void DropLostRegions(byte[] labels, byte[] regions)
    {
        for (int n = 0; n < labels.Length; n++)
        {
            if (regions[n] != 0 && labels[n] < PhantomHead.Grey)
            {
                regions[n] = 0;
            }
        }
    }
}
