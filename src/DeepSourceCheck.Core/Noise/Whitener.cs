using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Noise;

/// <summary>Turns signals into units of independent noise: W C W' = I on the range of C.</summary>
/// <remarks>
/// Diagonal covariances are scaled only. Dense ones go through the inverse Cholesky factor W, lower triangular, in panels of eight rows: 24 sums stay in registers (eight rows, three
/// axes, eight dipoles a vector), and every loaded vector serves eight of them; half a panel and 12 sums where there are sixteen registers. W is packed in the order in which it is read. In place, the last panel first: row i needs only
/// rows j up to i, which are still unwhitened then. A plain twin stands in the tests.
/// </remarks>
public sealed class Whitener
{
    private const int Panel = 8, Stride = 3 * LeadfieldBlock.Lanes;
    private readonly int[] _channels;
    private readonly int _inputs;
    private readonly double[] _scale;
    private double[]? _panels;
    private int[]? _panelStart;

    private Whitener(int[] channels, double[] scale, double[]? inverse)
    {
        _channels = channels;
        _inputs = channels.Length == 0 ? 0 : channels.Max() + 1;
        _scale = scale;
        if (inverse is not null)
        {
            Pack(inverse, channels.Length);
        }
    }

    /// <summary>Number of whitened rows: the rank of the covariance.</summary>
    public int Rank => _channels.Length;

    /// <summary>The channels that are whitened, in the order of the factor.</summary>
    internal IReadOnlyList<int> Channels => _channels;

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
    /// <exception cref="ArgumentException">A span is too short.</exception>
    public void Apply(ReadOnlySpan<double> input, Span<double> output)
    {
        if (input.Length < Stride * _inputs || output.Length < Stride * Rank)
        {
            throw new ArgumentException($"{Rank} rows need {Stride} values each and the channels that they are made of; {input.Length} and {output.Length} were given.", nameof(input));
        }

        switch (LaneWidth.Lanes)
        {
            case 8:
                Apply<EightLanes>(ref MemoryMarshal.GetReference(input), ref MemoryMarshal.GetReference(output));
                break;
            case 4:
                Apply<FourLanes>(ref MemoryMarshal.GetReference(input), ref MemoryMarshal.GetReference(output));
                break;
            default:
                Apply<TwoLanes>(ref MemoryMarshal.GetReference(input), ref MemoryMarshal.GetReference(output));
                break;
        }
    }

    internal void Apply<T>(ref double input, ref double output)
        where T : struct, ILaneVector<T>
    {
        for (int lane = 0; lane < LeadfieldBlock.Lanes; lane += T.Count)
        {
            ref double lanes = ref Unsafe.Add(ref output, lane);
            for (int i = 0; i < _channels.Length; i++)
            {
                T s = T.All(_scale[i]);
                ref double from = ref Unsafe.Add(ref input, Stride * _channels[i] + lane), to = ref Unsafe.Add(ref lanes, Stride * i);
                (s * T.Load(ref from, 0)).Store(ref to, 0);
                (s * T.Load(ref from, 8)).Store(ref to, 8);
                (s * T.Load(ref from, 16)).Store(ref to, 16);
            }

            for (int panel = (_panelStart?.Length ?? 0) - 2; panel >= 0; panel--)
            {
                ref double weights = ref _panels![_panelStart![panel]];
                int first = panel * Panel;
                if (T.ManyRegisters)
                {
                    EightRows<T>(ref lanes, ref weights, first, Math.Min(first + Panel, Rank));
                    continue;
                }

                // The lower half of the panel first: it needs the upper half unwhitened.
                if (first + Panel / 2 < Rank)
                {
                    FourRows<T>(ref lanes, ref Unsafe.Add(ref weights, Panel / 2), first + Panel / 2, Math.Min(first + Panel, Rank));
                }

                FourRows<T>(ref lanes, ref weights, first, Math.Min(first + Panel / 2, Rank));
            }
        }
    }

