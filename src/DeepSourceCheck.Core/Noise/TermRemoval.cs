using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Noise;

// TermRemoval.cs - takes the room's spatial terms out of every MEG channel.
//   P = I - D U U' D^-1, U an orthonormal basis of D^-1 T, T what the channels read of the terms, D the instrument density of each channel.
//   D only puts unlike coils on one scale (T beside T/m); for an array of one kind P = I - U U'. It does not bear on the matched filter: filters of P x are the
//   filters w of x with w' T = 0, whatever D. Terms that the array does not see (homogeneous fields in ideal gradiometers) leave no direction in U.
// Source: signal-space projection, Uusitalo & Ilmoniemi 1997, Med Biol Eng Comput 35:135 (from memory).

/// <summary>Builds the operator that removes the room's spatial terms.</summary>
public static class TermRemoval
{
    // A term whose reading is smaller than this share of what its points would read without cancelling is rounding; a gradiometer's imbalance is 1e-4 and more.
    private const double Seen = 1e-10;

    /// <summary>Operator over the MEG channels.</summary>
    /// <param name="channels">MEG channels; more than <see cref="EnvironmentNoise.Terms"/>.</param>
    /// <param name="densities">Instrument density of each channel [T/sqrt(Hz) or T/m/sqrt(Hz)]; where it is not positive 1 stands in.</param>
    /// <param name="removed">Directions that are taken out: terms that the array sees.</param>
    public static ChannelOperator Of(IReadOnlyList<MegChannel> channels, IReadOnlyList<double> densities, out int removed)
    {
        const int n = EnvironmentNoise.Terms;
        int m = channels.Count;
        double[] scale = [.. densities.Select(d => d > 0 ? d : 1)];
        double[] pattern = EnvironmentNoise.Pattern(channels), size = EnvironmentNoise.Size(channels);
        var columns = new List<(double[] Column, double Size)>();
        for (int term = 0; term < n; term++)
        {
            double[] column = [.. Enumerable.Range(0, m).Select(k => pattern[k * n + term] / scale[k])];
            columns.Add((column, Math.Sqrt(Enumerable.Range(0, m).Sum(k => Math.Pow(size[k * n + term] / scale[k], 2)))));
        }

        // Gram-Schmidt twice over, largest remainder first: orthonormal to rounding, and rank-revealing.
        var basis = new List<double[]>();
        columns.RemoveAll(c => !(c.Size > 0));
        while (columns.Count > 0)
        {
            (double[] column, double whole) = columns.MaxBy(c => Norm(c.Column) / c.Size);
            if (Norm(column) <= Seen * whole)
            {
                break;
            }

            Orthogonalise(column, basis);
            double norm = Norm(column);
            double[] unit = [.. column.Select(x => x / norm)];
            basis.Add(unit);
            columns.RemoveAll(c => ReferenceEquals(c.Column, column));
            columns.ForEach(c => Orthogonalise(c.Column, [unit]));
        }

        removed = basis.Count;
        return ChannelOperator.Removal([.. channels.Select(c => c.Name)],
            [.. basis.Select(u => ((double[])[.. u.Select((x, k) => x / scale[k])], (double[])[.. u.Select((x, k) => x * scale[k])]))]);
    }

    private static void Orthogonalise(double[] column, IReadOnlyList<double[]> basis)
    {
        for (int pass = 0; pass < 2; pass++)
        {
            foreach (double[] unit in basis)
            {
                double dot = 0;
                for (int k = 0; k < column.Length; k++)
                {
                    dot += unit[k] * column[k];
                }

                for (int k = 0; k < column.Length; k++)
                {
                    column[k] -= dot * unit[k];
                }
            }
        }
    }

    private static double Norm(double[] column) => Math.Sqrt(column.Sum(x => x * x));
}
