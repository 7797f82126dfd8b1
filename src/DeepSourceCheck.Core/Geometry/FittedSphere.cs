namespace DeepSourceCheck.Core.Geometry;

// Algebraic start: |p|^2 = 2 c.p + (R^2 - |c|^2) is linear in c and the bracket. Then Gauss-Newton on the distances d_i = |p_i - c| - R, whose gradient in c is
// minus the unit vector from c to p_i and in R is -1. Both steps solve the same kind of 4 x 4 normal equations, about the points' mean so that they are well scaled.

/// <summary>The sphere nearest to a set of points in the least-squares sense of distance.</summary>
/// <param name="Centre">Centre [m].</param>
/// <param name="Radius">Radius [m].</param>
/// <param name="Rms">Root-mean-square distance of the points from the sphere [m].</param>
public readonly record struct FittedSphere(Vec3 Centre, double Radius, double Rms)
{
    private const int Steps = 50;

    /// <summary>Fits a sphere.</summary>
    /// <param name="points">Points [m]; at least four that are not in one plane.</param>
    /// <exception cref="ArgumentException">Fewer than four points, or all in one plane.</exception>
    public static FittedSphere Of(IReadOnlyList<Vec3> points)
    {
        if (points.Count < 4)
        {
            throw new ArgumentException($"{points.Count} points; a sphere needs four.", nameof(points));
        }

        Vec3 mean = Vec3.Zero;
        foreach (Vec3 p in points)
        {
            mean += p / points.Count;
        }

        double size = Math.Sqrt(points.Average(p => Vec3.Dot(p - mean, p - mean)));
        double[] x = Solve(points, p =>
        {
            Vec3 q = (p - mean) / size;
            return (2 * q, 1.0, Vec3.Dot(q, q));
        });
        Vec3 centre = new(x[0], x[1], x[2]);
        double radius = Math.Sqrt(x[3] + Vec3.Dot(centre, centre));
        for (int step = 0; step < Steps; step++)
        {
            (Vec3 c, double r) = (centre, radius);
            double[] move = Solve(points, p =>
            {
                Vec3 offset = (p - mean) / size - c;
                double distance = offset.Norm;
                return (offset / distance, 1.0, distance - r);
            });
            centre += new Vec3(move[0], move[1], move[2]);
            radius += move[3];
            if (move.Max(Math.Abs) < 1e-13)
            {
                break;
            }
        }

        (Vec3 world, double metres) = (mean + size * centre, size * radius);
        return new(world, metres, Math.Sqrt(points.Average(p => Math.Pow((p - world).Norm - metres, 2))));
    }

    /// <summary>Least squares of rows (a, b) . x = y with three columns a and one column b.</summary>
    private static double[] Solve(IReadOnlyList<Vec3> points, Func<Vec3, (Vec3 A, double B, double Y)> row)
    {
        var normal = new double[4, 5];
        Span<double> v = stackalloc double[5];
        foreach (Vec3 p in points)
        {
            (Vec3 a, v[3], v[4]) = row(p);
            (v[0], v[1], v[2]) = (a.X, a.Y, a.Z);
            for (int i = 0; i < 4; i++)
            {
                for (int j = 0; j < 5; j++)
                {
                    normal[i, j] += v[i] * v[j];
                }
            }
        }

        return NormalEquations.Solve(normal) ?? throw new ArgumentException("The points lie in one plane: no sphere fits.", nameof(points));
    }
}
