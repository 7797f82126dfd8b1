using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Noise;

/// <summary>Turns signals into units of independent noise: W C W' = I on the range of C.</summary>
/// <remarks>
/// Diagonal covariances are scaled only. Dense ones go through the inverse Cholesky factor W, lower triangular, in panels of eight rows: 24 sums stay in registers (eight rows, three
/// axes, eight dipoles a vector), and every loaded vector serves eight of them. W is packed in the order in which it is read. In place, the last panel first: row i needs only
/// rows j up to i, which are still unwhitened then. A plain twin stands in the tests.
/// </remarks>
public sealed class Whitener
{
    private const int Panel = 8;
    private readonly int[] _channels;
    private readonly double[] _scale;
    private double[]? _panels;
    private int[]? _panelStart;

    private Whitener(int[] channels, double[] scale, double[]? inverse)
    {
        _channels = channels;
        _scale = scale;
        if (inverse is not null)
        {
            Pack(inverse, channels.Length);
        }
    }

    /// <summary>Number of whitened rows: the rank of the covariance.</summary>
    public int Rank => _channels.Length;

    /// <summary>True where each of <paramref name="n"/> channels is only divided by its standard deviation.</summary>
    internal bool OnlyScales(int n) => _panels is null && Rank == n;

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

        for (int panel = (_panelStart?.Length ?? 0) - 2; panel >= 0; panel--)
        {
            Rows(y, panel);
        }
    }

    // Eight rows from the first one of a panel: y_i = sum_j w_ij y_j. Rows beyond the rank have zero weights and are not stored.
    private void Rows(Span<Vector512<double>> output, int panel)
    {
        int first = panel * Panel, end = Math.Min(first + Panel, Rank);     // entries above the diagonal are zero
        ref Vector512<double> y = ref MemoryMarshal.GetReference(output);
        ref double w = ref _panels![_panelStart![panel]];
        Vector512<double> a00 = default, a01 = default, a02 = default;
        Vector512<double> a10 = default, a11 = default, a12 = default;
        Vector512<double> a20 = default, a21 = default, a22 = default;
        Vector512<double> a30 = default, a31 = default, a32 = default;
        Vector512<double> a40 = default, a41 = default, a42 = default;
        Vector512<double> a50 = default, a51 = default, a52 = default;
        Vector512<double> a60 = default, a61 = default, a62 = default;
        Vector512<double> a70 = default, a71 = default, a72 = default;
        for (int j = 0; j < end; j++)
        {
            ref Vector512<double> row = ref Unsafe.Add(ref y, 3 * j);
            Vector512<double> x0 = row, x1 = Unsafe.Add(ref row, 1), x2 = Unsafe.Add(ref row, 2);
            ref double weights = ref Unsafe.Add(ref w, Panel * j);
            Vector512<double> weight = Vector512.Create(Unsafe.Add(ref weights, 0));
            a00 = Vector512.FusedMultiplyAdd(weight, x0, a00);
            a01 = Vector512.FusedMultiplyAdd(weight, x1, a01);
            a02 = Vector512.FusedMultiplyAdd(weight, x2, a02);
            weight = Vector512.Create(Unsafe.Add(ref weights, 1));
            a10 = Vector512.FusedMultiplyAdd(weight, x0, a10);
            a11 = Vector512.FusedMultiplyAdd(weight, x1, a11);
            a12 = Vector512.FusedMultiplyAdd(weight, x2, a12);
            weight = Vector512.Create(Unsafe.Add(ref weights, 2));
            a20 = Vector512.FusedMultiplyAdd(weight, x0, a20);
            a21 = Vector512.FusedMultiplyAdd(weight, x1, a21);
            a22 = Vector512.FusedMultiplyAdd(weight, x2, a22);
            weight = Vector512.Create(Unsafe.Add(ref weights, 3));
            a30 = Vector512.FusedMultiplyAdd(weight, x0, a30);
            a31 = Vector512.FusedMultiplyAdd(weight, x1, a31);
            a32 = Vector512.FusedMultiplyAdd(weight, x2, a32);
            weight = Vector512.Create(Unsafe.Add(ref weights, 4));
            a40 = Vector512.FusedMultiplyAdd(weight, x0, a40);
            a41 = Vector512.FusedMultiplyAdd(weight, x1, a41);
            a42 = Vector512.FusedMultiplyAdd(weight, x2, a42);
            weight = Vector512.Create(Unsafe.Add(ref weights, 5));
            a50 = Vector512.FusedMultiplyAdd(weight, x0, a50);
            a51 = Vector512.FusedMultiplyAdd(weight, x1, a51);
            a52 = Vector512.FusedMultiplyAdd(weight, x2, a52);
            weight = Vector512.Create(Unsafe.Add(ref weights, 6));
            a60 = Vector512.FusedMultiplyAdd(weight, x0, a60);
            a61 = Vector512.FusedMultiplyAdd(weight, x1, a61);
            a62 = Vector512.FusedMultiplyAdd(weight, x2, a62);
            weight = Vector512.Create(Unsafe.Add(ref weights, 7));
            a70 = Vector512.FusedMultiplyAdd(weight, x0, a70);
            a71 = Vector512.FusedMultiplyAdd(weight, x1, a71);
            a72 = Vector512.FusedMultiplyAdd(weight, x2, a72);
        }

        ref Vector512<double> to = ref Unsafe.Add(ref y, 3 * first);
        Store(ref to, 0, end - first, a00, a01, a02);
        Store(ref to, 1, end - first, a10, a11, a12);
        Store(ref to, 2, end - first, a20, a21, a22);
        Store(ref to, 3, end - first, a30, a31, a32);
        Store(ref to, 4, end - first, a40, a41, a42);
        Store(ref to, 5, end - first, a50, a51, a52);
        Store(ref to, 6, end - first, a60, a61, a62);
        Store(ref to, 7, end - first, a70, a71, a72);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Store(ref Vector512<double> panel, int row, int rows, Vector512<double> x, Vector512<double> y, Vector512<double> z)
    {
        if (row < rows)
        {
            ref Vector512<double> to = ref Unsafe.Add(ref panel, 3 * row);
            (to, Unsafe.Add(ref to, 1), Unsafe.Add(ref to, 2)) = (x, y, z);
        }
    }

    // [panel][column][row of the panel], columns up to the panel's last row.
    private void Pack(double[] inverse, int rank)
    {
        int panels = (rank + Panel - 1) / Panel;
        _panelStart = new int[panels + 1];
        for (int p = 0; p < panels; p++)
        {
            _panelStart[p + 1] = _panelStart[p] + Panel * Math.Min((p + 1) * Panel, rank);
        }

        _panels = new double[_panelStart[panels]];
        for (int i = 0; i < rank; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                _panels[_panelStart[i / Panel] + Panel * j + i % Panel] = inverse[i * rank + j];
            }
        }
    }
}
