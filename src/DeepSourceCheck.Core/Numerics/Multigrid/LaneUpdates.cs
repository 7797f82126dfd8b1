using System.Runtime.Intrinsics;

using static DeepSourceCheck.Core.Numerics.Multigrid.LaneMath;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>The vector updates of conjugate gradients over a stretch of nodes, each lane with its own factor.</summary>
internal static unsafe class LaneUpdates
{
    /// <summary>r -= alpha q + mean; adds r . r, and r itself to its piece's total.</summary>
    /// <param name="start">First node.</param>
    /// <param name="length">Nodes.</param>
    /// <param name="alpha">Factors.</param>
    /// <param name="q">A p.</param>
    /// <param name="r">Residual.</param>
    /// <param name="pieces">Piece of node 0 and on, or null where all nodes are of piece 0; nodes of piece -1 stay zero.</param>
    /// <param name="means">What is taken off the nodes of each piece.</param>
    /// <param name="totals">Sums of r over each piece.</param>
    /// <param name="squares">Sums of r . r.</param>
    public static void ReduceResidual(
        int start, int length, Vector512<float> alpha, float* q, float* r, int* pieces, ReadOnlySpan<Vector512<float>> means, Span<LaneSums> totals, ref LaneSums squares)
    {
        LaneSums local = squares;
        float* to = r + (nint)start * Lanes;
        float* from = q + (nint)start * Lanes;
        if (pieces == null)
        {
            Vector512<float> mean = means[0], total = Vector512<float>.Zero;        // a row is short: its sum loses nothing in single precision
            for (int n = 0; n < length; n++, to += Lanes, from += Lanes)
            {
                Vector512<float> value = Fma(-alpha, Load(from), Load(to) - mean);
                value.Store(to);
                total += value;
                local.Add(value * value);
            }

            totals[0].Add(total);
        }
        else
        {
            for (int n = 0; n < length; n++, to += Lanes, from += Lanes)
            {
                int piece = pieces[start + n];
                if (piece >= 0)
                {
                    Vector512<float> value = Fma(-alpha, Load(from), Load(to) - means[piece]);
                    value.Store(to);
                    totals[piece].Add(value);
                    local.Add(value * value);
                }
            }
        }

        squares = local;
    }

    /// <summary>x += alpha p, then p = z - mean + beta p.</summary>
    /// <param name="start">First node.</param>
    /// <param name="length">Nodes.</param>
    /// <param name="alpha">Factors for x.</param>
    /// <param name="beta">Factors for p.</param>
    /// <param name="x">Solution.</param>
    /// <param name="p">Direction.</param>
    /// <param name="z">Preconditioned residual.</param>
    /// <param name="pieces">As in <see cref="ReduceResidual"/>.</param>
    /// <param name="means">What is taken off the nodes of each piece.</param>
    public static void Advance(int start, int length, Vector512<float> alpha, Vector512<float> beta, float* x, float* p, float* z, int* pieces, ReadOnlySpan<Vector512<float>> means)
    {
        nint at = (nint)start * Lanes;
        Vector512<float> mean = means[0];
        for (int n = 0; n < length; n++, at += Lanes)
        {
            if (pieces != null)
            {
                int piece = pieces[start + n];
                if (piece < 0)
                {
                    continue;
                }

                mean = means[piece];
            }

            Vector512<float> direction = Load(p + at);
            Fma(alpha, direction, Load(x + at)).Store(x + at);
            Fma(beta, direction, Load(z + at) - mean).Store(p + at);
        }
    }

    /// <summary>x += alpha p.</summary>
    public static void Add(int start, int length, Vector512<float> alpha, float* x, float* p)
    {
        nint at = (nint)start * Lanes;
        for (int n = 0; n < length; n++, at += Lanes)
        {
            Fma(alpha, Load(p + at), Load(x + at)).Store(x + at);
        }
    }

    /// <summary>Adds a . b to the sums: products rounded to single precision, their sum in double.</summary>
    public static void Dot(int start, int length, float* a, float* b, ref LaneSums sums)
    {
        LaneSums local = sums;
        nint at = (nint)start * Lanes;
        for (int n = 0; n < length; n++, at += Lanes)
        {
            local.Add(Load(a + at) * Load(b + at));
        }

        sums = local;
    }

    /// <summary>Adds z . r to the sums, and z itself to its piece's total.</summary>
    /// <param name="start">First node.</param>
    /// <param name="length">Nodes.</param>
    /// <param name="z">Preconditioned residual.</param>
    /// <param name="r">Residual.</param>
    /// <param name="pieces">As in <see cref="ReduceResidual"/>.</param>
    /// <param name="totals">Sums of z over each piece.</param>
    /// <param name="sums">Sums of z . r.</param>
    public static void DotAndTotal(int start, int length, float* z, float* r, int* pieces, Span<LaneSums> totals, ref LaneSums sums)
    {
        LaneSums local = sums;
        nint at = (nint)start * Lanes;
        Vector512<float> total = Vector512<float>.Zero;
        for (int n = 0; n < length; n++, at += Lanes)
        {
            Vector512<float> value = Load(z + at);
            local.Add(value * Load(r + at));
            if (pieces == null)
            {
                total += value;
            }
            else if (pieces[start + n] is >= 0 and int piece)
            {
                totals[piece].Add(value);
            }
        }

        totals[0].Add(total);
        sums = local;
    }
}
