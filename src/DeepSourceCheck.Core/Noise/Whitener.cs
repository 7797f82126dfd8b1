using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Noise;

/// <summary>Turns signals into units of independent noise: W C W' = I on the range of C.</summary>
/// <remarks>
/// Diagonal covariances are scaled only. Dense ones go through the inverse Cholesky factor, four rows at a time so that every loaded vector serves twelve sums
/// (layout [row][axis][8 dipoles], one vector an axis). A plain twin stands in the tests.
/// </remarks>
public sealed class Whitener
{
    private const int Panel = 4;
    private readonly int[] _channels;
    private readonly double[] _scale;
    private readonly double[]? _inverse;

    private Whitener(int[] channels, double[] scale, double[]? inverse)
    {
        _channels = channels;
        _scale = scale;
        _inverse = inverse;
    }

    /// <summary>Number of whitened rows: the rank of the covariance.</summary>
    public int Rank => _channels.Length;

    /// <summary>The whitener of a covariance.</summary>
    /// <param name="covariance">C, n x n, row by row; symmetric, positive semidefinite.</param>
    /// <param name="n">Order.</param>
    public static Whitener Of(double[] covariance, int n)
    {
        bool diagonal = true;
        for (int i = 0; i < n && diagonal; i++)
        {
            for (int j = 0; j < i && diagonal; j++)
            {
                diagonal = covariance[i * n + j] == 0.0;
            }
        }

        if (diagonal)
        {
            int[] channels = [.. Enumerable.Range(0, n).Where(k => covariance[k * n + k] > 0)];
            return new Whitener(channels, [.. channels.Select(k => 1.0 / Math.Sqrt(covariance[k * n + k]))], null);
        }

        PivotedCholesky factor = PivotedCholesky.Of(covariance, n);
        return new Whitener(factor.Channels, factor.Scale, factor.InverseFactor());
    }

    /// <summary>Whitens the leadfields of eight dipoles.</summary>
    /// <param name="input">[channel][axis][lane].</param>
    /// <param name="output">[whitened row][axis][lane], at least <see cref="Rank"/> rows; overwritten. Must not overlap the input.</param>
    public void Apply(ReadOnlySpan<double> input, Span<double> output)
    {
        ReadOnlySpan<Vector512<double>> x = MemoryMarshal.Cast<double, Vector512<double>>(input);
        Span<Vector512<double>> y = MemoryMarshal.Cast<double, Vector512<double>>(output);
        int r = Rank;
        for (int i = 0; i < r; i++)
        {
            Vector512<double> s = Vector512.Create(_scale[i]);
            int from = 3 * _channels[i];
            y[3 * i] = s * x[from];
            y[3 * i + 1] = s * x[from + 1];
            y[3 * i + 2] = s * x[from + 2];
        }

        if (_inverse is null)
        {
            return;
        }

        // In place from the last panel upwards: row i needs only rows j <= i, which are still unwhitened then.
        int first = r - r % Panel;
        for (int i = r - 1; i >= first; i--)
        {
            Row(y, i);
        }

        for (int i = first - Panel; i >= 0; i -= Panel)
        {
            Rows(y, i);
        }
    }

    private void Row(Span<Vector512<double>> y, int i)
    {
        int r = Rank;
        Vector512<double> a0 = default, a1 = default, a2 = default;
        for (int j = 0; j <= i; j++)
        {
            Vector512<double> w = Vector512.Create(_inverse![i * r + j]);
            a0 = Vector512.FusedMultiplyAdd(w, y[3 * j], a0);
            a1 = Vector512.FusedMultiplyAdd(w, y[3 * j + 1], a1);
            a2 = Vector512.FusedMultiplyAdd(w, y[3 * j + 2], a2);
        }

        y[3 * i] = a0;
        y[3 * i + 1] = a1;
        y[3 * i + 2] = a2;
    }

    private void Rows(Span<Vector512<double>> y, int i)
    {
        int r = Rank;
        ReadOnlySpan<double> w0 = _inverse.AsSpan(i * r, r), w1 = _inverse.AsSpan((i + 1) * r, r);
        ReadOnlySpan<double> w2 = _inverse.AsSpan((i + 2) * r, r), w3 = _inverse.AsSpan((i + 3) * r, r);
        Vector512<double> a00 = default, a01 = default, a02 = default, a10 = default, a11 = default, a12 = default;
        Vector512<double> a20 = default, a21 = default, a22 = default, a30 = default, a31 = default, a32 = default;
        int end = i + Panel;                                    // entries above the diagonal are zero
        for (int j = 0; j < end; j++)
        {
            Vector512<double> x0 = y[3 * j], x1 = y[3 * j + 1], x2 = y[3 * j + 2];
            Vector512<double> w = Vector512.Create(w0[j]);
            a00 = Vector512.FusedMultiplyAdd(w, x0, a00);
            a01 = Vector512.FusedMultiplyAdd(w, x1, a01);
            a02 = Vector512.FusedMultiplyAdd(w, x2, a02);
            w = Vector512.Create(w1[j]);
            a10 = Vector512.FusedMultiplyAdd(w, x0, a10);
            a11 = Vector512.FusedMultiplyAdd(w, x1, a11);
            a12 = Vector512.FusedMultiplyAdd(w, x2, a12);
            w = Vector512.Create(w2[j]);
            a20 = Vector512.FusedMultiplyAdd(w, x0, a20);
            a21 = Vector512.FusedMultiplyAdd(w, x1, a21);
            a22 = Vector512.FusedMultiplyAdd(w, x2, a22);
            w = Vector512.Create(w3[j]);
            a30 = Vector512.FusedMultiplyAdd(w, x0, a30);
            a31 = Vector512.FusedMultiplyAdd(w, x1, a31);
            a32 = Vector512.FusedMultiplyAdd(w, x2, a32);
        }

        (y[3 * i], y[3 * i + 1], y[3 * i + 2]) = (a00, a01, a02);
        (y[3 * i + 3], y[3 * i + 4], y[3 * i + 5]) = (a10, a11, a12);
        (y[3 * i + 6], y[3 * i + 7], y[3 * i + 8]) = (a20, a21, a22);
        (y[3 * i + 9], y[3 * i + 10], y[3 * i + 11]) = (a30, a31, a32);
    }
}
