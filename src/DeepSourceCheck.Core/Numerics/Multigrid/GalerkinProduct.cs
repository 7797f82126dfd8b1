namespace DeepSourceCheck.Core.Numerics.Multigrid;

// GalerkinProduct.cs - the coarse operator A_c = P' A P, in double precision from single-precision couplings and weights.
//   For coarse node J: B(m) = sum over fine i about J of P_iJ a_(i, J + m), m in the 5 x 5 x 5 nodes about J; then A_c(J, J + C) = sum_m B(m) P_(J + m, J + C).
//   The diagonal is minus the sum of the others, whatever rounding left: constants stay in the kernel on every level.

/// <summary>Coarse operators by the Galerkin product.</summary>
internal static class GalerkinProduct
{
    private const int Wide = 5;

    /// <summary>P' A P.</summary>
    /// <param name="fine">A.</param>
    /// <param name="transfer">P.</param>
    /// <param name="negligible">Couplings below this are zero, in the unit of A: nodes that carry nothing are left out instead of sinking below the range of single precision.</param>
    /// <param name="threads">Threads; the result does not depend on them.</param>
    public static StencilOperator Of(StencilOperator fine, GridTransfer transfer, double negligible, int threads)
    {
        RowGrid coarse = transfer.Coarse;
        float[] table = GC.AllocateArray<float>(coarse.Count * Stencil.Stride, pinned: true);
        int[] index = GC.AllocateUninitializedArray<int>(coarse.Count, pinned: true);
        Parallel.For(0, coarse.Nz, new ParallelOptions { MaxDegreeOfParallelism = threads }, z =>
        {
            Span<double> b = stackalloc double[Wide * Wide * Wide];
            for (int y = 0; y < coarse.Ny; y++)
            {
                (int first, int length, int offset) = coarse.Row(y, z);
                for (int n = 0; n < length; n++)
                {
                    int node = offset + n;
                    index[node] = node;
                    Node(fine, transfer, negligible, (first + n, y, z), node, b, table.AsSpan(node * Stencil.Stride, Stencil.Size));
                }
            }
        });

        return new StencilOperator(coarse, table, index);
    }

    private static void Node(StencilOperator fine, GridTransfer transfer, double negligible, (int X, int Y, int Z) at, int node, Span<double> b, Span<float> row)
    {
        b.Clear();
        bool any = false;
        ReadOnlySpan<float> own = transfer.Weights(node);
        for (int line = 0; line < 9; line++)
        {
            (_, int dy, int dz) = Stencil.Step(3 * line);
            int at0 = fine.Grid.Base(2 * at.Y + dy, 2 * at.Z + dz) ?? 0;
            for (int dx = -1; dx <= 1; dx++)
            {
                double weight = own[3 * line + dx + 1];
                if (weight > 0)             // only live nodes have weights
                {
                    any = true;
                    AddRow(fine.Row(at0 + 2 * at.X + dx), weight, b, 1 + dx + Wide * (1 + dy + Wide * (1 + dz)));
                }
            }
        }

        if (!any)
        {
            return;
        }

        for (int line = 0; line < 9; line++)
        {
            (_, int cy, int cz) = Stencil.Step(3 * line);
            for (int cx = -1; cx <= 1; cx++)
            {
                int other = transfer.Coarse.IndexOf(at.X + cx, at.Y + cy, at.Z + cz);
                if (other >= 0 && (cx, cy, cz) != (0, 0, 0))
                {
                    double coupling = -Gather(transfer.Weights(other), b, cx, cy, cz);
                    row[3 * line + cx + 1] = Math.Abs(coupling) < negligible ? 0 : (float)coupling;
                }
            }
        }

        StencilOperator.Close(row);
    }

    /// <summary>b about a fine node += weight times its matrix row.</summary>
    private static void AddRow(ReadOnlySpan<float> row, double weight, Span<double> b, int at)
    {
        for (int k = 0; k < Stencil.Size; k++)
        {
            double coefficient = k == Stencil.Centre ? StencilOperator.Diagonal(row) : -row[k];
            b[at + k % 3 + Wide * (k / 3 % 3 + Wide * (k / 9))] += weight * coefficient;
        }
    }

    /// <summary>sum over fine nodes m about coarse node C of B(m) P_(m, C).</summary>
    private static double Gather(ReadOnlySpan<float> weights, Span<double> b, int cx, int cy, int cz)
    {
        double sum = 0;
        for (int kz = Math.Max(-1, -2 - 2 * cz); kz <= Math.Min(1, 2 - 2 * cz); kz++)
        {
            for (int ky = Math.Max(-1, -2 - 2 * cy); ky <= Math.Min(1, 2 - 2 * cy); ky++)
            {
                for (int kx = Math.Max(-1, -2 - 2 * cx); kx <= Math.Min(1, 2 - 2 * cx); kx++)
                {
                    sum += b[2 + 2 * cx + kx + Wide * (2 + 2 * cy + ky + Wide * (2 + 2 * cz + kz))] * weights[Stencil.At(kx, ky, kz)];
                }
            }
        }

        return sum;
    }
}
