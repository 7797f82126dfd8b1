using System.Runtime.Intrinsics;

using static DeepSourceCheck.Core.Numerics.Multigrid.LaneMath;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>The vector updates of conjugate gradients over a stretch of nodes, each lane with its own factor.</summary>
internal static unsafe class LaneUpdates
{
    /// <summary>r -= alpha q; adds r . r to the sums.</summary>
    public static void ReduceResidual(int start, int length, Vector512<float> alpha, float* q, float* r, ref LaneSums sums)
    {
        LaneSums local = sums;
        float* to = r + (nint)start * Lanes;
        float* from = q + (nint)start * Lanes;
        for (int n = 0; n < length; n++, to += Lanes, from += Lanes)
        {
            Vector512<float> value = Fma(-alpha, Load(from), Load(to));
            value.Store(to);
            local.Add(value * value);
        }

        sums = local;
    }

    /// <summary>x += alpha p, then p = z + beta p.</summary>
    public static void Advance(int start, int length, Vector512<float> alpha, Vector512<float> beta, float* x, float* p, float* z)
    {
        nint at = (nint)start * Lanes;
        for (int n = 0; n < length; n++, at += Lanes)
        {
            Vector512<float> direction = Load(p + at);
            Fma(alpha, direction, Load(x + at)).Store(x + at);
            Fma(beta, direction, Load(z + at)).Store(p + at);
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
}
