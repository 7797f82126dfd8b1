namespace DeepSourceCheck.Core.Geometry;

/// <summary>Smooths a field of voxels a little, by passes of the weights 1/4, 1/2, 1/4 along the axes: for deviations about an edge of a voxel, where running means are too coarse.</summary>
/// <remarks>A pass has the variance of half a squared edge. Beyond the grid the outermost value goes on. The result does not depend on the number of threads.</remarks>
public static class BinomialBlur
{
    /// <summary>Smooths in place, to about a standard deviation, by one pass along each axis at least.</summary>
    /// <param name="grid">Where the voxels lie.</param>
    /// <param name="values">One finite value a voxel, first axis fastest; any unit. Overwritten.</param>
    /// <param name="deviation">Standard deviation [m]; each axis takes the nearest that whole passes allow.</param>
    public static void Smooth(VoxelGrid grid, float[] values, double deviation)
    {
        int nx = grid.Nx, ny = grid.Ny, nz = grid.Nz;
        Along(values, Passes(grid, 0, deviation), nx, 1, ny, nx, nz, nx * ny);
        Along(values, Passes(grid, 1, deviation), ny, nx, nx, 1, nz, nx * ny);
        Along(values, Passes(grid, 2, deviation), nz, nx * ny, nx, 1, ny, nx);
    }

    private static int Passes(VoxelGrid grid, int axis, double deviation)
    {
        double edges = deviation / grid.ToWorld.Column(axis).Norm;
        return Math.Max(1, (int)Math.Round(2 * edges * edges));
    }

    private static void Along(float[] values, int passes, int count, int step, int inner, int innerStep, int outer, int outerStep) => Parallel.For(0, outer, o =>
    {
        for (int n = 0; n < inner; n++)
        {
            int first = o * outerStep + n * innerStep;
            for (int pass = 0; pass < passes; pass++)
            {
                float before = values[first];
                for (int p = 0, at = first; p < count; p++, at += step)
                {
                    float here = values[at], after = p + 1 < count ? values[at + step] : here;
                    values[at] = (before + 2 * here + after) / 4;
                    before = here;
                }
            }
        }
    });
}
