namespace DeepSourceCheck.Core.Geometry;

/// <summary>A box of voxels in space. Voxel (i, j, k) has its centre at the affine image of (i, j, k); i runs fastest in memory.</summary>
public sealed class VoxelGrid
{
    /// <summary>A point this far (in voxels) below the border between two voxels belongs to the upper one: rounding never decides.</summary>
    public const double BorderTolerance = 1e-9;

    private readonly Affine _toIndex;

    /// <param name="nx">Voxels along the first axis, at least 1.</param>
    /// <param name="ny">Voxels along the second axis, at least 1.</param>
    /// <param name="nz">Voxels along the third axis, at least 1; nx ny nz below 2^31.</param>
    /// <param name="toWorld">Voxel indices to metres; invertible.</param>
    /// <exception cref="ArgumentOutOfRangeException">A size is below 1 or the product too large.</exception>
    /// <exception cref="ArgumentException">The affine map is singular.</exception>
    public VoxelGrid(int nx, int ny, int nz, Affine toWorld)
    {
        ArgumentOutOfRangeException.ThrowIfLessThan(nx, 1);
        ArgumentOutOfRangeException.ThrowIfLessThan(ny, 1);
        ArgumentOutOfRangeException.ThrowIfLessThan(nz, 1);
        ArgumentOutOfRangeException.ThrowIfGreaterThan((double)nx * ny * nz, Array.MaxLength, nameof(nx));
        if (!toWorld.IsInvertible)
        {
            throw new ArgumentException("The map from voxels to metres is singular.", nameof(toWorld));
        }

        (Nx, Ny, Nz, ToWorld) = (nx, ny, nz, toWorld);
        _toIndex = toWorld.Inverse();
    }

    /// <summary>Voxels along the first axis.</summary>
    public int Nx { get; }

    /// <summary>Voxels along the second axis.</summary>
    public int Ny { get; }

    /// <summary>Voxels along the third axis.</summary>
    public int Nz { get; }

    /// <summary>Voxel indices to world [m].</summary>
    public Affine ToWorld { get; }

    /// <summary>Number of voxels.</summary>
    public int Count => Nx * Ny * Nz;

    /// <summary>Volume of one voxel [m^3].</summary>
    public double VoxelVolume => Math.Abs(ToWorld.Determinant);

    /// <summary>Position in memory of voxel (i, j, k), which must lie in the box.</summary>
    public int Index(int i, int j, int k) => i + Nx * (j + Ny * k);

    /// <summary>Indices of the voxel at a position in memory.</summary>
    public (int I, int J, int K) Voxel(int index) => (index % Nx, index / Nx % Ny, index / Nx / Ny);

    /// <summary>Centre of voxel (i, j, k) [m].</summary>
    public Vec3 Centre(int i, int j, int k) => ToWorld.Apply(new(i, j, k));

    /// <summary>Position in memory of the voxel that holds a point [m]: floor(i + 0.5 + 1e-9) along each axis; -1 outside the box.</summary>
    public int IndexAt(Vec3 world)
    {
        Vec3 v = _toIndex.Apply(world);
        double i = Math.Floor(v.X + (0.5 + BorderTolerance));
        double j = Math.Floor(v.Y + (0.5 + BorderTolerance));
        double k = Math.Floor(v.Z + (0.5 + BorderTolerance));

        // Written so that NaN falls outside.
        bool inside = i >= 0 && i < Nx && j >= 0 && j < Ny && k >= 0 && k < Nz;
        return inside ? Index((int)i, (int)j, (int)k) : -1;
    }

    /// <summary>The axis-parallel box [m] around the whole volume, voxels' outer faces included.</summary>
    public (Vec3 Low, Vec3 High) WorldBounds() => WorldBounds((0, 0, 0), (Nx - 1, Ny - 1, Nz - 1));

    /// <summary>The axis-parallel box [m] around the voxels from <paramref name="first"/> to <paramref name="last"/>, outer faces included.</summary>
    public (Vec3 Low, Vec3 High) WorldBounds((int I, int J, int K) first, (int I, int J, int K) last)
    {
        Vec3 middle = ToWorld.Apply(new((first.I + (double)last.I) / 2, (first.J + (double)last.J) / 2, (first.K + (double)last.K) / 2));
        Vec3 half = new((last.I - first.I + 1) / 2.0, (last.J - first.J + 1) / 2.0, (last.K - first.K + 1) / 2.0);
        Vec3 reach = new(Reach(ToWorld.Row0, half), Reach(ToWorld.Row1, half), Reach(ToWorld.Row2, half));
        return (middle - reach, middle + reach);
    }

    private static double Reach(Vec3 row, Vec3 half) => Math.Abs(row.X) * half.X + Math.Abs(row.Y) * half.Y + Math.Abs(row.Z) * half.Z;
}
