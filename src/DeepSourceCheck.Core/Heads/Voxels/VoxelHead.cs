using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Heads.Voxels;

// VoxelHead.cs - what a labelled head knows about places.
//   Depth below the scalp: D(p) - h/2, D the exact Euclidean distance to the nearest voxel of the outside air, h the cube root of a voxel's volume: the surface lies half a
//   voxel before the first air centre; where the file cuts the neck there is none. Depth below the inner skull: likewise from the nearest voxel of bone. Both are trilinear between voxel centres and right to about half
//   a voxel.
//   Outward: away from the centre of the sphere fitted to the inner skull (HeadSphere), as in a spherical head, so that a deep source has the same radius in both. The normal of the nearest
//   bone would not do: from the thalamus it points at the base of the skull. Without a skull the sphere is fitted to the scalp.
//   Normal of the inner skull: minus the gradient of the distance to bone, smoothed to a standard deviation of 4 mm, so that it does not show the steps of the voxels: that of the bone nearest
//   to the point. The cortex is compared against it.
//   Normal of the cortex: minus the gradient of an indicator, +1 in white matter, 0 in grey, -1 in all that lies beyond, smoothed to 1.5 mm (0.7 of a voxel where that is more): from white matter
//   through the cortex to its surface. The two banks of a closed sulcus are told apart by the white matter behind each, with or without fluid between them. On a sheet folded by a formula (period 24 mm, 5 mm high) normals err by 2 degrees in the median
//   with voxels of 1 mm and by 4 with 2 mm; wider smoothing flattens the folds, less shows the voxels.

/// <summary>A head from a label volume.</summary>
/// <remarks>Immutable; the distances are computed when they are first asked for. Safe for any number of threads.</remarks>
public sealed class VoxelHead : IHead
{
    /// <summary>Standard deviation to which the distance to bone is smoothed for normals [m].</summary>
    public const double NormalSmoothing = 0.004;

    /// <summary>Standard deviation to which the indicator of the cortex is smoothed [m]; 0.7 of a voxel's edge where that is more.</summary>
    public const double CortexSmoothing = 0.0015;

    // Below this slope (1 where there is one nearest bone) the distance has a ridge or a plateau and no direction.
    private const double LeastSlope = 0.02;

    // An indicator that changes by less than a twentieth of its range over two standard deviations: grey matter far from both borders, or between like ones.
    private const double LeastChange = 0.1;

    private readonly string?[] _refusals;
    private readonly double _halfVoxel;
    private readonly Lazy<ScalarField> _toAir, _toBone, _smoothed, _toHead, _cortex;
    private readonly Lazy<HeadSphere> _sphere;
    private readonly double _cortexSmoothing;

    /// <param name="name">How the head is named in results.</param>
    /// <param name="volume">Its tissues; the outermost layer of voxels must be air.</param>
    /// <param name="touched">Faces of the file's volume that cut the head: no scalp lies there. Null: none.</param>
    /// <exception cref="ArgumentException">A voxel at a face of the volume is not air.</exception>
    public VoxelHead(string name, TissueVolume volume, IReadOnlyList<TouchedFace>? touched = null)
    {
        if (!HeadCrop.HasMargin(volume))
        {
            throw new ArgumentException("The head reaches the face of its volume; a margin of air is needed.", nameof(volume));
        }

        (Name, Volume, Touched) = (name, volume, touched ?? []);
        VoxelGrid grid = volume.Grid;
        _halfVoxel = Math.Cbrt(grid.VoxelVolume) / 2;
        _refusals = [.. volume.Tissues.Select(t => IsSource(t.Kind) ? null : $"in {t.Name}, where no source stands")];
        _toAir = new(() =>
        {
            bool[] outside = OutsideAir(volume, Touched);
            return new(grid, DistanceTransform.ToSet(grid, at => outside[at]));
        });
        _toBone = new(() =>
        {
            bool[] bone = [.. volume.Tissues.Select(t => t.Kind == TissueKind.Skull)];
            return new(grid, DistanceTransform.ToSet(grid, at => bone[volume.Cells[at]]));
        });
        _smoothed = new(() =>
        {
            bool[] bone = [.. volume.Tissues.Select(t => t.Kind == TissueKind.Skull)];
            float[] distance = DistanceTransform.ToSet(grid, at => bone[volume.Cells[at]]);
            BoxBlur.Smooth(grid, distance, NormalSmoothing);
            return new(grid, distance);
        });
        _toHead = new(() => new(grid, DistanceTransform.ToSet(grid, at => volume.Cells[at] != 0)));
        _cortexSmoothing = Math.Max(CortexSmoothing, Enumerable.Range(0, 3).Max(axis => grid.ToWorld.Column(axis).Norm) / Math.Sqrt(2));
        _cortex = new(() =>
        {
            float[] side = [.. volume.Tissues.Select(t => t.Kind switch { TissueKind.White => 1f, TissueKind.Grey => 0f, _ => -1f })];
            float[] indicator = Array.ConvertAll(volume.Cells.ToArray(), cell => side[cell]);
            BinomialBlur.Smooth(grid, indicator, CortexSmoothing);
            return new(grid, indicator);
        });
        _sphere = new(() =>
        {
            if (HeadSphere.OfSkull(volume) is { } skull)
            {
                return skull;
            }

            TissueVolume asInFile = HeadCrop.AsInFile(volume, Touched);
            return HeadSphere.Of(asInFile, ScalpSurface.Of(asInFile));
        });
        HasSkull = Any(TissueKind.Skull);
        KnowsCortex = Any(TissueKind.Grey) && Any(TissueKind.White);
    }

