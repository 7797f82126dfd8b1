namespace DeepSourceCheck.Core.Geometry;

/// <summary>Closed lines in a plane, given by their corners without repeating the first.</summary>
public static class PlaneLine
{
    /// <summary>Area, positive for a line that runs counterclockwise; square of the unit of the points.</summary>
    public static double Area(IReadOnlyList<(double X, double Y)> line)
    {
        double twice = 0;
        for (int k = 0; k < line.Count; k++)
        {
            (double x0, double y0) = line[k];
            (double x1, double y1) = line[(k + 1) % line.Count];
            twice += x0 * y1 - x1 * y0;
        }

        return twice / 2;
    }

    /// <summary>Each corner replaced by (before + 2 itself + after) / 4, which takes the steps of voxels off a line.</summary>
    /// <param name="line">The line.</param>
    /// <param name="passes">How often, number of.</param>
    public static IReadOnlyList<(double X, double Y)> Smoothed(IReadOnlyList<(double X, double Y)> line, int passes)
    {
        for (int pass = 0; pass < passes; pass++)
        {
            var next = new (double X, double Y)[line.Count];
            for (int k = 0; k < line.Count; k++)
            {
                (double X, double Y) a = line[(k + line.Count - 1) % line.Count], b = line[k], c = line[(k + 1) % line.Count];
                next[k] = ((a.X + 2 * b.X + c.X) / 4, (a.Y + 2 * b.Y + c.Y) / 4);
            }

            line = next;
        }

        return line;
    }

    /// <summary>The line with as few of its corners as keep every corner within a distance (Douglas and Peucker 1973).</summary>
    /// <param name="line">The line.</param>
    /// <param name="tolerance">Largest distance that is given up, in the unit of the points.</param>
    public static IReadOnlyList<(double X, double Y)> Simplified(IReadOnlyList<(double X, double Y)> line, double tolerance)
    {
        if (line.Count < 4)
        {
            return line;
        }

        // Two ends that stay: the first corner and the one farthest from it.
        int far = Enumerable.Range(0, line.Count).MaxBy(k => Square(line[k].X - line[0].X, line[k].Y - line[0].Y));
        bool[] kept = new bool[line.Count + 1];
        (kept[0], kept[far], kept[^1]) = (true, true, true);
        var spans = new Stack<(int From, int To)>([(0, far), (far, line.Count)]);
        while (spans.TryPop(out (int From, int To) span))
        {
            (double X, double Y) a = line[span.From], b = line[span.To % line.Count];
            (int worst, double most) = (-1, tolerance);
            for (int k = span.From + 1; k < span.To; k++)
            {
                if (Distance(line[k], a, b) is double d && d > most)
                {
                    (worst, most) = (k, d);
                }
            }

            if (worst > 0)
            {
                kept[worst] = true;
                spans.Push((span.From, worst));
                spans.Push((worst, span.To));
            }
        }

        return [.. line.Where((_, k) => kept[k])];
    }

    private static double Distance((double X, double Y) p, (double X, double Y) a, (double X, double Y) b)
    {
        double dx = b.X - a.X, dy = b.Y - a.Y, length = Square(dx, dy);
        double t = length > 0 ? Math.Clamp(((p.X - a.X) * dx + (p.Y - a.Y) * dy) / length, 0, 1) : 0;
        return Math.Sqrt(Square(p.X - a.X - t * dx, p.Y - a.Y - t * dy));
    }

    private static double Square(double x, double y) => x * x + y * y;
}
