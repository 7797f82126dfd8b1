using System.Globalization;

using DeepSourceCheck.Core.Studies;

using static System.FormattableString;

namespace DeepSourceCheck.Files.Npy;

/// <summary>A square covariance matrix from a .npy array or a table of numbers without header (.csv, .tsv, .txt).</summary>
public static class CovarianceFile
{
    /// <summary>Largest |C_ij - C_ji| relative to sqrt(C_ii C_jj).</summary>
    public const double SymmetryTolerance = 1e-8;

    /// <summary>Unit roundoff of single precision: what a matrix that was stored in it may lack to be positive semidefinite, per row.</summary>
    private const double SingleRoundoff = 1.2e-7;

    private const long LargestText = 1L << 30;

    /// <summary>Reads and checks a matrix; returns it row by row, made exactly symmetric.</summary>
    /// <param name="path">File.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="expectedRows">Number of channels.</param>
    /// <param name="mayHoldReference">Whether rows that are exactly zero throughout are kept: the reference of a recording that is already referenced.</param>
    /// <returns>expectedRows^2 numbers, in the unit of the file (V^2, T^2).</returns>
    /// <exception cref="InputException">Not square, wrong size, not finite, asymmetric, a variance that is not positive, or clearly not positive semidefinite.</exception>
    public static double[] Read(string path, string displayName, int expectedRows, bool mayHoldReference = false)
    {
        double[] matrix = IsNpy(path, displayName) ? ReadArray(path, displayName, expectedRows) : ReadText(path, displayName, expectedRows);
        Check(matrix, expectedRows, displayName, mayHoldReference);
        return matrix;
    }

    private static bool IsNpy(string path, string displayName)
    {
        using FileStream file = InputFileAccess.Open(path, displayName);
        return path.EndsWith(".npy", StringComparison.OrdinalIgnoreCase) || file.ReadByte() == 0x93;
    }

    private static double[] ReadArray(string path, string displayName, int rows)
    {
        NpyHeader header = NpyReader.ReadHeader(path, displayName);
        if (header.Shape.Count != 2 || header.Shape[0] != rows || header.Shape[1] != rows)
        {
            throw new InputException(displayName, "shape", $"the array is {header.ShapeText}; a covariance of {rows} channels is {rows} x {rows}, in the order of the channels");
        }

        NpyArray array = NpyReader.Read(path, displayName);
        return array.FirstNonFinite < 0
            ? array.Values
            : throw new InputException(displayName, null, Invariant($"element {array.IndexText(array.FirstNonFinite)} is {array.Values[array.FirstNonFinite]}; every element must be finite (indices from 0)"));
    }

    private static double[] ReadText(string path, string displayName, int rows)
    {
        byte[] bytes = InputFileAccess.ReadAll(path, displayName, LargestText);
        string text = Tables.Utf8Text.Decode(bytes, displayName);
        double[] matrix = new double[(long)rows * rows];
        char separator = text.Contains('\t') ? '\t' : text.Contains(';') ? ';' : ',';
        int line = 0, row = 0;
        foreach (ReadOnlySpan<char> whole in text.AsSpan().EnumerateLines())
        {
            line++;
            if (whole.IsWhiteSpace())
            {
                continue;
            }

            int column = 0;
            foreach (Range range in whole.Split(separator))
            {
                ReadOnlySpan<char> cell = whole[range].Trim();
                column++;
                if (!double.TryParse(cell, NumberStyles.Float, CultureInfo.InvariantCulture, out double value) || !double.IsFinite(value))
                {
                    throw Fault(displayName, line, $"column {column} holds {Shown.Quoted(cell.ToString())}; a finite number is expected (a table of numbers, without header)");
                }

                if (row < rows && column <= rows)
                {
                    matrix[(long)row * rows + column - 1] = value;
                }
            }

            row++;
            if (column != rows)
            {
                throw Fault(displayName, line, $"the row has {column} numbers; a covariance of {rows} channels has {rows}");
            }
        }

        return row == rows ? matrix : throw new InputException(displayName, null, $"the table has {row} rows; a covariance of {rows} channels has {rows}");
    }

    private static void Check(double[] matrix, int n, string displayName, bool mayHoldReference)
    {
        double[] deviation = new double[n];
        int zeros = 0;
        for (int i = 0; i < n; i++)
        {
            double variance = matrix[i * n + i];
            if (mayHoldReference && variance == 0 && IsZero(matrix, n, i))
            {
                deviation[i] = 1;
                zeros++;
                continue;
            }

            if (!(variance > 0))
            {
                throw new InputException(displayName, null, Invariant($"the variance of row {i + 1} is {variance:G6}; every variance must be above 0: leave out channels without noise"));
            }

            deviation[i] = Math.Sqrt(variance);
        }

        if (zeros == n)
        {
            throw new InputException(displayName, null, "every variance is 0: no recording is without noise; check what was written");
        }

        (double worst, int worstI, int worstJ) = (0, 0, 0);
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < i; j++)
            {
                double upper = matrix[j * n + i], lower = matrix[i * n + j];
                double difference = Math.Abs(upper / deviation[i] / deviation[j] - lower / deviation[i] / deviation[j]);
                if (difference > worst)
                {
                    (worst, worstI, worstJ) = (difference, i, j);
                }

                matrix[j * n + i] = matrix[i * n + j] = upper == lower ? upper : 0.5 * upper + 0.5 * lower;
            }
        }

        if (worst > SymmetryTolerance)
        {
            throw new InputException(displayName, null, Invariant(
                $"the matrix is not symmetric: rows {worstJ + 1} and {worstI + 1} differ most, by {worst:E2} of their standard deviations (at most {SymmetryTolerance:E0} is allowed)"));
        }

        int row = FirstIndefiniteRow(matrix, deviation, n);
        if (row >= 0)
        {
            throw new InputException(displayName, null,
                $"the matrix is no covariance: some combination of rows 1 to {row + 1} would have a negative variance, beyond rounding");
        }
    }

    private static bool IsZero(double[] matrix, int n, int row) => Enumerable.Range(0, n).All(k => matrix[row * n + k] == 0 && matrix[k * n + row] == 0);

    /// <summary>
    /// Cholesky factorisation of the correlation matrix plus a shift by what single precision may have taken from it: fails at the first row where even that is not positive definite; -1 where none is.
    /// </summary>
    private static int FirstIndefiniteRow(double[] matrix, double[] deviation, int n)
    {
        double shift = n * SingleRoundoff;
        double[] factor = new double[(long)n * n];
        for (int i = 0; i < n; i++)
        {
            Span<double> rowI = factor.AsSpan(i * n, i + 1);
            for (int j = 0; j <= i; j++)
            {
                ReadOnlySpan<double> rowJ = factor.AsSpan(j * n, j + 1);
                double sum = i == j ? 1 + shift : matrix[i * n + j] / deviation[i] / deviation[j];
                for (int k = 0; k < j; k++)
                {
                    sum -= rowI[k] * rowJ[k];
                }

                if (i != j)
                {
                    rowI[j] = sum / rowJ[j];
                }
                else if (sum > 0)
                {
                    rowI[i] = Math.Sqrt(sum);
                }
                else
                {
                    return i;
                }
            }
        }

        return -1;
    }

    private static InputException Fault(string displayName, int line, string message) => new([new InputProblem(displayName, line, 0, null, message)]);
}