    /// <inheritdoc/>
    public string Name { get; }

    /// <summary>Its tissues.</summary>
    public TissueVolume Volume { get; }

    /// <summary>Faces of the file's volume that cut the head.</summary>
    public IReadOnlyList<TouchedFace> Touched { get; }

    /// <summary>True where a voxel is bone: without bone there is no depth below the skull and no normal of it.</summary>
    public bool HasSkull { get; }

    /// <summary>True where grey and white matter have labels of their own: only then is it known which way the cortex faces.</summary>
    public bool KnowsCortex { get; }

    /// <summary>The sphere whose centre outward directions are seen from: fitted to the inner skull, or to the scalp where there is no skull.</summary>
    public HeadSphere Sphere => _sphere.Value;

    /// <summary>Whether a source may stand in a tissue: grey and white matter.</summary>
    /// <remarks>Deep nuclei are often labelled white in a segmentation, so white is no ground for refusal; CSF, bone, scalp and air are.</remarks>
    public static bool IsSource(TissueKind kind) => kind is TissueKind.Grey or TissueKind.White;

    /// <summary>Whether a tissue lies within the skull: CSF, grey and white matter.</summary>
    public static bool IsInSkull(TissueKind kind) => kind is TissueKind.Csf or TissueKind.Grey or TissueKind.White;

    /// <inheritdoc/>
    public string? WhyRefused(Vec3 point)
    {
        int at = Volume.Grid.IndexAt(point);
        int tissue = at < 0 ? 0 : Volume.Cells[at];
        if (_refusals[tissue] is not { } refusal)
        {
            return null;
        }

        return Volume.Tissues[tissue].Kind != TissueKind.Air ? refusal : string.Create(
            CultureInfo.InvariantCulture, $"in air, {Si.ToMm(DistanceToHead(point)):0.0} mm from the nearest tissue of the head");
    }

    /// <inheritdoc/>
    public string? TissueAt(Vec3 point) => Volume.At(point).Name;

    /// <inheritdoc/>
    /// <remarks>Away from the centre of <see cref="Sphere"/>.</remarks>
    public Vec3? Outward(Vec3 point)
    {
        Vec3 offset = point - Sphere.Sphere.Centre;
        double distance = offset.Norm;
        return distance <= LayeredSphere.CentreTolerance ? null : offset / distance;
    }

    /// <summary>Outward unit normal of the inner skull nearest to a point [m]; null without bone, and halfway between two walls.</summary>
    public Vec3? InnerSkullNormal(Vec3 point)
    {
        if (!HasSkull)
        {
            return null;
        }

        Vec3 gradient = _smoothed.Value.Gradient(point, 2 * _halfVoxel);
        return gradient.Norm >= LeastSlope ? -gradient.Unit() : null;
    }

    /// <summary>Unit normal of the cortex at a point [m], from white matter to the surface; null where grey has no label of its own, and in grey matter that has no white on one side alone.</summary>
    public Vec3? CorticalNormal(Vec3 point)
    {
        if (!KnowsCortex)
        {
            return null;
        }

        Vec3 gradient = _cortex.Value.Gradient(point, 2 * _halfVoxel);
        return gradient.Norm * 2 * _cortexSmoothing >= LeastChange ? -gradient.Unit() : null;
    }

    /// <inheritdoc/>
    public bool IsSymmetryCentre(Vec3 point) => false;

