using MathNet.Numerics.LinearAlgebra;

namespace DeepSourceCheck.Core.Attribution;

// FieldSubspace.cs - the patterns that a region makes, and the angles between those of two regions.
//   G = sum of w w' over whitened fields w of the region; its eigenvectors, strongest first, until they hold the share Held of its power, span the subspace.
//   All of a large region's eigenvectors would span everything, and every angle would be 0: the share keeps to what the region mostly makes.
//   A field b lies at angle acos(|U'b| / |b|) to the subspace U. Principal angles of two subspaces: acos of the singular values of U'V.
// Source: [Bjorck & Golub 1973], Math Comput 27:579 (from memory).

/// <summary>The main patterns of a region in units of the noise.</summary>
public sealed class FieldSubspace
{
    /// <summary>Share of the power that the patterns hold.</summary>
    public const double Held = 0.99;

    private readonly Matrix<double> _basis;

    /// <param name="gram">G, rows x rows, row by row, symmetric; any unit.</param>
    /// <param name="rows">Number of whitened rows.</param>
    public FieldSubspace(double[] gram, int rows)
    {
        double scale = Enumerable.Range(0, rows).Max(k => gram[k * rows + k]);
        if (!(scale > 0))
        {
            _basis = Matrix<double>.Build.Dense(rows, 1);
            Patterns = 0;
            return;
        }

        Matrix<double> scaled = Matrix<double>.Build.Dense(rows, rows, (i, j) => gram[i * rows + j] / scale);
        var eigen = scaled.Evd(Symmetricity.Symmetric);         // ascending
        double total = Enumerable.Range(0, rows).Sum(k => Math.Max(0, eigen.EigenValues[k].Real)), held = 0;
        while (Patterns < rows && held < Held * total)
        {
            held += Math.Max(0, eigen.EigenValues[rows - 1 - Patterns].Real);
            Patterns++;
        }

        _basis = eigen.EigenVectors.SubMatrix(0, rows, rows - Patterns, Patterns);
    }

    /// <summary>Number of patterns; 0 for a region that is silent.</summary>
    public int Patterns { get; }

    /// <summary>Angle of a field to the subspace [rad], 0 to pi/2; NaN for a silent field.</summary>
    /// <param name="field">Whitened field, one value a row; any unit.</param>
    public double Angle(ReadOnlySpan<double> field)
    {
        double all = 0, inside = 0;
        foreach (double x in field)
        {
            all += x * x;
        }

        for (int k = 0; k < Patterns; k++)
        {
            double along = 0;
            for (int row = 0; row < field.Length; row++)
            {
                along += _basis[row, k] * field[row];
            }

            inside += along * along;
        }

        // Sine and cosine together, so that small angles keep their digits as far as the sums allow.
        return all > 0 ? Math.Atan2(Math.Sqrt(Math.Max(0, all - inside)), Math.Sqrt(inside)) : double.NaN;
    }

    /// <summary>Principal angles to another subspace [rad], smallest first; as many as the smaller one has patterns.</summary>
    public IReadOnlyList<double> PrincipalAngles(FieldSubspace other)
    {
        if (Patterns == 0 || other.Patterns == 0)
        {
            return [];
        }

        Vector<double> cosines = _basis.TransposeThisAndMultiply(other._basis).Svd(computeVectors: false).S;
        return [.. cosines.Select(c => Math.Acos(Math.Clamp(c, 0, 1))).Order()];
    }
}
