namespace DeepSourceCheck.Core.Geometry;

// DistanceTransform.cs - distance of every voxel to the nearest voxel of a set, exact.
//   Along one axis of spacing h:  d(p) = min_q [ h^2 (p - q)^2 + f(q) ], the lower envelope of parabolas; an axis after another, f being the result so far
//   (0 on the set, infinite elsewhere before the first). The parabolas at q and v cross at
//   s = ( f(q) - f(v) + h^2 (q^2 - v^2) ) / ( 2 h^2 (q - v) ).
// Source: Felzenszwalb and Huttenlocher 2012, Theory of Computing 8:415 (from memory); time linear in the number of voxels.

/// <summary>Euclidean distance transform of a voxel grid.</summary>
/// <remarks>Exact between voxel centres where the grid's axes are at right angles, whatever the voxel's edges; on a sheared grid the axes are taken as if they were.</remarks>
public static class DistanceTransform
{
    /// <summary>Distance [m] from each voxel's centre to the centre of the nearest voxel of the set; infinite everywhere where the set is empty.</summary>
    /// <param name="grid">Where the voxels lie.</param>
    /// <param name="inSet">Whether the voxel at a position in memory belongs to the set. Called from several threads.</param>
    /// <returns>One distance [m] a voxel, first axis fastest.</returns>
    public static float[] ToSet(VoxelGrid grid, Func<int, bool> inSet)
    {
        var squared = new float[grid.Count];
        int nx = grid.Nx, ny = grid.Ny, nz = grid.Nz;
        double hx = grid.ToWorld.Column(0).Norm, hy = grid.ToWorld.Column(1).Norm, hz = grid.ToWorld.Column(2).Norm;

        // Squares of distances in units of the first spacing keep single precision: whole numbers below 2^24 stay exact on cubic voxels.
        double sy = hy * hy / (hx * hx), sz = hz * hz / (hx * hx);
        Parallel.For(0, nz, () => new Envelope(Math.Max(ny, nx)), (k, _, line) =>
        {
            for (int j = 0; j < ny; j++)
            {
                int row = grid.Index(0, j, k);
                for (int i = 0; i < nx; i++)
                {
                    squared[row + i] = inSet(row + i) ? 0f : float.PositiveInfinity;
                }

                line.Transform(squared, row, 1, nx, 1);
            }

            for (int i = 0; i < nx; i++)
            {
                line.Transform(squared, grid.Index(i, 0, k), nx, ny, sy);
            }

            return line;
        }, _ => { });
        Parallel.For(0, ny, () => new Envelope(nz), (j, _, line) =>
        {
            for (int i = 0; i < nx; i++)
            {
                int first = grid.Index(i, j, 0), step = nx * ny;
                line.Transform(squared, first, step, nz, sz);
                for (int k = 0; k < nz; k++)
                {
                    squared[first + k * step] = (float)(hx * Math.Sqrt(squared[first + k * step]));
                }
            }

            return line;
        }, _ => { });
        return squared;
    }

    /// <summary>The lower envelope of one line's parabolas; its arrays serve line after line.</summary>
    private sealed class Envelope(int longest)
    {
        private readonly double[] _f = new double[longest];
        private readonly int[] _at = new int[longest];
        private readonly double[] _from = new double[longest + 1];

        /// <summary>Replaces f by min over q of scale (p - q)^2 + f(q) along a line of the array.</summary>
        public void Transform(float[] values, int first, int step, int count, double scale)
        {
            int last = -1;
            for (int q = 0; q < count; q++)
            {
                double f = values[first + q * step];
                _f[q] = f;
                if (double.IsPositiveInfinity(f))
                {
                    continue;
                }

                double cross = double.NegativeInfinity;
                while (last >= 0)
                {
                    int v = _at[last];
                    cross = (f - _f[v] + scale * ((double)q * q - (double)v * v)) / (2 * scale * (q - v));
                    if (cross > _from[last])
                    {
                        break;
                    }

                    last--;
                    cross = double.NegativeInfinity;
                }

                last++;
                (_at[last], _from[last]) = (q, cross);
            }

            if (last < 0)
            {
                return;
            }

            _from[last + 1] = double.PositiveInfinity;
            int part = 0;
            for (int p = 0; p < count; p++)
            {
                while (_from[part + 1] < p)
                {
                    part++;
                }

                double away = p - _at[part];
                values[first + p * step] = (float)(scale * away * away + _f[_at[part]]);
            }
        }
    }
}
