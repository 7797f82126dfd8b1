namespace DeepSourceCheck.Core.Geometry;

/// <summary>Solves the few normal equations of the fits in this folder: Gauss elimination with row pivots.</summary>
internal static class NormalEquations
{
    /// <summary>Pivots below this share of the largest entry count as zero.</summary>
    private const double Singular = 1e-12;

    /// <param name="system">n rows of n coefficients and the right side; overwritten.</param>
    /// <returns>The solution, or null where the equations are singular.</returns>
    public static double[]? Solve(double[,] system)
    {
        int n = system.GetLength(0);
        double largest = 0;
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                largest = Math.Max(largest, Math.Abs(system[i, j]));
            }
        }

        for (int column = 0; column < n; column++)
        {
            int pivot = column;
            for (int i = column + 1; i < n; i++)
            {
                pivot = Math.Abs(system[i, column]) > Math.Abs(system[pivot, column]) ? i : pivot;
            }

            if (!(Math.Abs(system[pivot, column]) > Singular * largest))
            {
                return null;
            }

            for (int j = 0; j <= n; j++)
            {
                (system[column, j], system[pivot, j]) = (system[pivot, j], system[column, j]);
            }

            for (int i = 0; i < n; i++)
            {
                double factor = i == column ? 0 : system[i, column] / system[column, column];
                for (int j = column; factor != 0 && j <= n; j++)
                {
                    system[i, j] -= factor * system[column, j];
                }
            }
        }

        return [.. Enumerable.Range(0, n).Select(i => system[i, n] / system[i, i])];
    }
}
