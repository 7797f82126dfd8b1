using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Numerics;
using DeepSourceCheck.Core.Waveforms;

namespace DeepSourceCheck.Core.Detection;

// SpectralNoise.cs - the noise that a known waveform meets.
//   With the one-sided noise density C(f) and the spectrum A(f) of the waveform of peak 1 the detector's d^2 for fields b of moment a is
//     d^2 = a^2 4 integral |A|^2 b' C(f)^-1 b df = a^2 b' M b
//   M is an inverse covariance: of all channels for the matched filter (in the reference's range), of one reading 1/s^2 = 4 integral |A|^2/S(f) df, of a pair the 2 x 2 case.
// Source: known signal in coloured noise, Kay 1998, Fundamentals of Statistical Signal Processing II, chapter 5 (from memory).

/// <summary>Noise of one trial as a filter sees it that is matched in time to a known waveform of peak 1.</summary>
internal sealed class SpectralNoise
{
    private readonly NoisePower[][] _powers;
    private readonly double[] _energies;
    private readonly IReadOnlyList<NoiseCovariance> _units;

    /// <param name="plain">Channels against the noise of the band.</param>
    /// <param name="spectrum">Noise over frequency.</param>
    /// <param name="waveform">The waveform.</param>
    public SpectralNoise(SignalSpace plain, NoiseSpectrum spectrum, RecordedWaveform waveform)
    {
        _units = spectrum.Units;
        _energies = [.. waveform.Nodes.Select(n => n.Energy)];
        _powers = [.. waveform.Nodes.Select(n => spectrum.At(n.Frequency))];
        int n = plain.Reference?.Outputs ?? 0, m = plain.MegSd.Length;
        double[][] eeg = n == 0 ? [] : [.. _units.Select(u => plain.Reference!.ApplyToCovariance(u.Eeg))];
        double[][] meg = [.. _units.Select(u => u.Meg)];
        EegSd = [.. plain.EegChannels.Select(k => Deviation(t => eeg[t][k * n + k], p => p.Eeg))];
        MegSd = [.. Enumerable.Range(0, m).Select(k => Deviation(t => meg[t][k * m + k], p => p.Meg))];
        EegWhitener = plain.EegWhitener is { } e ? Filter(e.Channels, n, (i, f) => Sum(eeg, i, f, p => p.Eeg)) : null;
        MegWhitener = plain.MegWhitener is { } g ? Filter(g.Channels, m, (i, f) => Sum(meg, i, f, p => p.Meg)) : null;
        double[][] read = [];
        if (plain.Derivations is { } derivations)
        {
            int d = derivations.Outputs;
            read = [.. _units.Select(u => derivations.ApplyToCovariance(u.Eeg))];
            DerivationSd = [.. Enumerable.Range(0, d).Select(k => Deviation(t => read[t][k * d + k], p => p.Eeg))];
        }

        if (plain.JointWhitener is { } joint)
        {
            double[][] cross = [.. _units.Select(u => u.Cross is { } c ? plain.Reference!.ApplyToRows(c, m) : [])];
            JointWhitener = Filter(joint.Channels, n + m, (i, f) => Joint(eeg, meg, cross, n, m, i, f));
            ChannelPairs = Pairs([.. plain.EegChannels], n, eeg, cross, EegSd);
            if (plain.Derivations is { } own)
            {
                double[][] between = [.. _units.Select(u => u.Cross is { } c ? own.ApplyToRows(c, m) : [])];
                DerivationPairs = Pairs([.. Enumerable.Range(0, own.Outputs)], own.Outputs, read, between, DerivationSd);
            }
        }

        PairTable Pairs(int[] rows, int order, double[][] variances, double[][] cross, double[] deviations) =>
            PairsOf(rows, order, variances, meg, cross, deviations, m);
    }

    /// <summary>Standard deviation of each used EEG channel [V].</summary>
    public double[] EegSd { get; }

    /// <summary>Standard deviation of each derivation [V].</summary>
    public double[] DerivationSd { get; } = [];

    /// <summary>Standard deviation of each MEG channel [T or T/m].</summary>
    public double[] MegSd { get; }

    /// <summary>Whitener of the electrodes; null without EEG.</summary>
    public Whitener? EegWhitener { get; }

    /// <summary>Whitener of the MEG channels; null without.</summary>
    public Whitener? MegWhitener { get; }

    /// <summary>Whitener of both; null where they are independent.</summary>
    public Whitener? JointWhitener { get; }

    /// <summary>Pairs of EEG and MEG channels; null where they are independent.</summary>
    public PairTable? ChannelPairs { get; }

    /// <summary>Pairs of derivations and MEG channels; null likewise.</summary>
    public PairTable? DerivationPairs { get; }

    /// <summary>Forms of pairs in readings over their noise: (u x)^2 + (w (y - r x))^2.</summary>
    internal sealed record PairTable(double[] Correlation, (double U, double W)[] Weights);