    /// <summary>Radius of <see cref="Sphere"/> [m].</summary>
    public double? Radius => Sphere.Sphere.Radius;

    /// <inheritdoc/>
    public double? Depth(Vec3 point) => Volume.Grid.IndexAt(point) < 0 ? null : _toAir.Value.At(point) - _halfVoxel;

    /// <inheritdoc/>
    public double? DepthBelowInnerSkull(Vec3 point) =>
        HasSkull && IsInSkull(Volume.At(point).Kind) ? Math.Max(0, _toBone.Value.At(point) - _halfVoxel) : null;

    /// <inheritdoc/>
    /// <remarks>Grey voxels, evenly picked; white ones where no voxel is grey.</remarks>
    public IReadOnlyList<Vec3> BackgroundPlaces(int count) => GreyPlaces(count, double.PositiveInfinity);

    /// <summary>Centres of grey voxels [m] down to a depth: every n-th of them in the order of memory, which spreads them evenly over the head. White voxels where none is grey.</summary>
    /// <param name="count">How many are wanted; all of them where there are fewer.</param>
    /// <param name="deepest">Largest depth below the inner skull [m]; without bone every depth is taken.</param>
    public IReadOnlyList<Vec3> GreyPlaces(long count, double deepest)
    {
        long all = GreyVoxels(deepest), wanted = Math.Min(count, all);
        List<Vec3> places = [];
        long seen = 0;
        foreach (int at in Grey(deepest))
        {
            // Place k of the wanted ones is voxel floor((k + 1/2) all / wanted).
            if (places.Count < wanted && seen == (2L * places.Count + 1) * all / (2 * wanted))
            {
                (int i, int j, int k) = Volume.Grid.Voxel(at);
                places.Add(Volume.Grid.Centre(i, j, k));
            }

            seen++;
        }

        return places;
    }

    /// <summary>Number of the voxels that <see cref="GreyPlaces"/> picks from.</summary>
    /// <param name="deepest">Largest depth below the inner skull [m].</param>
    public long GreyVoxels(double deepest) => Grey(deepest).LongCount();

    private IEnumerable<int> Grey(double deepest)
    {
        TissueKind kind = Any(TissueKind.Grey) ? TissueKind.Grey : TissueKind.White;
        bool[] chosen = [.. Volume.Tissues.Select(t => t.Kind == kind)];
        bool every = double.IsPositiveInfinity(deepest) || !HasSkull;
        ScalarField? bone = every ? null : _toBone.Value;
        for (int at = 0; at < Volume.Grid.Count; at++)
        {
            if (chosen[Volume.Cells[at]] && (bone is null || bone[at] - _halfVoxel <= deepest))
            {
                yield return at;
            }
        }
    }

    private bool Any(TissueKind kind)
    {
        for (int tissue = 0; tissue < Volume.Tissues.Count; tissue++)
        {
            if (Volume.Tissues[tissue].Kind == kind && Volume.Cells.Contains((byte)tissue))
            {
                return true;
            }
        }

        return false;
    }

    /// <summary>Distance [m] to the nearest voxel that is not air, less half a voxel; beyond the volume at most as far as over its nearest face.</summary>
    private double DistanceToHead(Vec3 point)
    {
        VoxelGrid grid = Volume.Grid;
        Vec3 v = grid.ToWorld.Inverse().Apply(point);
        Vec3 inside = grid.ToWorld.Apply(new(Math.Clamp(v.X, 0, grid.Nx - 1), Math.Clamp(v.Y, 0, grid.Ny - 1), Math.Clamp(v.Z, 0, grid.Nz - 1)));
        return Math.Max(0, (point - inside).Norm + _toHead.Value.At(inside) - _halfVoxel);
    }

    private static bool[] OutsideAir(TissueVolume volume, IReadOnlyList<TouchedFace> touched)
    {
        VoxelGrid grid = volume.Grid;
        bool[] air = [.. volume.Tissues.Select(t => t.Kind == TissueKind.Air)];
        var outside = new bool[grid.Count];
        var known = new KnownBox(grid, touched);

        // The margin makes one piece of all air that is open to the outside, and it holds the first voxel. Where the file cuts the head, the margin is made up.
        VoxelPiece piece = ConnectedVoxels.Find(grid, at => air[volume.Cells[at]], corners: false).First(p => p.Runs[0].Start == 0);
        foreach ((int start, int length) in piece.Runs)
        {
            for (int at = start; at < start + length; at++)
            {
                outside[at] = known.Holds(grid.Voxel(at));
            }
        }

        return outside;
    }
}
