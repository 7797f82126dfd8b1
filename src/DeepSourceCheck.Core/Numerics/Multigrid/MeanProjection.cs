using System.Runtime.Intrinsics;

using static DeepSourceCheck.Core.Numerics.Multigrid.LaneMath;

namespace DeepSourceCheck.Core.Numerics.Multigrid;

/// <summary>Takes the mean over each unconnected piece off a block: the part that the operator neither sees nor gives.</summary>
internal static unsafe class MeanProjection
{
    /// <summary>Subtracts the means, summed in double precision; returns for each lane the largest sum over one piece relative to the sum of sizes over all nodes.</summary>
    /// <param name="pieces">Pieces; nodes in none stay as they are.</param>
    /// <param name="vector">Values.</param>
    /// <param name="relative">Length 16; overwritten.</param>
    public static void Apply(Pieces pieces, LaneVector vector, Span<double> relative)
    {
        var sums = new LaneSums[pieces.Count];
        var sizes = default(LaneSums);
        for (int n = 0; n < vector.Nodes; n++)
        {
            int piece = pieces.Of(n);
            if (piece >= 0)
            {
                Vector512<float> value = Load(vector.At + (nint)n * Lanes);
                sums[piece].Add(value);
                sizes.Add(Vector512.Abs(value));
            }
        }

        Span<double> sum = stackalloc double[Lanes], size = stackalloc double[Lanes];
        sizes.CopyTo(size);
        relative.Clear();
        var means = new Vector512<float>[pieces.Count];
        for (int piece = 0; piece < pieces.Count; piece++)
        {
            sums[piece].CopyTo(sum);
            for (int lane = 0; lane < Lanes; lane++)
            {
                relative[lane] = Math.Max(relative[lane], size[lane] > 0 ? Math.Abs(sum[lane]) / size[lane] : 0);
            }

            var count = Vector512.Create((double)pieces.Sizes[piece]);
            means[piece] = Vector512.Narrow(sums[piece].Low / count, sums[piece].High / count);
        }

        for (int n = 0; n < vector.Nodes; n++)
        {
            int piece = pieces.Of(n);
            if (piece >= 0)
            {
                float* at = vector.At + (nint)n * Lanes;
                (Load(at) - means[piece]).Store(at);
            }
        }
    }
}
