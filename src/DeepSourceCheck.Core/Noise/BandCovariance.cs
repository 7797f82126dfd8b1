namespace DeepSourceCheck.Core.Noise;

/// <summary>Integrates noise terms over a band.</summary>
public static class BandCovariance
{
    /// <summary>Covariance of one trial, band-passed by a rectangular filter.</summary>
    /// <param name="terms">Independent causes of noise.</param>
    /// <param name="eegRows">Number of electrodes.</param>
    /// <param name="megRows">Number of MEG channels.</param>
    /// <param name="low">Lower edge [Hz].</param>
    /// <param name="high">Upper edge [Hz].</param>
    public static NoiseCovariance Integrate(IReadOnlyList<INoiseTerm> terms, int eegRows, int megRows, double low, double high) =>
        Integrate(terms, eegRows, megRows, term => BandIntegral.Nodes(low, high, term.Breakpoints));

    /// <summary>Covariance as a weighted sum over frequencies.</summary>
    /// <param name="terms">Independent causes of noise.</param>
    /// <param name="eegRows">Number of electrodes.</param>
    /// <param name="megRows">Number of MEG channels.</param>
    /// <param name="nodes">Frequencies and weights [Hz] of each term.</param>
    public static NoiseCovariance Integrate(IReadOnlyList<INoiseTerm> terms, int eegRows, int megRows, Func<INoiseTerm, IReadOnlyList<BandNode>> nodes)
    {
        var eeg = new double[eegRows * eegRows];
        var meg = new double[megRows * megRows];
        double[]? cross = null;
        foreach (INoiseTerm term in terms)
        {
            double e = 0, m = 0, c = 0;
            foreach ((double f, double weight) in nodes(term))
            {
                NoisePower power = term.At(f);
                e += weight * power.Eeg;
                m += weight * power.Meg;
                c += weight * power.Cross;
            }

            Add(eeg, eegRows, term.Eeg, e);
            Add(meg, megRows, term.Meg, m);
            if (c > 0 && term.Eeg?.Factor is { } left && term.Meg?.Factor is { } right)
            {
                cross ??= new double[eegRows * megRows];
                AddProduct(cross, left, eegRows, right, megRows, term.Eeg.Columns, c);
            }
        }

        return new NoiseCovariance { EegRows = eegRows, MegRows = megRows, Eeg = eeg, Meg = meg, Cross = cross };
    }

    private static void Add(double[] covariance, int rows, NoisePattern? pattern, double power)
    {
        if (pattern is null || power == 0 || rows == 0)
        {
            return;
        }

        for (int k = 0; pattern.Diagonal is not null && k < rows; k++)
        {
            covariance[k * rows + k] += power * pattern.Diagonal[k];
        }

        if (pattern.Factor is { } factor)
        {
            AddProduct(covariance, factor, rows, factor, rows, pattern.Columns, power);
        }
    }

    // target += power * left * right', all row by row; symmetric when left is right, since each sum runs in the same order
    private static void AddProduct(double[] target, double[] left, int leftRows, double[] right, int rightRows, int columns, double power)
    {
        for (int i = 0; i < leftRows; i++)
        {
            ReadOnlySpan<double> a = left.AsSpan(i * columns, columns);
            for (int j = ReferenceEquals(left, right) ? i : 0; j < rightRows; j++)
            {
                double value = power * Dot(a, right.AsSpan(j * columns, columns));
                target[i * rightRows + j] += value;
                if (ReferenceEquals(left, right) && j != i)
                {
                    target[j * rightRows + i] += value;
                }
            }
        }
    }

    private static double Dot(ReadOnlySpan<double> a, ReadOnlySpan<double> b)
    {
        var sum = System.Runtime.Intrinsics.Vector512<double>.Zero;
        int k = 0;
        for (; k + 8 <= a.Length; k += 8)
        {
            sum += System.Runtime.Intrinsics.Vector512.Create(a.Slice(k, 8)) * System.Runtime.Intrinsics.Vector512.Create(b.Slice(k, 8));
        }

        double rest = System.Runtime.Intrinsics.Vector512.Sum(sum);
        for (; k < a.Length; k++)
        {
            rest += a[k] * b[k];
        }

        return rest;
    }
}
