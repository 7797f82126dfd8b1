using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Heads.Voxels.Phantom;

/// <summary>One region of the phantom's region volume.</summary>
/// <param name="Label">Its label there, without unit.</param>
/// <param name="Name">Name as in the region library, for instance `thalamus-left`.</param>
public sealed record PhantomRegion(int Label, string Name);

/// <summary>An invented head as a label volume, with a second volume of regions that fit it.</summary>
/// <remarks>
/// Drawn from ellipsoids, capsules and smooth noise of stated seeds: no person was measured and no template traced. The same arguments give the same bytes on any number of
/// threads. The frame is that of the region library: x to the right, y to the front, z up, the sphere of the adult presets at (0, -18, 5) mm. Anatomy is plausible, not exact: the head
/// serves to try the program and to compare models, never to plan treatment. Voxel centres lie at whole multiples of the voxel size.
/// </remarks>
public sealed class PhantomHead
{
    /// <summary>Label of air.</summary>
    public const byte Air = 0;

    /// <summary>Label of skin, muscle, fat and all else soft outside the skull.</summary>
    public const byte Scalp = 1;

    /// <summary>Label of compact bone.</summary>
    public const byte CompactBone = 2;

    /// <summary>Label of spongy bone; absent in a neonate.</summary>
    public const byte SpongyBone = 3;

    /// <summary>Label of cerebrospinal fluid.</summary>
    public const byte Csf = 4;

    /// <summary>Label of grey matter.</summary>
    public const byte Grey = 5;

    /// <summary>Label of white matter.</summary>
    public const byte White = 6;

    /// <summary>Label of the membrane that closes the anterior fontanelle; in a neonate alone.</summary>
    public const byte Fontanelle = 7;

    /// <summary>Smallest and largest voxel [m].</summary>
    public static readonly (double Low, double High) VoxelRange = (0.001, 0.003);

    /// <summary>About which point [m] the neonate is scaled: the centre of the spherical presets.</summary>
    public static readonly Vec3 ScalingCentre = new(0, -0.018, 0.005);

    /// <summary>Largest voxel [m] at which the bone still measures two voxels everywhere in an adult.</summary>
    private const double CoarsestTwoVoxelSkull = 0.002;

    private readonly byte[] _labels, _regions;

    private PhantomHead(PhantomKind kind, VoxelGrid grid, byte[] labels, byte[] regions, IReadOnlyList<string> warnings)
    {
        (Kind, Grid, _labels, _regions, Warnings) = (kind, grid, labels, regions, warnings);
        Landmarks = PhantomLandmarks.Of(kind);
    }

    /// <summary>Adult or neonate.</summary>
    public PhantomKind Kind { get; }

    /// <summary>Where the voxels lie.</summary>
    public VoxelGrid Grid { get; }

    /// <summary>One label a voxel, first axis fastest, without unit.</summary>
    public ReadOnlySpan<byte> Labels => _labels;

    /// <summary>One region label a voxel (0: none), first axis fastest, without unit.</summary>
    public ReadOnlySpan<byte> RegionLabels => _regions;

    /// <summary>The regions by label, from 1 on.</summary>
    public static IReadOnlyList<PhantomRegion> Regions { get; } = PhantomSampler.ListRegions();

    /// <summary>Nz, Iz, LPA and RPA on the skin [m], found on the shapes and not on the voxels.</summary>
    public IReadOnlyDictionary<string, Vec3> Landmarks { get; }

    /// <summary>What the voxel size costs, for the user.</summary>
    public IReadOnlyList<string> Warnings { get; }

    /// <summary>Draws the head.</summary>
    /// <param name="kind">Adult or neonate.</param>
    /// <param name="voxel">Edge of a voxel [m], 0.001 to 0.003.</param>
    /// <param name="threads">Most threads, a count; -1 for as many as there are.</param>
    /// <param name="cancellation">Ends the drawing.</param>
    /// <exception cref="ArgumentOutOfRangeException">The voxel size is outside the range.</exception>
    /// <exception cref="OperationCanceledException">It was ended.</exception>
    public static PhantomHead Generate(PhantomKind kind, double voxel, int threads = -1, CancellationToken cancellation = default)
    {
        if (!(voxel >= VoxelRange.Low && voxel <= VoxelRange.High))
        {
            throw new ArgumentOutOfRangeException(nameof(voxel), voxel, "The voxel must measure 1 to 3 mm.");
        }

        var sampler = new PhantomSampler(kind, voxel);
        (byte[] labels, byte[] regions) = sampler.Draw(threads, cancellation);
        List<string> warnings = [];
        if (kind == PhantomKind.Neonate)
        {
            warnings.Add("the newborn's skull, about 1.5 mm in life, is drawn at least "
                + string.Create(System.Globalization.CultureInfo.InvariantCulture, $"{1000 * sampler.ThinnestBone:0.##} mm thick so that voxels of {1000 * voxel:0.##} mm hold it closed; of the fontanelles the anterior one alone is drawn, of sutures none"));
        }
        else if (voxel > CoarsestTwoVoxelSkull)
        {
            warnings.Add(string.Create(System.Globalization.CultureInfo.InvariantCulture,
                $"with voxels of {1000 * voxel:0.##} mm thin parts of the skull measure less than two voxels and are drawn {1000 * sampler.ThinnestBone:0.##} mm thick; choose 2 mm or less for anything but a quick look"));
        }

        string[] lost = [.. Regions.Where(region => Array.IndexOf(regions, (byte)region.Label) < 0).Select(region => region.Name)];
        if (lost.Length > 0)
        {
            warnings.Add($"no voxel of {string.Join(", ", lost)} is left at this voxel size; choose a smaller one");
        }

        return new(kind, sampler.Grid, labels, regions, warnings);
    }

    /// <summary>The head with the conductivities that belong to its kind.</summary>
    public TissueVolume ToTissueVolume()
    {
        IReadOnlyList<Tissue> tissues = PhantomTissues.Of(Kind);
        byte[] index = new byte[Fontanelle + 1];
        for (int n = 0; n < tissues.Count; n++)
        {
            index[tissues[n].Label] = (byte)n;
        }

        byte[] cells = new byte[_labels.Length];
        for (int n = 0; n < cells.Length; n++)
        {
            cells[n] = index[_labels[n]];
        }

        return new(Grid, cells, tissues);
    }
}
