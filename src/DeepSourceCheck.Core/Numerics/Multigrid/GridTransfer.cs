using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using static DeepSourceCheck.Core.Numerics.Multigrid.LaneMath;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>Interpolation from a coarse grid to the fine one, and its transpose, one row of fine nodes at a time.</summary>
/// <remarks>
/// Weights are kept by coarse node: 27 of them, one for each fine node about the coinciding one, in the places of a <see cref="Stencil"/>; without unit, none negative. A fine node that
/// nothing couples to has weight zero throughout, so that it stays zero. Immutable once built.
/// </remarks>
internal sealed unsafe class GridTransfer
{
    private readonly float[] _weights;
    private readonly float* _at;
    private readonly int[] _base;

    /// <param name="fine">Fine grid.</param>
    /// <param name="coarse">Coarse grid: <see cref="RowGrid.Coarsened"/> of it.</param>
    /// <param name="weights">Pinned; <see cref="Stencil.Stride"/> floats a coarse node.</param>
    public GridTransfer(RowGrid fine, RowGrid coarse, float[] weights)
    {
        (Fine, Coarse, _weights) = (fine, coarse, weights);
        _at = (float*)Unsafe.AsPointer(ref MemoryMarshal.GetArrayDataReference(weights));
        _base = new int[coarse.Ny * coarse.Nz];
        for (int row = 0; row < _base.Length; row++)
        {
            _base[row] = coarse.Base(row % coarse.Ny, row / coarse.Ny) ?? 0;
        }
    }

    /// <summary>Fine grid.</summary>
    public RowGrid Fine { get; }

    /// <summary>Coarse grid.</summary>
    public RowGrid Coarse { get; }

    /// <summary>Memory [bytes].</summary>
    public long Bytes => 4L * _weights.Length;

    /// <summary>Weights of a coarse node, without unit.</summary>
    public ReadOnlySpan<float> Weights(int coarse) => _weights.AsSpan(coarse * Stencil.Stride, Stencil.Size);

    /// <summary>coarse = transpose of the interpolation times fine.</summary>
    public void RestrictAll(LaneVector fine, LaneVector coarse)
    {
        coarse.Span.Clear();
        for (int row = 0; row < Fine.Ny * Fine.Nz; row++)
        {
            (_, int length, int offset) = Fine.Row(row % Fine.Ny, row / Fine.Ny);
            if (length > 0)
            {
                Restrict(row % Fine.Ny, row / Fine.Ny, fine.At + (nint)offset * Lanes, coarse.At);
            }
        }
    }

    /// <summary>fine = interpolation of coarse.</summary>
    public void ProlongAll(LaneVector coarse, LaneVector fine)
    {
        for (int row = 0; row < Fine.Ny * Fine.Nz; row++)
        {
            if (Fine.Row(row % Fine.Ny, row / Fine.Ny).Length > 0)
            {
                Prolong(row % Fine.Ny, row / Fine.Ny, coarse.At, fine.At, add: false);
            }
        }
    }

    /// <summary>coarse += transpose of the interpolation times one row of fine values.</summary>
    /// <param name="y">Row.</param>
    /// <param name="z">Plane.</param>
    /// <param name="values">Lane 0 of the row's first node; what stands in the two nodes before and behind the row meets weights of zero and must be finite.</param>
    /// <param name="coarse">Lane 0 of coarse node 0.</param>
    public void Restrict(int y, int z, float* values, float* coarse)
    {
        (int first, int length, _) = Fine.Row(y, z);
        int from = first >> 1, to = (first + length) >> 1;       // coarse x that have the row's nodes about them
        for (int cz = z >> 1; cz <= (z + 1) >> 1; cz++)
        {
            for (int cy = y >> 1; cy <= (y + 1) >> 1; cy++)
            {
                int node = _base[cy + Coarse.Ny * cz] + from;
                float* w = _at + (nint)node * Stencil.Stride + 3 * (y - 2 * cy + 1) + 9 * (z - 2 * cz + 1);
                float* c = coarse + (nint)node * Lanes;
                float* v = values + (nint)(2 * from - first) * Lanes;
                for (int x = from; x <= to; x++, w += Stencil.Stride, c += Lanes, v += 2 * Lanes)
                {
                    Three(w, v, Load(c)).Store(c);
                }
            }
        }
    }

    /// <summary>One row of fine values, plus the interpolation of coarse ones.</summary>
    /// <param name="y">Row.</param>
    /// <param name="z">Plane.</param>
    /// <param name="coarse">Lane 0 of coarse node 0.</param>
    /// <param name="fine">Lane 0 of fine node 0.</param>
    /// <param name="add">False to overwrite the fine values.</param>
    public void Prolong(int y, int z, float* coarse, float* fine, bool add)
    {
        (int first, int length, int offset) = Fine.Row(y, z);
        float* row = fine + (nint)offset * Lanes;
        if (!add)
        {
            new Span<float>(row, length * Lanes).Clear();
        }

        for (int cz = z >> 1; cz <= (z + 1) >> 1; cz++)
        {
            for (int cy = y >> 1; cy <= (y + 1) >> 1; cy++)
            {
                int last = first + length - 1;
                float* w = _at + (nint)_base[cy + Coarse.Ny * cz] * Stencil.Stride + 3 * (y - 2 * cy + 1) + 9 * (z - 2 * cz + 1);
                float* c = coarse + (nint)_base[cy + Coarse.Ny * cz] * Lanes;
                int x = first;
                if ((x & 1) != 0)
                {
                    Between(x >> 1, w, c, row);
                    x++;
                }

                float* u = row + (nint)(x - first) * Lanes;
                for (; x < last; x += 2, u += 2 * Lanes)
                {
                    nint at = x >> 1;
                    float* wx = w + at * Stencil.Stride;
                    float* cx = c + at * Lanes;
                    Vector512<float> left = Load(cx);
                    Fma(All(wx + 1), left, Load(u)).Store(u);
                    Fma(All(wx + 2), left, Fma(All(wx + Stencil.Stride), Load(cx + Lanes), Load(u + Lanes))).Store(u + Lanes);
                }

                if (x == last)
                {
                    Fma(All(w + (nint)(x >> 1) * Stencil.Stride + 1), Load(c + (nint)(x >> 1) * Lanes), Load(u)).Store(u);
                }
            }
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Between(nint x, float* w, float* c, float* u) =>
        Fma(All(w + x * Stencil.Stride + 2), Load(c + x * Lanes), Fma(All(w + (x + 1) * Stencil.Stride), Load(c + (x + 1) * Lanes), Load(u))).Store(u);
}
