using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Noise;
using DeepSourceCheck.Core.Regions;

namespace DeepSourceCheck.Core.Attribution;

// CompetingNoise.cs - what another active source adds to the noise.
//   In every trial its moment m_c has the stated rms, a direction that is any with equal chance, and a place that is any dipole of its region with equal chance, anew
//   from trial to trial:  E[q q'] = (m_c^2 / 3) I, so that its covariance is K_c = (m_c^2 / 3) mean over dipoles d of L_d L_d'.
//   The detection that is left: b' (C + sum_c K_c)^-1 b. K_c has at most as many dimensions as there are channels, so that it is its own low-rank factor for a region of
//   thousands of dipoles. Nothing is projected out: the dipoles of a cortex span nearly every pattern, and a projection would leave nothing of any response.
//   A large region is taken at evenly picked dipoles.
// Source: an interference of known covariance in the general linear model (textbook; derived).

/// <summary>Covariance of other sources at electrodes and MEG channels.</summary>
public sealed class CompetingNoise
{
    /// <summary>Dipoles of a region that are taken at most.</summary>
    public const int MostDipoles = 4096;

    private readonly double[] _perMoment;
    private readonly int _eeg, _meg;

    /// <summary>Computes the covariance of one region at unit moment.</summary>
    /// <param name="source">Leadfields, unreferenced.</param>
    /// <param name="region">Where the other source may be.</param>
    /// <param name="cancellation">Stops between blocks.</param>
    public CompetingNoise(ILeadfieldSource source, FilledRegion region, CancellationToken cancellation)
    {
        const int Lanes = LeadfieldBlock.Lanes;
        _eeg = source.EegRows;
        _meg = source.MegRows;
        int rows = _eeg + _meg;
        int[] picked = Picked.Of(region, MostDipoles);
        Dipoles = picked.Length;
        _perMoment = new double[rows * rows];
        var block = new LeadfieldBlock(_eeg, _meg);
        var values = new double[rows * 3 * Lanes];
        for (int from = 0; from < picked.Length; from += Lanes)
        {
            cancellation.ThrowIfCancellationRequested();
            int count = Picked.Load(block, region, picked.AsSpan(from, Math.Min(Lanes, picked.Length - from)));
            source.Fill(block);
            block.Eeg.CopyTo(values, 0);
            block.Meg.CopyTo(values, block.Eeg.Length);
            for (int k = 0; k < values.Length; k += Lanes)
            {
                values.AsSpan(k + count, Lanes - count).Clear();    // repeated dipoles count once
            }

            Add(values, rows);
        }

        double share = 1 / (3.0 * picked.Length);
        for (int i = 0; i < rows; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                _perMoment[i * rows + j] = _perMoment[j * rows + i] = share * _perMoment[i * rows + j];
            }
        }
    }

    /// <summary>Dipoles that were taken.</summary>
    public int Dipoles { get; }

    /// <summary>The noise with other sources in it.</summary>
    /// <param name="noise">Noise of one trial.</param>
    /// <param name="sources">Other sources and their rms moments [A m].</param>
    /// <param name="joint">Whether EEG and MEG are read together: other sources reach both, so that their noise is no longer independent.</param>
    public static NoiseCovariance Add(NoiseCovariance noise, IReadOnlyList<(CompetingNoise Source, double Moment)> sources, bool joint)
    {
        double[] eeg = [.. noise.Eeg], meg = [.. noise.Meg];
        double[]? cross = noise.Cross is { } given ? [.. given] : joint && noise.EegRows > 0 && noise.MegRows > 0 ? new double[noise.EegRows * noise.MegRows] : null;
        foreach ((CompetingNoise source, double moment) in sources)
        {
            double power = moment * moment;
            if (power == 0)
            {
                continue;
            }

            Add(eeg, source, power, 0, 0, noise.EegRows, noise.EegRows);
            Add(meg, source, power, source._eeg, source._eeg, noise.MegRows, noise.MegRows);
            if (cross is not null)
            {
                Add(cross, source, power, 0, source._eeg, noise.EegRows, noise.MegRows);
            }
        }

        return new NoiseCovariance
        {
            EegRows = noise.EegRows,
            MegRows = noise.MegRows,
            Eeg = eeg,
            Meg = meg,
            Cross = cross is not null && (noise.Cross is not null || cross.Any(c => c != 0)) ? cross : null,
            EegSamples = noise.EegSamples,
            MegSamples = noise.MegSamples,
        };
    }

    private static void Add(double[] to, CompetingNoise source, double power, int firstRow, int firstColumn, int rows, int columns)
    {
        int all = source._eeg + source._meg;
        for (int i = 0; i < rows; i++)
        {
            for (int j = 0; j < columns; j++)
            {
                to[i * columns + j] += power * source._perMoment[(firstRow + i) * all + firstColumn + j];
            }
        }
    }

    // Lower triangle += X X', one vector of eight dipoles per row and axis.
    private void Add(double[] values, int rows)
    {
        ReadOnlySpan<Vector512<double>> x = MemoryMarshal.Cast<double, Vector512<double>>(values.AsSpan());
        for (int i = 0; i < rows; i++)
        {
            Vector512<double> x0 = x[3 * i], x1 = x[3 * i + 1], x2 = x[3 * i + 2];
            for (int j = 0; j <= i; j++)
            {
                _perMoment[i * rows + j] += Vector512.Sum(x0 * x[3 * j] + x1 * x[3 * j + 1] + x2 * x[3 * j + 2]);
            }
        }
    }
}
