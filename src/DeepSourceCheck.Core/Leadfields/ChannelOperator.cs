using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

using DeepSourceCheck.Core.Numerics;

namespace DeepSourceCheck.Core.Leadfields;

/// <summary>
/// A linear map from recorded rows to the channels that are used: referencing, derivations, removal of the room's terms. It acts on leadfields and on
/// covariances alike, so that signal and noise can never stand on different references.
/// </summary>
/// <remarks>
/// out_k = sum_j S_kj in_j - c sum_j w_j in_j - sum_t b_tk sum_j w_tj in_j with sparse rows S, the common weights w (c = 1 where a common term is given) and removed terms t, each with
/// weights over the inputs and loads over the outputs.
/// </remarks>
public sealed class ChannelOperator
{
    private const int Stride = 3 * LeadfieldBlock.Lanes;

    private readonly (int Row, double Weight)[][] _rows;
    private readonly double[]? _common;
    private readonly (double[] Weights, double[] Loads)[] _removed;

    /// <param name="names">Name of each output channel.</param>
    /// <param name="inputs">Number of input rows.</param>
    /// <param name="rows">Sparse weights of each output.</param>
    /// <param name="common">Weights over the inputs of the term that is subtracted from every output; null for none.</param>
    /// <param name="removed">Terms that are subtracted: weights over the inputs, loads over the outputs; null for none.</param>
    public ChannelOperator(
        IReadOnlyList<string> names, int inputs, (int Row, double Weight)[][] rows, double[]? common, IReadOnlyList<(double[] Weights, double[] Loads)>? removed = null)
    {
        _removed = removed is null ? [] : [.. removed];
        if (names.Count != rows.Length || (common is not null && common.Length != inputs)
            || Array.Exists(_removed, t => t.Weights.Length != inputs || t.Loads.Length != rows.Length))
        {
            throw new ArgumentException("Names, rows, common weights and removed terms must agree in length.");
        }

        Names = names;
        Inputs = inputs;
        _rows = rows;
        _common = common is not null && common.Any(w => w != 0) ? common : null;
    }

    /// <summary>Name of each output channel.</summary>
    public IReadOnlyList<string> Names { get; }

    /// <summary>Number of input rows.</summary>
    public int Inputs { get; }

    /// <summary>Number of output channels.</summary>
    public int Outputs => _rows.Length;

    /// <summary>Every row minus the weighted mean of the reference rows.</summary>
    /// <param name="names">Names of the rows.</param>
    /// <param name="weights">Reference weights over the rows, summing to 1; null or all zero leaves the rows as they are.</param>
    public static ChannelOperator Reference(IReadOnlyList<string> names, double[]? weights) =>
        new(names, names.Count, [.. Enumerable.Range(0, names.Count).Select(k => new[] { (k, 1.0) })], weights);

    /// <summary>Derivations: each a weighted sum of rows.</summary>
    /// <param name="names">Names of the derivations.</param>
    /// <param name="weights">Weights over the rows, one array a derivation.</param>
    /// <param name="inputs">Number of rows.</param>
    public static ChannelOperator Derivations(IReadOnlyList<string> names, IReadOnlyList<double[]> weights, int inputs) =>
        new(names, inputs, [.. weights.Select(w => w.Select((x, j) => (j, x)).Where(p => p.x != 0).ToArray())], null);

    /// <summary>Every row without what it holds of some terms.</summary>
    /// <param name="names">Names of the rows.</param>
    /// <param name="terms">For each term how it is read from the rows, and what every row holds of it.</param>
    public static ChannelOperator Removal(IReadOnlyList<string> names, IReadOnlyList<(double[] Weights, double[] Loads)> terms) =>
        new(names, names.Count, [.. Enumerable.Range(0, names.Count).Select(k => new[] { (k, 1.0) })], null, terms);

    /// <summary>Dense weights of output <paramref name="k"/> over the inputs.</summary>
    public double[] Weights(int k)
    {
        var dense = new double[Inputs];
        foreach ((int row, double weight) in _rows[k])
        {
            dense[row] += weight;
        }

        for (int j = 0; _common is not null && j < Inputs; j++)
        {
            dense[j] -= _common[j];
        }

        foreach ((double[] weights, double[] loads) in _removed)
        {
            for (int j = 0; j < Inputs; j++)
            {
                dense[j] -= loads[k] * weights[j];
            }
        }

        return dense;
    }

