using DeepSourceCheck.Core.Leadfields;

namespace DeepSourceCheck.Tests.Support;

/// <summary>Leadfields from arrays: [point][row][axis].</summary>
internal sealed class FixedSource(double[][][] eeg, double[][][] meg) : ILeadfieldSource
{
    public int EegRows => eeg.Length == 0 ? 0 : eeg[0].Length;

    public int MegRows => meg.Length == 0 ? 0 : meg[0].Length;

    public LeadfieldMethod Method { get; } = new("EEG leadfield: from arrays", "MEG leadfield: from arrays");

    public void Fill(LeadfieldBlock block)
    {
        Copy(eeg, block.Eeg, block.SourceIndices);
        Copy(meg, block.Meg, block.SourceIndices);
    }

    private static void Copy(double[][][] values, double[] lanes, int[] points)
    {
        for (int lane = 0; values.Length > 0 && lane < LeadfieldBlock.Lanes; lane++)
        {
            double[][] rows = values[points[lane]];
            for (int row = 0; row < rows.Length; row++)
            {
                for (int axis = 0; axis < 3; axis++)
                {
                    lanes[LeadfieldBlock.At(row, axis) + lane] = rows[row][axis];
                }
            }
        }
    }
}
