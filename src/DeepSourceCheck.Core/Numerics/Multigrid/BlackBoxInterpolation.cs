namespace DeepSourceCheck.Core.Numerics.Multigrid;

// BlackBoxInterpolation.cs - interpolation that follows the operator, so that currents across a poorly conducting layer are not smeared over it.
//   A fine node is odd along m of the axes. Its stencil is summed over the other axes; what remains couples it to 3^m - 1 neighbours in the span of its odd axes, which are
//   coarse nodes or odd along fewer axes and interpolated already:  u_i = sum_k c_k u_k / sum_k c_k.
//   Weights below zero (obtuse couplings of flat voxels and tensors) are clipped and the rest is scaled to sum 1, so that constants are kept.
// Source: [Dendy 1982], carried to three dimensions.

/// <summary>Operator-dependent interpolation for a 27-point operator.</summary>
internal static class BlackBoxInterpolation
{
    /// <summary>
    /// Weights below this share of the largest of a node are dropped. A coarse node that only weakly reaches any fine one would have couplings that cancel in its diagonal; from level to
    /// level the share that survives shrinks like a power of the weight, down to what single precision no longer holds.
    /// </summary>
    private const double LeastWeight = 0.05;

    /// <summary>The interpolation to the grid of an operator from its coarsened grid.</summary>
    /// <param name="fine">The operator.</param>
    /// <param name="threads">Threads; the result does not depend on them.</param>
    public static GridTransfer Of(StencilOperator fine, int threads)
    {
        RowGrid coarse = fine.Grid.Coarsened();
        float[] weights = GC.AllocateArray<float>(coarse.Count * Stencil.Stride, pinned: true);
        var options = new ParallelOptions { MaxDegreeOfParallelism = threads };
        for (int odd = 0; odd <= 3; odd++)           // nodes that are odd along more axes lean on those along fewer
        {
            int axes = odd;
            Parallel.For(0, fine.Grid.Nz, options, z =>
            {
                Span<int> corners = stackalloc int[8];
                Span<double> sums = stackalloc double[8];
                Span<double> collapsed = stackalloc double[Stencil.Size];
                for (int y = 0; y < fine.Grid.Ny; y++)
                {
                    (int first, int length, int offset) = fine.Grid.Row(y, z);
                    int rowOdd = (y & 1) + (z & 1);
                    if (length == 0 || rowOdd > axes || rowOdd + 1 < axes)
                    {
                        continue;
                    }

                    for (int x = first + ((first & 1) + rowOdd == axes ? 0 : 1); x < first + length; x += 2)
                    {
                        ReadOnlySpan<float> row = fine.Row(offset + x - first);
                        if (row[Stencil.Centre] > 0)
                        {
                            Node(fine, coarse, weights, (x, y, z), row, corners, sums, collapsed);
                        }
                    }
                }
            });
        }

        return new GridTransfer(fine.Grid, coarse, weights);
    }

    private static void Node(
        StencilOperator fine, RowGrid coarse, float[] weights, (int X, int Y, int Z) at, ReadOnlySpan<float> row, Span<int> corners, Span<double> sums, Span<double> collapsed)
    {
        (int ox, int oy, int oz) = (at.X & 1, at.Y & 1, at.Z & 1);
        for (int corner = 0; corner < 8; corner++)
        {
            (int cx, int cy, int cz) = (corner & 1, corner >> 1 & 1, corner >> 2);
            bool spans = cx <= ox && cy <= oy && cz <= oz;
            corners[corner] = spans ? coarse.IndexOf((at.X >> 1) + cx, (at.Y >> 1) + cy, (at.Z >> 1) + cz) : -1;
            sums[corner] = 0;
        }

        if (ox + oy + oz == 0)
        {
            weights[corners[0] * Stencil.Stride + Stencil.Centre] = 1;
            return;
        }

        collapsed.Clear();
        for (int k = 0; k < Stencil.Size; k++)
        {
            (int dx, int dy, int dz) = Stencil.Step(k);
            collapsed[Stencil.At(dx * ox, dy * oy, dz * oz)] += k == Stencil.Centre ? 0 : row[k];
        }

        for (int k = 0; k < Stencil.Size; k++)
        {
            if (k != Stencil.Centre && collapsed[k] != 0)
            {
                Spread(fine, weights, at, Stencil.Step(k), collapsed[k], corners, sums);
            }
        }

        double largest = 0, total = 0;
        int count = 0;
        for (int corner = 0; corner < 8; corner++)
        {
            largest = Math.Max(largest, sums[corner]);
        }

        for (int corner = 0; corner < 8; corner++)
        {
            sums[corner] = sums[corner] < LeastWeight * largest ? 0 : sums[corner];
            total += sums[corner];
            count += corners[corner] >= 0 ? 1 : 0;
        }

        for (int corner = 0; corner < 8; corner++)
        {
            if (corners[corner] >= 0)
            {
                double weight = largest > 0 ? sums[corner] / total : 1.0 / count;
                weights[corners[corner] * Stencil.Stride + PlaceOf(at, corner)] = (float)weight;
            }
        }
    }

    /// <summary>Adds a coupling to a neighbour onto the coarse nodes from which the neighbour is interpolated.</summary>
    private static void Spread(StencilOperator fine, float[] weights, (int X, int Y, int Z) at, (int Dx, int Dy, int Dz) step, double coupling, Span<int> corners, Span<double> sums)
    {
        (int X, int Y, int Z) other = (at.X + step.Dx, at.Y + step.Dy, at.Z + step.Dz);
        int node = fine.Grid.IndexOf(other.X, other.Y, other.Z);
        bool live = node >= 0 && fine.IsLive(node);
        double share = 1.0;
        if (!live)
        {
            // Couplings of rows beside the plane were summed onto a place where no node is: it counts as the mean of its coarse nodes.
            int odd = (other.X & 1) + (other.Y & 1) + (other.Z & 1);
            share = 1.0 / (1 << odd);
        }

        for (int corner = 0; corner < 8; corner++)
        {
            if (corners[corner] < 0)
            {
                continue;
            }

            // Steps along odd axes reach the corner on their side; where there is no step, the neighbour spans both corners as this node does.
            (int cx, int cy, int cz) = (corner & 1, corner >> 1 & 1, corner >> 2);
            bool reaches = (step.Dx == 0 || (step.Dx + 1) / 2 == cx) && (step.Dy == 0 || (step.Dy + 1) / 2 == cy) && (step.Dz == 0 || (step.Dz + 1) / 2 == cz);
            if (reaches)
            {
                sums[corner] += coupling * (live ? weights[corners[corner] * Stencil.Stride + PlaceOf(other, (at.X >> 1) + cx, (at.Y >> 1) + cy, (at.Z >> 1) + cz)] : share);
            }
        }
    }

    private static int PlaceOf((int X, int Y, int Z) fine, int corner) => PlaceOf(fine, (fine.X >> 1) + (corner & 1), (fine.Y >> 1) + (corner >> 1 & 1), (fine.Z >> 1) + (corner >> 2));

    private static int PlaceOf((int X, int Y, int Z) fine, int cx, int cy, int cz) => Stencil.At(fine.X - 2 * cx, fine.Y - 2 * cy, fine.Z - 2 * cz);
}
