namespace DeepSourceCheck.Core.Waveforms;

/// <summary>Extremal points of a smooth function whose extrema a grid separates.</summary>
internal static class Extrema
{
    // Golden section narrows by 0.618 a step: 45 steps are 4e-10 of the grid, where a parabola has changed by less than rounding.
    private const int Steps = 45;

    private static readonly double Golden = (Math.Sqrt(5) - 1) / 2;

    /// <summary>Places [unit of the grid] of the local maxima of |f - its neighbours' level|: minima and maxima alike, and the grid's ends.</summary>
    /// <param name="f">The function.</param>
    /// <param name="grid">Ascending places.</param>
    public static IReadOnlyList<double> Of(Func<double, double> f, IReadOnlyList<double> grid)
    {
        double[] values = [.. grid.Select(f)];
        var places = new List<double> { grid[0], grid[^1] };
        for (int k = 1; k + 1 < values.Length; k++)
        {
            if (values[k] >= values[k - 1] && values[k] >= values[k + 1])
            {
                places.Add(Refined(f, grid[k - 1], grid[k + 1]));
            }
            else if (values[k] <= values[k - 1] && values[k] <= values[k + 1])
            {
                places.Add(Refined(t => -f(t), grid[k - 1], grid[k + 1]));
            }
        }

        return places;
    }

    private static double Refined(Func<double, double> f, double a, double b)
    {
        double x1 = b - Golden * (b - a), x2 = a + Golden * (b - a), f1 = f(x1), f2 = f(x2);
        for (int k = 0; k < Steps; k++)
        {
            if (f1 >= f2)
            {
                (b, x2, f2) = (x2, x1, f1);
                x1 = b - Golden * (b - a);
                f1 = f(x1);
            }
            else
            {
                (a, x1, f1) = (x1, x2, f2);
                x2 = a + Golden * (b - a);
                f2 = f(x2);
            }
        }

        return (a + b) / 2;
    }
}
