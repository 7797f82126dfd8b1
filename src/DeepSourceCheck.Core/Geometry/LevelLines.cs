namespace DeepSourceCheck.Core.Geometry;

// Marching squares. A node is inside where its value is at least the level. Walking counterclockwise around a cell, the line leaves it where inside turns to outside and comes
// back where outside turns to inside; each border of two cells is left by one and entered by the other, so that every line closes. A cell with two opposite corners inside is
// decided by the mean of its corners.

/// <summary>Closed lines along which a field on a plane of nodes takes a level.</summary>
public static class LevelLines
{
    /// <summary>The lines, each closed without repeating its first point, the inside on its left: outer borders run counterclockwise, holes clockwise.</summary>
    /// <param name="values">One value a node, first axis fastest; unit by context.</param>
    /// <param name="nx">Nodes along the first axis.</param>
    /// <param name="ny">Nodes along the second axis.</param>
    /// <param name="level">The level, in the values' unit. Beyond the nodes everything is outside.</param>
    /// <returns>Points in units of the spacing, node (0, 0) at the origin.</returns>
    /// <exception cref="ArgumentException">The lengths differ.</exception>
    public static IReadOnlyList<IReadOnlyList<(double X, double Y)>> Of(ReadOnlySpan<double> values, int nx, int ny, double level)
    {
        if (values.Length != nx * ny)
        {
            throw new ArgumentException($"{values.Length} values for {nx} x {ny} nodes.", nameof(values));
        }

        // A margin of one node that is outside.
        int width = nx + 2, height = ny + 2;
        double[] padded = new double[width * height];
        Array.Fill(padded, level - 1);
        for (int j = 0; j < ny; j++)
        {
            values.Slice(j * nx, nx).CopyTo(padded.AsSpan((j + 1) * width + 1));
        }

        SortedDictionary<int, int> next = [];
        for (int j = 0; j + 1 < height; j++)
        {
            for (int i = 0; i + 1 < width; i++)
            {
                Cell(padded, width, i, j, level, next);
            }
        }

        return Lines(padded, width, level, next);
    }

    // Borders by number: 2 (i + width j) from node (i, j) along the first axis, one more along the second.
    private static void Cell(double[] values, int width, int i, int j, double level, SortedDictionary<int, int> next)
    {
        int at = i + width * j;
        Span<int> corner = [at, at + 1, at + width + 1, at + width];
        Span<int> border = [2 * at, 2 * (at + 1) + 1, 2 * (at + width), 2 * at + 1];
        Span<bool> inside = stackalloc bool[4];
        double mean = 0;
        for (int k = 0; k < 4; k++)
        {
            inside[k] = values[corner[k]] >= level;
            mean += values[corner[k]] / 4;
        }

        for (int k = 0; k < 4; k++)
        {
            if (!inside[k] || inside[(k + 1) & 3])
            {
                continue;
            }

            // Joined corners: on to the next way in; apart: back to the way in by which this corner was reached.
            int step = mean >= level ? 1 : 3, to = k;
            do
            {
                to = (to + step) & 3;
            }
            while (inside[to] || !inside[(to + 1) & 3]);
            next[border[k]] = border[to];
        }
    }

    private static List<IReadOnlyList<(double X, double Y)>> Lines(double[] values, int width, double level, SortedDictionary<int, int> next)
    {
        List<IReadOnlyList<(double X, double Y)>> lines = [];
        while (next.Count > 0)
        {
            int first = next.Keys.First();
            List<(double X, double Y)> line = [];
            for (int border = first; next.Remove(border, out int following); border = following)
            {
                int at = border / 2, other = at + (border % 2 == 0 ? 1 : width);
                double t = (level - values[at]) / (values[other] - values[at]);
                line.Add((at % width - 1 + (border % 2 == 0 ? t : 0), at / width - 1 + (border % 2 == 0 ? 0 : t)));
            }

            lines.Add(line);
        }

        return lines;
    }
}
