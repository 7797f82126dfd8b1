using DeepSourceCheck.Core.Directions;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;

namespace DeepSourceCheck.Tests.Core.Directions;

/// <summary>Splits of matrices and of leadfields for the tests.</summary>
internal static class Splits
{
    /// <summary>Splits matrices [row * 3 + axis] of one shape, eight at a time; matrix k belongs to position k.</summary>
    public static List<(SplitBlock Block, int Lane)> Of(IReadOnlyList<double[]> matrices, IReadOnlyList<Vec3> positions, IHead head)
    {
        List<(SplitBlock, int)> result = [];
        for (int first = 0; first < matrices.Count; first += LeadfieldBlock.Lanes)
        {
            int rows = matrices[first].Length / 3, count = Math.Min(LeadfieldBlock.Lanes, matrices.Count - first);
            LeadfieldBlock block = new(0, rows);
            block.Load([.. positions.Skip(first).Take(count)], default);
            for (int lane = 0; lane < LeadfieldBlock.Lanes; lane++)
            {
                double[] matrix = matrices[first + Math.Min(lane, count - 1)];
                for (int k = 0; k < matrix.Length; k++)
                {
                    block.Meg[k * LeadfieldBlock.Lanes + lane] = matrix[k];
                }
            }

            SplitBlock split = new();
            DirectionSplit.Compute(block.Meg, rows, block, head, split);
            result.AddRange(Enumerable.Range(0, count).Select(lane => (split, lane)));
        }

        return result;
    }

    /// <summary>Splits one matrix.</summary>
    public static SplitBlock Of(double[] matrix, Vec3 position, IHead head) => Of([matrix], [position], head)[0].Block;
}
