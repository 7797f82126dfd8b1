using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using static DeepSourceCheck.Core.Numerics.Multigrid.LaneMath;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

// DenseCoarseInverse.cs - the coarsest level, solved exactly.
//   The constant 1 of each unconnected piece is in the kernel of A. With d the diagonal of A on the piece and D = sum d, A + sum_pieces d d'/D is regular; from its inverse
//   sum_pieces 1 1'/D is taken off again: what remains inverts A on loads without sum, answers d with nothing and returns no constant, weighted by d. The weights matter: on coarse
//   levels diagonals differ by a factor of a million, and a sum left by rounding, shared out evenly, would drive nodes that hardly couple to huge potentials.

/// <summary>The coarsest operator inverted, but for constants, as a dense matrix.</summary>
internal sealed unsafe class DenseCoarseInverse
{
    /// <summary>Nodes below which a level is solved this way: 400 x 400 floats stay in the second-level cache.</summary>
    public const int MostNodes = 400;

    private readonly float[] _inverse;

    /// <param name="a">The coarsest operator.</param>
    public DenseCoarseInverse(StencilOperator a)
    {
        int n = a.Grid.Count;
        var matrix = new double[n, n];
        for (int node = 0; node < n; node++)
        {
            (int x, int y, int z) = a.Grid.Node(node);
            ReadOnlySpan<float> row = a.Row(node);
            for (int k = 0; k < Stencil.Size; k++)
            {
                (int dx, int dy, int dz) = Stencil.Step(k);
                if (k != Stencil.Centre && row[k] != 0 && a.Grid.IndexOf(x + dx, y + dy, z + dz) is >= 0 and int other)
                {
                    // Both triangles rounded to single precision apart: their mean is symmetric to the last bit.
                    matrix[node, other] -= 0.5 * row[k];
                    matrix[other, node] -= 0.5 * row[k];
                    matrix[node, node] += 0.5 * row[k];
                    matrix[other, other] += 0.5 * row[k];
                }
            }
        }

        double[] diagonal = [.. Enumerable.Range(0, n).Select(i => matrix[i, i])];
        Pieces pieces = Pieces.Of(a);
        var sums = new double[pieces.Count];
        for (int i = 0; i < n; i++)
        {
            if (pieces.Of(i) is >= 0 and int piece)
            {
                sums[piece] += diagonal[i];
            }
            else
            {
                matrix[i, i] = 1;                   // a node without couplings: any number serves, its column is cleared below
            }
        }

        ForPairs(pieces, n, (i, j, piece) => matrix[i, j] += diagonal[i] * diagonal[j] / sums[piece]);
        Invert(matrix, n);
        ForPairs(pieces, n, (i, j, piece) => matrix[i, j] -= 1 / sums[piece]);
        _inverse = GC.AllocateUninitializedArray<float>(n * n, pinned: true);
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                _inverse[i * n + j] = pieces.Of(i) >= 0 ? (float)(0.5 * (matrix[i, j] + matrix[j, i])) : 0;
            }
        }

        Nodes = n;
    }

    /// <summary>Nodes.</summary>
    public int Nodes { get; }

    /// <summary>z = inverse times b.</summary>
    public void Solve(LaneVector b, LaneVector z) => Apply(b.At, z.At);

    /// <summary>z = inverse times b.</summary>
    public void Apply(float* b, float* z)
    {
        float* m = (float*)Unsafe.AsPointer(ref MemoryMarshal.GetArrayDataReference(_inverse));
        int n = Nodes, i = 0;
        for (; i + 4 <= n; i += 4)
        {
            Vector512<float> s0 = Vector512<float>.Zero, s1 = s0, s2 = s0, s3 = s0;
            float* m0 = m + (nint)i * n;
            for (int j = 0; j < n; j++)
            {
                Vector512<float> v = Load(b + (nint)j * Lanes);
                s0 = Fma(All(m0 + j), v, s0);
                s1 = Fma(All(m0 + n + j), v, s1);
                s2 = Fma(All(m0 + 2 * n + j), v, s2);
                s3 = Fma(All(m0 + 3 * n + j), v, s3);
            }

            float* to = z + (nint)i * Lanes;
            s0.Store(to);
            s1.Store(to + Lanes);
            s2.Store(to + 2 * Lanes);
            s3.Store(to + 3 * Lanes);
        }

        for (; i < n; i++)
        {
            Vector512<float> sum = Vector512<float>.Zero;
            for (int j = 0; j < n; j++)
            {
                sum = Fma(All(m + (nint)i * n + j), Load(b + (nint)j * Lanes), sum);
            }

            sum.Store(z + (nint)i * Lanes);
        }
    }

    /// <summary>Visits all pairs of nodes of the same piece.</summary>
    private static void ForPairs(Pieces pieces, int nodes, Action<int, int, int> visit)
    {
        for (int i = 0; i < nodes; i++)
        {
            for (int j = 0; j < nodes; j++)
            {
                if (pieces.Of(i) >= 0 && pieces.Of(i) == pieces.Of(j))
                {
                    visit(i, j, pieces.Of(i));
                }
            }
        }
    }

    /// <summary>Gauss-Jordan in place, without pivoting: the matrix is positive definite.</summary>
    private static void Invert(double[,] m, int n)
    {
        for (int k = 0; k < n; k++)
        {
            double pivot = 1.0 / m[k, k];
            m[k, k] = 1.0;
            Span<double> row = MemoryMarshal.CreateSpan(ref m[k, 0], n);
            for (int j = 0; j < n; j++)
            {
                row[j] *= pivot;
            }

            for (int i = 0; i < n; i++)
            {
                double factor = m[i, k];
                if (i != k && factor != 0)
                {
                    m[i, k] = 0;
                    Subtract(factor, row, MemoryMarshal.CreateSpan(ref m[i, 0], n));
                }
            }
        }
    }

    private static void Subtract(double factor, Span<double> row, Span<double> from)
    {
        int wide = row.Length - row.Length % Vector512<double>.Count;
        var times = Vector512.Create(factor);
        for (int j = 0; j < wide; j += Vector512<double>.Count)
        {
            (Vector512.Create<double>(from[j..]) - times * Vector512.Create<double>(row[j..])).CopyTo(from[j..]);
        }

        for (int j = wide; j < row.Length; j++)
        {
            from[j] -= factor * row[j];
        }
    }
}
