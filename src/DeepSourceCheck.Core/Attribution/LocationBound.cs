using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Core.Attribution;

// LocationBound.cs - how well any unbiased method can place one dipole of unknown moment.
//   b = L(r) q + noise, whitened. J_r = [dL/dr_i q] (rows x 3), J_q = L (rows x 3); the moment is projected out:
//     P = J_r - Q Q' J_r, Q an orthonormal basis of the range of L;    Cov(r) >= (N P'P)^-1;    bound = sqrt(trace)
//   The Fisher matrix of all six parameters mixes m and A m and has a condition of 1e14 in SI; P is worked on by QR and never squared.
//   In a sphere MEG's L has rank 2: the silent radial moment drops out of Q (five parameters). Where P has a rank below 3 the place is unbounded.
// Source: [Mosher et al. 1993], the case of one dipole of fixed, unknown moment.

/// <summary>Cramer-Rao bound of one dipole's location, for every moment at one place.</summary>
public sealed class LocationBound
{
    // A moment's column below this share of the largest is rounding of a silent direction (leadfields hold some 1e-14; realistic heads stay above 1e-3).
    private const double MomentRank = 1e-9;

    // What central differences leave of a derivative that lies in the range of the moments (reference case 14 allows derivatives 1e-6).
    private const double LocationRank = 1e-6;

    private const int Axes = 3;

    private readonly double[] _derivative, _projected;

    /// <param name="leadfield">L in units of independent noise [1/(A m)], [row][moment axis].</param>
    /// <param name="derivative">dL/dr [1/(A m^2)], [row][moment axis][position axis].</param>
    /// <exception cref="ArgumentException">Lengths do not agree.</exception>
    public LocationBound(ReadOnlySpan<double> leadfield, ReadOnlySpan<double> derivative)
    {
        if (leadfield.Length % Axes != 0 || derivative.Length != Axes * leadfield.Length)
        {
            throw new ArgumentException($"{leadfield.Length} leadfield values need three times as many derivatives; {derivative.Length} were given.", nameof(derivative));
        }

        int rows = leadfield.Length / Axes;
        double[][] columns = Columns(leadfield, rows, Axes);
        double[][] basis = Basis(columns);
        MomentRankFound = basis.Length;
        _derivative = derivative.ToArray();
        _projected = derivative.ToArray();
        for (int column = 0; column < Axes * Axes; column++)
        {
            for (int pass = 0; pass < 2; pass++)                // twice is enough
            {
                foreach (double[] q in basis)
                {
                    double along = 0;
                    for (int row = 0; row < rows; row++)
                    {
                        along += q[row] * _projected[row * Axes * Axes + column];
                    }

                    for (int row = 0; row < rows; row++)
                    {
                        _projected[row * Axes * Axes + column] -= along * q[row];
                    }
                }
            }
        }
    }

    /// <summary>Number of directions of the moment that can be told: 3, or 2 for MEG in a sphere.</summary>
    public int MomentRankFound { get; }

