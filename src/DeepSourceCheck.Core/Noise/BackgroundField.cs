using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Leadfields;

namespace DeepSourceCheck.Core.Noise;

/// <summary>
/// The field of independent random dipoles at the study's sensors, scaled to the sensors to which the noise tables refer: unit variance in the tables' EEG derivation, unit mean square
/// over the tables' magnetometers. At each place three independent dipoles along the axes make the orientation random.
/// </summary>
public sealed class BackgroundField
{
    private BackgroundField(double[]? eeg, double[]? meg, int columns)
    {
        Eeg = eeg;
        Meg = meg;
        Columns = columns;
    }

    /// <summary>Electrodes x columns, relative to the tables' derivation and so without unit; null without EEG.</summary>
    public double[]? Eeg { get; }

    /// <summary>MEG channels x columns, relative to the tables' magnetometers: without unit, planar gradiometers [1/m]; null without MEG.</summary>
    public double[]? Meg { get; }

    /// <summary>Three a place.</summary>
    public int Columns { get; }

    /// <summary>Computes and scales the field.</summary>
    /// <param name="places">Places of the dipoles [m].</param>
    /// <param name="study">Leadfields of the study's sensors.</param>
    /// <param name="tables">Leadfields of the tables' sensors: the derivation's electrodes, and magnetometers.</param>
    /// <param name="derivation">Weights over the tables' electrodes.</param>
    public static BackgroundField Compute(IReadOnlyList<Vec3> places, ILeadfieldSource study, ILeadfieldSource tables, double[] derivation)
    {
        int columns = 3 * places.Count;
        (double[] eeg, double[] meg) = Matrix(places, study);
        (double[] tableEeg, double[] tableMeg) = Matrix(places, tables);
        double variance = NoiseModel.UnitVariance(new NoisePattern(null, tableEeg, columns), derivation);
        double meanSquare = tableMeg.Sum(x => x * x) / tables.MegRows;
        Scale(eeg, 1 / Math.Sqrt(variance));
        Scale(meg, 1 / Math.Sqrt(meanSquare));
        return new BackgroundField(study.EegRows > 0 ? eeg : null, study.MegRows > 0 ? meg : null, columns);
    }

    private static (double[] Eeg, double[] Meg) Matrix(IReadOnlyList<Vec3> places, ILeadfieldSource source)
    {
        int columns = 3 * places.Count;
        var eeg = new double[source.EegRows * columns];
        var meg = new double[source.MegRows * columns];
        var block = new LeadfieldBlock(source.EegRows, source.MegRows);
        Vec3[] positions = [.. places];
        for (int from = 0; from < positions.Length; from += LeadfieldBlock.Lanes)
        {
            int n = Math.Min(LeadfieldBlock.Lanes, positions.Length - from);
            block.Load(positions.AsSpan(from, n), default);
            source.Fill(block);
            Copy(block.Eeg, eeg, source.EegRows, from, n, columns);
            Copy(block.Meg, meg, source.MegRows, from, n, columns);
        }

        return (eeg, meg);
    }

    private static void Copy(double[] lanes, double[] matrix, int rows, int from, int count, int columns)
    {
        for (int row = 0; row < rows; row++)
        {
            for (int axis = 0; axis < 3; axis++)
            {
                for (int lane = 0; lane < count; lane++)
                {
                    matrix[row * columns + 3 * (from + lane) + axis] = lanes[LeadfieldBlock.At(row, axis) + lane];
                }
            }
        }
    }

    private static void Scale(double[] matrix, double factor)
    {
        for (int k = 0; k < matrix.Length; k++)
        {
            matrix[k] *= factor;
        }
    }
}