    /// <summary>Applies the operator to leadfields of eight dipoles.</summary>
    /// <param name="input">[row][axis][lane], as long as the inputs need.</param>
    /// <param name="output">[channel][axis][lane]; overwritten. Must not overlap the input.</param>
    /// <exception cref="ArgumentException">A span is too short.</exception>
    public void Apply(ReadOnlySpan<double> input, Span<double> output)
    {
        if (input.Length < Inputs * Stride || output.Length < Outputs * Stride)
        {
            throw new ArgumentException($"{Inputs} inputs and {Outputs} outputs need {Stride} values each; {input.Length} and {output.Length} were given.", nameof(input));
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
            T c0 = default, c1 = default, c2 = default;
            for (int j = 0; _common is not null && j < Inputs; j++)
            {
                if (_common[j] != 0)
                {
                    ref double from = ref Unsafe.Add(ref input, j * Stride + lane);
                    T w = T.All(_common[j]);
                    c0 += w * T.Load(ref from, 0);
                    c1 += w * T.Load(ref from, 8);
                    c2 += w * T.Load(ref from, 16);
                }
            }

            for (int k = 0; k < _rows.Length; k++)
            {
                T y0 = -c0, y1 = -c1, y2 = -c2;
                foreach ((int j, double weight) in _rows[k])
                {
                    ref double from = ref Unsafe.Add(ref input, j * Stride + lane);
                    T w = T.All(weight);
                    y0 += w * T.Load(ref from, 0);
                    y1 += w * T.Load(ref from, 8);
                    y2 += w * T.Load(ref from, 16);
                }

                ref double to = ref Unsafe.Add(ref output, k * Stride + lane);
                y0.Store(ref to, 0);
                y1.Store(ref to, 8);
                y2.Store(ref to, 16);
            }

            foreach ((double[] weights, double[] loads) in _removed)
            {
                Remove<T>(ref Unsafe.Add(ref input, lane), ref Unsafe.Add(ref output, lane), weights, loads);
            }
        }
    }

    private static void Remove<T>(ref double input, ref double output, double[] weights, double[] loads)
        where T : struct, ILaneVector<T>
    {
        T t0 = default, t1 = default, t2 = default;
        for (int j = 0; j < weights.Length; j++)
        {
            ref double from = ref Unsafe.Add(ref input, j * Stride);
            T w = T.All(weights[j]);
            t0 += w * T.Load(ref from, 0);
            t1 += w * T.Load(ref from, 8);
            t2 += w * T.Load(ref from, 16);
        }

        for (int k = 0; k < loads.Length; k++)
        {
            ref double to = ref Unsafe.Add(ref output, k * Stride);
            T load = T.All(loads[k]);
            (T.Load(ref to, 0) - load * t0).Store(ref to, 0);
            (T.Load(ref to, 8) - load * t1).Store(ref to, 8);
            (T.Load(ref to, 16) - load * t2).Store(ref to, 16);
        }
    }

    /// <summary>P C P': the covariance of the outputs, in the unit of C.</summary>
    /// <param name="covariance">C, inputs x inputs, row by row.</param>
    /// <returns>Outputs x outputs, row by row.</returns>
    public double[] ApplyToCovariance(double[] covariance)
    {
        int n = Inputs, m = Outputs;
        double[] left = ApplyToRows(covariance, n);             // P C, m x n
        var transposed = new double[n * m];
        for (int k = 0; k < m; k++)
        {
            for (int j = 0; j < n; j++)
            {
                transposed[j * m + k] = left[k * n + j];
            }
        }

        double[] result = ApplyToRows(transposed, m);           // P (P C)', m x m
        for (int i = 0; i < m; i++)                             // rounding must not make it asymmetric
        {
            for (int j = 0; j < i; j++)
            {
                result[i * m + j] = result[j * m + i] = 0.5 * (result[i * m + j] + result[j * m + i]);
            }
        }

        return result;
    }

    /// <summary>P X.</summary>
    /// <param name="matrix">X, inputs x columns, row by row.</param>
    /// <param name="columns">Number of columns.</param>
    /// <returns>Outputs x columns, row by row.</returns>
    public double[] ApplyToRows(double[] matrix, int columns)
    {
        var result = new double[Outputs * columns];
        var common = new double[columns];
        for (int j = 0; _common is not null && j < Inputs; j++)
        {
            for (int c = 0; _common[j] != 0 && c < columns; c++)
            {
                common[c] += _common[j] * matrix[j * columns + c];
            }
        }

        for (int k = 0; k < Outputs; k++)
        {
            Span<double> row = result.AsSpan(k * columns, columns);
            foreach ((int j, double weight) in _rows[k])
            {
                for (int c = 0; c < columns; c++)
                {
                    row[c] += weight * matrix[j * columns + c];
                }
            }

            for (int c = 0; c < columns; c++)
            {
                row[c] -= common[c];
            }
        }

        foreach ((double[] weights, double[] loads) in _removed)
        {
            Array.Clear(common);
            for (int j = 0; j < Inputs; j++)
            {
                for (int c = 0; c < columns; c++)
                {
                    common[c] += weights[j] * matrix[j * columns + c];
                }
            }

            for (int k = 0; k < Outputs; k++)
            {
                for (int c = 0; c < columns; c++)
                {
                    result[k * columns + c] -= loads[k] * common[c];
                }
            }
        }

        return result;
    }
}