    /// <summary>Covariance of the location for one trial and a moment of length 1 A m times the given vector [m^2], row by row; null where some direction is unbounded.</summary>
    /// <param name="moment">q, a unit vector for a bound per A m, or the moment itself [A m].</param>
    /// <returns>3 x 3; divide by the number of trials.</returns>
    public double[]? Covariance(Vec3 moment)
    {
        int rows = _projected.Length / (Axes * Axes);
        double[][] full = Along(_derivative, moment, rows), p = Along(_projected, moment, rows);
        double largest = full.Max(Norm);
        if (!(largest > 0))
        {
            return null;
        }

        int[] order = [0, 1, 2];
        var r = new double[Axes * Axes];
        for (int k = 0; k < Axes; k++)
        {
            int best = Enumerable.Range(k, Axes - k).MaxBy(c => Norm(p[order[c]]));
            (order[k], order[best]) = (order[best], order[k]);
            for (int c = 0; c < k; c++)
            {
                (r[c * Axes + k], r[c * Axes + best]) = (r[c * Axes + best], r[c * Axes + k]);
            }

            double[] pivot = p[order[k]];
            double norm = Norm(pivot);
            if (norm <= LocationRank * largest)
            {
                return null;
            }

            r[k * Axes + k] = norm;
            for (int c = k + 1; c < Axes; c++)
            {
                double[] other = p[order[c]];
                double along = Dot(pivot, other) / norm;
                r[k * Axes + c] = along;
                for (int row = 0; row < rows; row++)
                {
                    other[row] -= along / norm * pivot[row];
                }
            }
        }

        double[] inverse = InverseUpper(r);
        var covariance = new double[Axes * Axes];
        for (int i = 0; i < Axes; i++)
        {
            for (int j = 0; j < Axes; j++)
            {
                double sum = 0;
                for (int k = 0; k < Axes; k++)
                {
                    sum += inverse[i * Axes + k] * inverse[j * Axes + k];
                }

                covariance[order[i] * Axes + order[j]] = sum;
            }
        }

        return covariance;
    }

    /// <summary>sqrt(trace) of <see cref="Covariance"/> [m]; infinite where unbounded.</summary>
    /// <param name="moment">As there.</param>
    public double Error(Vec3 moment) => Covariance(moment) is { } c ? Math.Sqrt(c[0] + c[4] + c[8]) : double.PositiveInfinity;

    private static double[][] Columns(ReadOnlySpan<double> matrix, int rows, int columns)
    {
        double[][] result = [.. Enumerable.Range(0, columns).Select(_ => new double[rows])];
        for (int row = 0; row < rows; row++)
        {
            for (int c = 0; c < columns; c++)
            {
                result[c][row] = matrix[row * columns + c];
            }
        }

        return result;
    }

    // Gram-Schmidt with pivoting and a second pass; columns that are rounding of zero are left out.
    private static double[][] Basis(double[][] columns)
    {
        var basis = new List<double[]>();
        double largest = columns.Max(Norm);
        List<double[]> left = [.. columns];
        while (left.Count > 0)
        {
            double[] best = left.MaxBy(Norm)!;
            double norm = Norm(best);
            if (!(norm > MomentRank * largest))
            {
                break;
            }

            left.Remove(best);
            double[] q = [.. best.Select(x => x / norm)];
            basis.Add(q);
            foreach (double[] other in left)
            {
                for (int pass = 0; pass < 2; pass++)
                {
                    double along = Dot(q, other);
                    for (int row = 0; row < q.Length; row++)
                    {
                        other[row] -= along * q[row];
                    }
                }
            }
        }

        return [.. basis];
    }

    private static double[][] Along(double[] derivative, Vec3 moment, int rows)
    {
        double[][] result = [.. Enumerable.Range(0, Axes).Select(_ => new double[rows])];
        for (int row = 0; row < rows; row++)
        {
            for (int place = 0; place < Axes; place++)
            {
                int at = row * Axes * Axes + place;
                result[place][row] = derivative[at] * moment.X + derivative[at + Axes] * moment.Y + derivative[at + 2 * Axes] * moment.Z;
            }
        }

        return result;
    }

    private static double[] InverseUpper(double[] r)
    {
        var inverse = new double[Axes * Axes];
        for (int j = 0; j < Axes; j++)
        {
            inverse[j * Axes + j] = 1 / r[j * Axes + j];
            for (int i = j - 1; i >= 0; i--)
            {
                double sum = 0;
                for (int k = i + 1; k <= j; k++)
                {
                    sum += r[i * Axes + k] * inverse[k * Axes + j];
                }

                inverse[i * Axes + j] = -sum / r[i * Axes + i];
            }
        }

        return inverse;
    }

    private static double Norm(double[] x) => Math.Sqrt(Dot(x, x));

    private static double Dot(double[] x, double[] y)
    {
        double sum = 0;
        for (int k = 0; k < x.Length; k++)
        {
            sum += x[k] * y[k];
        }

        return sum;
    }
}
