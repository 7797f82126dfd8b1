using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

using static DeepSourceCheck.Core.Numerics.Multigrid.LaneMath;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

// StencilProduct.cs - rows of A p in difference form: (A p)_i = sum_k w_k (p_i - p_k).
// In single precision the plain sum loses what the potential has in common with its neighbours and stalls above a relative residual of 1e-6; differences keep it.

/// <summary>Products with a stencil operator, one row of nodes at a time.</summary>
internal static unsafe class StencilProduct
{
    /// <summary>q = A p; adds p . q to the sums.</summary>
    public static void Multiply(StencilOperator a, int row, int start, int length, float* p, float* q, ref LaneSums sums)
    {
        float* table = a.Table;
        int* index = a.Index + start;
        nint* step = a.Rows.Steps + (nint)StencilRows.Around * row;
        float* u = p + (nint)start * Lanes;
        float* f = q + (nint)start * Lanes;
        LaneSums local = sums;
        for (int n = 0; n < length; n++, u += Lanes, f += Lanes)
        {
            Vector512<float> product = Of(table + (nint)index[n] * Stencil.Stride, u, step);
            product.Store(f);
            local.Add(product * Load(u));
        }

        sums = local;
    }

    /// <summary>r = b - A x; adds r . r to the sums.</summary>
    public static void Residual(StencilOperator a, int row, int start, int length, float* b, float* x, float* r, ref LaneSums sums)
    {
        float* to = r + (nint)start * Lanes;
        Residual(a, row, start, length, b, x, to);
        LaneSums local = sums;
        for (int n = 0; n < length; n++)
        {
            Vector512<float> value = Load(to + (nint)n * Lanes);
            local.Add(value * value);
        }

        sums = local;
    }

    /// <summary>residual = b - A z, into a buffer that starts at this row's first node.</summary>
    public static void Residual(StencilOperator a, int row, int start, int length, float* b, float* z, float* residual)
    {
        float* table = a.Table;
        int* index = a.Index + start;
        nint* step = a.Rows.Steps + (nint)StencilRows.Around * row;
        float* u = z + (nint)start * Lanes;
        float* f = b + (nint)start * Lanes;
        for (int n = 0; n < length; n++, u += Lanes, f += Lanes)
        {
            (Load(f) - Of(table + (nint)index[n] * Stencil.Stride, u, step)).Store(residual + (nint)n * Lanes);
        }
    }

    /// <summary>r = b - A x with differences, products and sums in double precision; adds r . r to the sums, and to the others the squares of a_ii x_i.</summary>
    public static void ExactResidual(StencilOperator a, int row, int start, int length, float* b, float* x, float* r, ref LaneSums sums, ref LaneSums sizes)
    {
        float* table = a.Table;
        int* index = a.Index + start;
        nint* step = a.Rows.Steps + (nint)StencilRows.Around * row;
        LaneSums local = sums, size = sizes;
        for (int n = 0; n < length; n++)
        {
            float* c = table + (nint)index[n] * Stencil.Stride;
            float* u = x + (nint)(start + n) * Lanes;
            (Vector512<double> low, Vector512<double> high) = Vector512.Widen(Load(b + (nint)(start + n) * Lanes));
            (Vector512<double> ownLow, Vector512<double> ownHigh) = Vector512.Widen(Load(u));
            for (int k = 0; k < Stencil.Size; k++)
            {
                if (k != Stencil.Centre)
                {
                    (Vector512<double> otherLow, Vector512<double> otherHigh) = Vector512.Widen(Load(u + step[k / 3] + (k % 3 - 1) * Lanes));
                    Vector512<double> weight = Vector512.Create((double)c[k]);
                    low += weight * (otherLow - ownLow);
                    high += weight * (otherHigh - ownHigh);
                }
            }

            local.Low += low * low;
            local.High += high * high;
            Vector512.Narrow(low, high).Store(r + (nint)(start + n) * Lanes);
            Vector512<float> diagonal = c[Stencil.Centre] > 0 ? Vector512.Create(1 / c[Stencil.Centre]) * Load(u) : Vector512<float>.Zero;
            size.Add(diagonal * diagonal);
        }

        (sums, sizes) = (local, size);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector512<float> Of(float* c, float* u, nint* step)
    {
        Vector512<float> own = Load(u);
        Vector512<float> first = ThreeDifferences(c, u + step[0], own, ThreeDifferences(c + 3, u + step[1], own, ThreeDifferences(c + 6, u + step[2], own, Vector512<float>.Zero)));
        Vector512<float> second = ThreeDifferences(c + 9, u + step[3], own, ThreeDifferences(c + 15, u + step[5], own, Fma(All(c + 12), own - Load(u - Lanes), All(c + 14) * (own - Load(u + Lanes)))));
        Vector512<float> third = ThreeDifferences(c + 18, u + step[6], own, ThreeDifferences(c + 21, u + step[7], own, ThreeDifferences(c + 24, u + step[8], own, Vector512<float>.Zero)));
        return first + (second + third);
    }
}