    private double Deviation(Func<int, double> variance, Func<NoisePower, double> power)
    {
        double[] units = [.. Enumerable.Range(0, _units.Count).Select(variance)];
        double sum = 0;
        for (int i = 0; i < _energies.Length; i++)
        {
            double density = 0;
            for (int t = 0; t < units.Length; t++)
            {
                density += power(_powers[i][t]) * units[t];
            }

            sum += 4 * _energies[i] / density;
        }

        return 1 / Math.Sqrt(sum);
    }

    private double Sum(double[][] matrices, int index, int node, Func<NoisePower, double> power)
    {
        double sum = 0;
        for (int t = 0; t < matrices.Length; t++)
        {
            sum += power(_powers[node][t]) * matrices[t][index];
        }

        return sum;
    }

    private double Joint(double[][] eeg, double[][] meg, double[][] cross, int n, int m, int index, int node)
    {
        int i = index / (n + m), j = index % (n + m);
        if (i < n && j < n)
        {
            return Sum(eeg, i * n + j, node, p => p.Eeg);
        }

        if (i >= n && j >= n)
        {
            return Sum(meg, (i - n) * m + j - n, node, p => p.Meg);
        }

        int at = Math.Min(i, j) * m + Math.Max(i, j) - n;
        double sum = 0;
        for (int t = 0; t < cross.Length; t++)
        {
            sum += cross[t].Length > 0 ? _powers[node][t].Cross * cross[t][at] : 0;
        }

        return sum;
    }

    // Whitener of M^-1 on the rows that span the range: which rows are chosen does not change b' M b.
    private Whitener Filter(IReadOnlyList<int> rows, int order, Func<int, int, double> densityAt)
    {
        int r = rows.Count;
        var inverses = new double[_energies.Length][];
        bool diagonal = true;
        for (int i = 0; i < r && diagonal; i++)
        {
            for (int j = 0; j < i && diagonal; j++)
            {
                for (int k = 0; k < _energies.Length && diagonal; k++)
                {
                    diagonal = densityAt(rows[i] * order + rows[j], k) == 0;
                }
            }
        }

        var covariance = new double[order * order];
        if (diagonal)
        {
            foreach (int row in rows)
            {
                double sum = 0;
                for (int k = 0; k < _energies.Length; k++)
                {
                    sum += 4 * _energies[k] / densityAt(row * order + row, k);
                }

                covariance[row * order + row] = 1 / sum;
            }

            return Whitener.Of(covariance, order);
        }

        Parallel.For(0, _energies.Length, k =>
        {
            var density = new double[r * r];
            for (int i = 0; i < r; i++)
            {
                for (int j = 0; j <= i; j++)
                {
                    density[i * r + j] = density[j * r + i] = densityAt(rows[i] * order + rows[j], k);
                }
            }

            inverses[k] = SymmetricInverse.Of(density, r);
        });
        var total = new double[r * r];
        for (int k = 0; k < inverses.Length; k++)
        {
            for (int at = 0; at < total.Length; at++)
            {
                total[at] += 4 * _energies[k] * inverses[k][at];
            }
        }

        double[] seen = SymmetricInverse.Of(total, r);
        for (int i = 0; i < r; i++)
        {
            for (int j = 0; j < r; j++)
            {
                covariance[rows[i] * order + rows[j]] = seen[i * r + j];
            }
        }

        return Whitener.Of(covariance, order);
    }

    private PairTable PairsOf(int[] rows, int order, double[][] eeg, double[][] meg, double[][] cross, double[] deviations, int m)
    {
        var correlation = new double[rows.Length * m];
        var weights = new (double, double)[rows.Length * m];
        Parallel.For(0, rows.Length, e =>
        {
            int row = rows[e];
            for (int k = 0; k < m; k++)
            {
                double p = 0, q = 0, t = 0;
                for (int i = 0; i < _energies.Length; i++)
                {
                    double x = 0, y = 0, z = 0;
                    for (int c = 0; c < _units.Count; c++)
                    {
                        x += _powers[i][c].Eeg * eeg[c][row * order + row];
                        y += _powers[i][c].Meg * meg[c][k * m + k];
                        z += cross[c].Length > 0 ? _powers[i][c].Cross * cross[c][row * m + k] : 0;
                    }

                    double weight = 4 * _energies[i] / (x * y - z * z);
                    p += weight * y;
                    q += weight * x;
                    t += weight * z;
                }

                double se = deviations[e], sm = MegSd[k];
                (p, q, t) = (p * se * se, q * sm * sm, t * se * sm);
                correlation[e * m + k] = t / q;
                weights[e * m + k] = (Math.Sqrt(p - t * t / q), Math.Sqrt(q));
            }
        });
        return new(correlation, weights);
    }
}
