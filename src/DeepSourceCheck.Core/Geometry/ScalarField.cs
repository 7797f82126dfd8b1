namespace DeepSourceCheck.Core.Geometry;

/// <summary>A smooth field between voxel centres: trilinear, constant beyond the outermost centres.</summary>
/// <remarks>The values are kept, not copied. Unit by context.</remarks>
public sealed class ScalarField
{
    private readonly float[] _values;
    private readonly Affine _toIndex;

    /// <param name="grid">Where the voxels lie.</param>
    /// <param name="values">One value a voxel, first axis fastest.</param>
    /// <exception cref="ArgumentException">Lengths differ.</exception>
    public ScalarField(VoxelGrid grid, float[] values)
    {
        if (values.Length != grid.Count)
        {
            throw new ArgumentException($"{values.Length} values for {grid.Count} voxels.", nameof(values));
        }

        (Grid, _values, _toIndex) = (grid, values, grid.ToWorld.Inverse());
    }

    /// <summary>Where the voxels lie.</summary>
    public VoxelGrid Grid { get; }

    /// <summary>Value at the centre of the voxel at a position in memory, unit by context.</summary>
    public double this[int index] => _values[index];

    /// <summary>Value at a point [m], in the field's unit by context.</summary>
    public double At(Vec3 world)
    {
        Vec3 v = _toIndex.Apply(world);
        (int i, double x) = Cell(v.X, Grid.Nx);
        (int j, double y) = Cell(v.Y, Grid.Ny);
        (int k, double z) = Cell(v.Z, Grid.Nz);
        int di = Grid.Nx > 1 ? 1 : 0, dj = Grid.Ny > 1 ? Grid.Nx : 0, dk = Grid.Nz > 1 ? Grid.Nx * Grid.Ny : 0, at = Grid.Index(i, j, k);
        double low = Mix(Mix(_values[at], _values[at + di], x), Mix(_values[at + dj], _values[at + dj + di], x), y);
        double high = Mix(Mix(_values[at + dk], _values[at + dk + di], x), Mix(_values[at + dk + dj], _values[at + dk + dj + di], x), y);
        return Mix(low, high, z);
    }

    /// <summary>Gradient at a point [m] by central differences, in the field's unit by context a metre.</summary>
    /// <param name="world">Place [m].</param>
    /// <param name="step">Half the distance between the two places [m]; at least an edge of a voxel, or the steps of the interpolation show.</param>
    public Vec3 Gradient(Vec3 world, double step) => new Vec3(
        At(world + new Vec3(step, 0, 0)) - At(world - new Vec3(step, 0, 0)),
        At(world + new Vec3(0, step, 0)) - At(world - new Vec3(0, step, 0)),
        At(world + new Vec3(0, 0, step)) - At(world - new Vec3(0, 0, step))) / (2 * step);

    private static (int Cell, double Share) Cell(double index, int count)
    {
        double inside = Math.Clamp(index, 0, count - 1);
        int cell = Math.Min((int)inside, Math.Max(0, count - 2));
        return (cell, inside - cell);
    }

    private static double Mix(double a, double b, double share) => a + share * (b - a);
}
