using System.Runtime.Intrinsics;

using static DeepSourceCheck.Core.Numerics.Multigrid.LaneMath;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

// GaussSeidel.cs - one row of a sweep over the nodes in their order, or against it.
//   z_i <- (b_i + sum_k w_k z_k) / sum_k w_k
// Lanes are right-hand sides, so nodes of a row follow one another and no colouring is needed. A backward sweep is the transpose of a forward one: one before and one
// after the coarse correction make the cycle symmetric. Source: [Trottenberg, Oosterlee, Schueller 2001], chapters 2 and 4.

/// <summary>Gauss-Seidel sweeps over one row of nodes.</summary>
internal static unsafe class GaussSeidel
{
    /// <summary>Forward from z = 0: only neighbours that were visited count, what else z holds is not read.</summary>
    /// <remarks>b may be the memory of another vector than z; node i of both is read before z_i is written.</remarks>
    public static void ForwardFromZero(StencilOperator a, int row, int start, int length, float* b, float* z)
    {
        float* table = a.Table;
        int* index = a.Index + start;
        nint* step = a.Rows.Steps + (nint)StencilRows.Around * row;
        nint s0 = step[0], s1 = step[1], s2 = step[2], s3 = step[3];
        float* u = z + (nint)start * Lanes;
        float* f = b + (nint)start * Lanes;
        for (int n = 0; n < length; n++, u += Lanes, f += Lanes)
        {
            float* c = table + (nint)index[n] * Stencil.Stride;
            Vector512<float> first = Three(c, u + s0, Three(c + 3, u + s1, Load(f)));
            Vector512<float> second = Three(c + 6, u + s2, Three(c + 9, u + s3, Vector512<float>.Zero));
            Vector512<float> sum = Fma(All(c + 12), Load(u - Lanes), first + second);
            (sum * All(c + Stencil.Centre)).Store(u);
        }
    }

    /// <summary>Forward from what z holds.</summary>
    public static void Forward(StencilOperator a, int row, int start, int length, float* b, float* z)
    {
        float* table = a.Table;
        int* index = a.Index + start;
        nint* step = a.Rows.Steps + (nint)StencilRows.Around * row;
        nint s0 = step[0], s1 = step[1], s2 = step[2], s3 = step[3], s5 = step[5], s6 = step[6], s7 = step[7], s8 = step[8];
        float* u = z + (nint)start * Lanes;
        float* f = b + (nint)start * Lanes;
        for (int n = 0; n < length; n++, u += Lanes, f += Lanes)
        {
            float* c = table + (nint)index[n] * Stencil.Stride;
            Vector512<float> first = Three(c, u + s0, Three(c + 3, u + s1, Three(c + 6, u + s2, Load(f))));
            Vector512<float> second = Three(c + 9, u + s3, Three(c + 15, u + s5, Three(c + 18, u + s6, Vector512<float>.Zero)));
            Vector512<float> third = Three(c + 21, u + s7, Three(c + 24, u + s8, All(c + 14) * Load(u + Lanes)));
            Vector512<float> sum = Fma(All(c + 12), Load(u - Lanes), first + (second + third));
            (sum * All(c + Stencil.Centre)).Store(u);
        }
    }

    /// <summary>Backward from what z holds.</summary>
    public static void Backward(StencilOperator a, int row, int start, int length, float* b, float* z)
    {
        float* table = a.Table;
        int* index = a.Index + start;
        nint* step = a.Rows.Steps + (nint)StencilRows.Around * row;
        nint s0 = step[0], s1 = step[1], s2 = step[2], s3 = step[3], s5 = step[5], s6 = step[6], s7 = step[7], s8 = step[8];
        float* u = z + (nint)(start + length - 1) * Lanes;
        float* f = b + (nint)(start + length - 1) * Lanes;
        for (int n = length - 1; n >= 0; n--, u -= Lanes, f -= Lanes)
        {
            float* c = table + (nint)index[n] * Stencil.Stride;
            Vector512<float> first = Three(c, u + s0, Three(c + 3, u + s1, Three(c + 6, u + s2, Load(f))));
            Vector512<float> second = Three(c + 9, u + s3, Three(c + 15, u + s5, Three(c + 18, u + s6, Vector512<float>.Zero)));
            Vector512<float> third = Three(c + 21, u + s7, Three(c + 24, u + s8, All(c + 12) * Load(u - Lanes)));
            Vector512<float> sum = Fma(All(c + 14), Load(u + Lanes), first + (second + third));
            (sum * All(c + Stencil.Centre)).Store(u);
        }
    }

    /// <summary>The residual right after a forward sweep from zero: what the neighbours that came later add, sum over upper k of w_k z_k. One row, into a buffer.</summary>
    public static void ResidualAfterForwardFromZero(StencilOperator a, int row, int start, int length, float* z, float* residual)
    {
        float* table = a.Table;
        int* index = a.Index + start;
        nint* step = a.Rows.Steps + (nint)StencilRows.Around * row;
        nint s5 = step[5], s6 = step[6], s7 = step[7], s8 = step[8];
        float* u = z + (nint)start * Lanes;
        for (int n = 0; n < length; n++, u += Lanes)
        {
            float* c = table + (nint)index[n] * Stencil.Stride;
            Vector512<float> first = Three(c + 15, u + s5, Three(c + 18, u + s6, All(c + 14) * Load(u + Lanes)));
            Vector512<float> second = Three(c + 21, u + s7, Three(c + 24, u + s8, Vector512<float>.Zero));
            (first + second).Store(residual + (nint)n * Lanes);
        }
    }
}