    // Eight rows from the first one of a panel up to the end: y_i = sum_j w_ij y_j, entries above the diagonal are zero. Rows beyond the rank have zero weights and are not stored.
    private static void EightRows<T>(ref double output, ref double w, int first, int end)
        where T : struct, ILaneVector<T>
    {
        T a00 = default, a01 = default, a02 = default;
        T a10 = default, a11 = default, a12 = default;
        T a20 = default, a21 = default, a22 = default;
        T a30 = default, a31 = default, a32 = default;
        T a40 = default, a41 = default, a42 = default;
        T a50 = default, a51 = default, a52 = default;
        T a60 = default, a61 = default, a62 = default;
        T a70 = default, a71 = default, a72 = default;
        for (int j = 0; j < end; j++)
        {
            ref double weights = ref Unsafe.Add(ref w, Panel * j);
            ref double row = ref Unsafe.Add(ref output, Stride * j);
            T x0 = T.Load(ref row, 0), x1 = T.Load(ref row, 8), x2 = T.Load(ref row, 16);
            T weight = T.All(weights);
            a00 = T.MultiplyAdd(weight, x0, a00);
            a01 = T.MultiplyAdd(weight, x1, a01);
            a02 = T.MultiplyAdd(weight, x2, a02);
            weight = T.All(Unsafe.Add(ref weights, 1));
            a10 = T.MultiplyAdd(weight, x0, a10);
            a11 = T.MultiplyAdd(weight, x1, a11);
            a12 = T.MultiplyAdd(weight, x2, a12);
            weight = T.All(Unsafe.Add(ref weights, 2));
            a20 = T.MultiplyAdd(weight, x0, a20);
            a21 = T.MultiplyAdd(weight, x1, a21);
            a22 = T.MultiplyAdd(weight, x2, a22);
            weight = T.All(Unsafe.Add(ref weights, 3));
            a30 = T.MultiplyAdd(weight, x0, a30);
            a31 = T.MultiplyAdd(weight, x1, a31);
            a32 = T.MultiplyAdd(weight, x2, a32);
            weight = T.All(Unsafe.Add(ref weights, 4));
            a40 = T.MultiplyAdd(weight, x0, a40);
            a41 = T.MultiplyAdd(weight, x1, a41);
            a42 = T.MultiplyAdd(weight, x2, a42);
            weight = T.All(Unsafe.Add(ref weights, 5));
            a50 = T.MultiplyAdd(weight, x0, a50);
            a51 = T.MultiplyAdd(weight, x1, a51);
            a52 = T.MultiplyAdd(weight, x2, a52);
            weight = T.All(Unsafe.Add(ref weights, 6));
            a60 = T.MultiplyAdd(weight, x0, a60);
            a61 = T.MultiplyAdd(weight, x1, a61);
            a62 = T.MultiplyAdd(weight, x2, a62);
            weight = T.All(Unsafe.Add(ref weights, 7));
            a70 = T.MultiplyAdd(weight, x0, a70);
            a71 = T.MultiplyAdd(weight, x1, a71);
            a72 = T.MultiplyAdd(weight, x2, a72);
        }

        ref double to = ref Unsafe.Add(ref output, Stride * first);
        Store(ref to, 0, end - first, a00, a01, a02);
        Store(ref to, 1, end - first, a10, a11, a12);
        Store(ref to, 2, end - first, a20, a21, a22);
        Store(ref to, 3, end - first, a30, a31, a32);
        Store(ref to, 4, end - first, a40, a41, a42);
        Store(ref to, 5, end - first, a50, a51, a52);
        Store(ref to, 6, end - first, a60, a61, a62);
        Store(ref to, 7, end - first, a70, a71, a72);
    }

    // The same for half a panel: twelve sums, three signals and a weight are sixteen registers.
    private static void FourRows<T>(ref double output, ref double w, int first, int end)
        where T : struct, ILaneVector<T>
    {
        T a00 = default, a01 = default, a02 = default;
        T a10 = default, a11 = default, a12 = default;
        T a20 = default, a21 = default, a22 = default;
        T a30 = default, a31 = default, a32 = default;
        for (int j = 0; j < end; j++)
        {
            ref double weights = ref Unsafe.Add(ref w, Panel * j);
            ref double row = ref Unsafe.Add(ref output, Stride * j);
            T x0 = T.Load(ref row, 0), x1 = T.Load(ref row, 8), x2 = T.Load(ref row, 16);
            T weight = T.All(weights);
            a00 = T.MultiplyAdd(weight, x0, a00);
            a01 = T.MultiplyAdd(weight, x1, a01);
            a02 = T.MultiplyAdd(weight, x2, a02);
            weight = T.All(Unsafe.Add(ref weights, 1));
            a10 = T.MultiplyAdd(weight, x0, a10);
            a11 = T.MultiplyAdd(weight, x1, a11);
            a12 = T.MultiplyAdd(weight, x2, a12);
            weight = T.All(Unsafe.Add(ref weights, 2));
            a20 = T.MultiplyAdd(weight, x0, a20);
            a21 = T.MultiplyAdd(weight, x1, a21);
            a22 = T.MultiplyAdd(weight, x2, a22);
            weight = T.All(Unsafe.Add(ref weights, 3));
            a30 = T.MultiplyAdd(weight, x0, a30);
            a31 = T.MultiplyAdd(weight, x1, a31);
            a32 = T.MultiplyAdd(weight, x2, a32);
        }

        ref double to = ref Unsafe.Add(ref output, Stride * first);
        Store(ref to, 0, end - first, a00, a01, a02);
        Store(ref to, 1, end - first, a10, a11, a12);
        Store(ref to, 2, end - first, a20, a21, a22);
        Store(ref to, 3, end - first, a30, a31, a32);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Store<T>(ref double panel, int row, int rows, T x, T y, T z)
        where T : struct, ILaneVector<T>
    {
        if (row < rows)
        {
            ref double to = ref Unsafe.Add(ref panel, Stride * row);
            x.Store(ref to, 0);
            y.Store(ref to, 8);
            z.Store(ref to, 16);
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
