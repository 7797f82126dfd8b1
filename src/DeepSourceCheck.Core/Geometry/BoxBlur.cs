namespace DeepSourceCheck.Core.Geometry;

/// <summary>Smooths a field of voxels by running means along the axes; three passes come close to a Gaussian.</summary>
/// <remarks>
/// A mean over 2 r + 1 voxels of edge h has the variance h^2 ((2 r + 1)^2 - 1) / 12; three passes make it three times that. Beyond the grid the outermost value goes on. Sums run in double
/// precision from the start of each line, so that the result does not depend on the number of threads.
/// </remarks>
public static class BoxBlur
{
    private const int Passes = 3;

    /// <summary>Smooths in place, to about a standard deviation.</summary>
    /// <param name="grid">Where the voxels lie.</param>
    /// <param name="values">One finite value a voxel, first axis fastest; any unit. Overwritten.</param>
    /// <param name="deviation">Standard deviation [m]; each axis takes the nearest that whole voxels allow.</param>
    public static void Smooth(VoxelGrid grid, float[] values, double deviation)
    {
        int nx = grid.Nx, ny = grid.Ny, nz = grid.Nz;
        Along(grid, values, 0, nx, 1, ny, nx, nz, nx * ny, deviation);
        Along(grid, values, 1, ny, nx, nx, 1, nz, nx * ny, deviation);
        Along(grid, values, 2, nz, nx * ny, nx, 1, ny, nx, deviation);
    }

    /// <summary>Half width [voxels] of the running mean for a deviation over an edge, both in the same unit.</summary>
    internal static int Radius(double deviation, double edge) =>
        (int)Math.Round((Math.Sqrt(12 * deviation * deviation / (Passes * edge * edge) + 1) - 1) / 2);

    private static void Along(VoxelGrid grid, float[] values, int axis, int count, int step, int inner, int innerStep, int outer, int outerStep, double deviation)
    {
        int radius = Math.Min(Radius(deviation, grid.ToWorld.Column(axis).Norm), Math.Max(0, count - 1));
        if (radius == 0)
        {
            return;
        }

        Parallel.For(0, outer, () => (Line: new double[count], Next: new double[count]), (o, _, buffer) =>
        {
            for (int n = 0; n < inner; n++)
            {
                int first = o * outerStep + n * innerStep;
                for (int p = 0; p < count; p++)
                {
                    buffer.Line[p] = values[first + p * step];
                }

                for (int pass = 0; pass < Passes; pass++)
                {
                    Mean(buffer.Line, buffer.Next, radius);
                    buffer = (buffer.Next, buffer.Line);
                }

                for (int p = 0; p < count; p++)
                {
                    values[first + p * step] = (float)buffer.Line[p];
                }
            }

            return buffer;
        }, _ => { });
    }

    private static void Mean(double[] line, double[] result, int radius)
    {
        int last = line.Length - 1;
        double sum = line[0] * (radius + 1);
        for (int p = 1; p <= radius; p++)
        {
            sum += line[Math.Min(p, last)];
        }

        for (int p = 0; p <= last; p++)
        {
            result[p] = sum / (2 * radius + 1);
            sum += line[Math.Min(p + radius + 1, last)] - line[Math.Max(p - radius, 0)];
        }
    }
}
