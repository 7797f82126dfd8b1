using System.Numerics;
using System.Runtime.InteropServices;

namespace DeepSourceCheck.Core.Numerics;

/// <summary>Inverse of a symmetric positive definite matrix by its Cholesky factor, rows scaled to unit diagonal first so that tiny units cannot meet a threshold.</summary>
internal static class SymmetricInverse
{
    /// <summary>The inverse, n x n, row by row; in the inverse unit of the matrix.</summary>
    /// <param name="matrix">n x n, row by row.</param>
    /// <param name="n">Order.</param>
    /// <exception cref="ArithmeticException">The matrix is not positive definite in double precision.</exception>
    public static double[] Of(double[] matrix, int n)
    {
        double[] scale = [.. Enumerable.Range(0, n).Select(k => 1 / Math.Sqrt(matrix[k * n + k]))];
        var l = new double[n * n];
        for (int i = 0; i < n; i++)
        {
            Span<double> row = l.AsSpan(i * n, n);
            for (int j = 0; j <= i; j++)
            {
                double rest = scale[i] * scale[j] * matrix[i * n + j] - Dot(row[..j], l.AsSpan(j * n, j));
                row[j] = j < i ? rest / l[j * n + j] : Math.Sqrt(rest);
            }

            if (!(row[i] > 0))
            {
                throw new ArithmeticException($"A covariance of {n} rows is not positive definite at row {i + 1}.");
            }
        }

        // W = L^-1, row by row: w_i = (e_i - sum_k l_ik w_k) / l_ii
        var w = new double[n * n];
        for (int i = 0; i < n; i++)
        {
            Span<double> row = w.AsSpan(i * n, n);
            for (int k = 0; k < i; k++)
            {
                AddScaled(w.AsSpan(k * n, k + 1), -l[i * n + k], row);
            }

            row[i] = 1;
            for (int k = 0; k <= i; k++)
            {
                row[k] /= l[i * n + i];
            }
        }

        var inverse = new double[n * n];
        for (int i = 0; i < n; i++)
        {
            Span<double> row = w.AsSpan(i * n, i + 1);
            for (int j = 0; j <= i; j++)
            {
                AddScaled(row[..(j + 1)], row[j], inverse.AsSpan(j * n, j + 1));
            }
        }

        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                inverse[i * n + j] *= scale[i] * scale[j];
                inverse[j * n + i] = inverse[i * n + j];
            }
        }

        return inverse;
    }

    private static double Dot(ReadOnlySpan<double> a, ReadOnlySpan<double> b)
    {
        ReadOnlySpan<Vector<double>> x = MemoryMarshal.Cast<double, Vector<double>>(a), y = MemoryMarshal.Cast<double, Vector<double>>(b);
        Vector<double> sum = default;
        for (int k = 0; k < x.Length; k++)
        {
            sum += x[k] * y[k];
        }

        double total = Vector.Sum(sum);
        for (int k = x.Length * Vector<double>.Count; k < a.Length; k++)
        {
            total += a[k] * b[k];
        }

        return total;
    }

    // to += factor from
    private static void AddScaled(ReadOnlySpan<double> from, double factor, Span<double> to)
    {
        ReadOnlySpan<Vector<double>> x = MemoryMarshal.Cast<double, Vector<double>>(from);
        Span<Vector<double>> y = MemoryMarshal.Cast<double, Vector<double>>(to);
        var f = new Vector<double>(factor);
        for (int k = 0; k < x.Length; k++)
        {
            y[k] += f * x[k];
        }

        for (int k = x.Length * Vector<double>.Count; k < from.Length; k++)
        {
            to[k] += factor * from[k];
        }
    }
}
