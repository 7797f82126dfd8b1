using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Results;

using MathNet.Numerics.Distributions;

namespace DeepSourceCheck.Core.Detection;

// FilterErrors.cs - for what a spatial filter is built by mistake.
//   A fixed set of draws, the same for every dipole: a displacement, a head, a covariance.
//   Displacement: direction k of a golden-angle spiral of as many points as draws; length s r, r the quantile (b + 1/2)/draws of the chi distribution with 3 degrees of freedom, b the
//   bit-reversed k: together an isotropic normal distribution of standard deviation s an axis.
//   Head: in turn. Covariance: in turn out of a few seeded draws of what so many samples give (EstimatedWhitening).

/// <summary>What is wrong about a realistic filter, draw by draw.</summary>
public sealed class FilterErrors
{
    /// <summary>Draws, a power of two.</summary>
    public const int Draws = 32;

    /// <summary>Different draws of the covariance.</summary>
    public const int Covariances = 8;

    private const int Halvings = 6;

    private readonly double[][] _eeg, _meg, _both;

    /// <param name="placeError">Standard deviation of the place, each axis [m].</param>
    /// <param name="sources">Leadfields of the heads for which the filter is built; at least one.</param>
    /// <param name="space">Channels.</param>
    /// <param name="eegSamples">Independent samples of the EEG covariance; null for exact.</param>
    /// <param name="megSamples">Independent samples of the MEG covariance; null for exact.</param>
    /// <param name="nearest">Index of the imported point nearest to a place [m]; null for heads that compute leadfields anywhere.</param>
    public FilterErrors(
        double placeError, IReadOnlyList<ILeadfieldSource> sources, SignalSpace space, double? eegSamples, double? megSamples, Func<Vec3, int>? nearest)
    {
        Sources = sources;
        Nearest = nearest;
        EegSamples = eegSamples;
        MegSamples = megSamples;
        Displacements = [.. Enumerable.Range(0, Draws).Select(k => placeError * Length(k) * GoldenSpiral.Point(k, Draws))];
        double? both = eegSamples is { } e && megSamples is { } m ? Math.Min(e, m) : eegSamples ?? megSamples;
        int eeg = space.Rank(Modality.Eeg), meg = space.Rank(Modality.Meg), joint = space.Rank(Modality.Both);
        _eeg = Estimates(eeg, eegSamples, 1);
        _meg = Estimates(meg, megSamples, 2);
        _both = eeg > 0 && meg > 0 ? Estimates(joint, both, 3) : [];
    }

    /// <summary>Leadfields of the heads for which the filter is built.</summary>
    public IReadOnlyList<ILeadfieldSource> Sources { get; }

    /// <summary>Index of the imported point nearest to a place [m], or null.</summary>
    public Func<Vec3, int>? Nearest { get; }

    /// <summary>Displacement of each draw [m].</summary>
    public IReadOnlyList<Vec3> Displacements { get; }

    /// <summary>Number of independent samples, without unit, of the EEG covariance; null for exact.</summary>
    public double? EegSamples { get; }

    /// <summary>Number of independent samples, without unit, of the MEG covariance; null for exact.</summary>
    public double? MegSamples { get; }

    /// <summary>Head of a draw.</summary>
    public ILeadfieldSource SourceOf(int draw) => Sources[draw % Sources.Count];

    /// <summary>Inverse of the estimated covariance in coordinates that whiten the true one, row by row; empty where it is exact.</summary>
    internal double[] InverseOf(Modality modality, int draw)
    {
        double[][] all = modality switch { Modality.Eeg => _eeg, Modality.Meg => _meg, _ => _both };
        return all.Length == 0 ? [] : all[draw / Sources.Count % all.Length];
    }

    /// <summary>Where the filter is built for [m]: the displaced place, or a nearer one on the other side or closer by where the head admits no dipole there.</summary>
    /// <param name="place">Place of the dipole [m].</param>
    /// <param name="draw">Index of the draw.</param>
    /// <param name="head">Head.</param>
    public Vec3 Place(Vec3 place, int draw, IHead head)
    {
        Vec3 d = Displacements[draw];
        for (int k = 0; k < Halvings; k++, d *= 0.5)
        {
            if (head.WhyRefused(place + d) is null)
            {
                return place + d;
            }

            if (head.WhyRefused(place - d) is null)
            {
                return place - d;
            }
        }

        return place;
    }

    private static double Length(int k) => Math.Sqrt(ChiSquared.InvCDF(3, (DirectionSets.Start(k, Draws) + 0.5) / Draws));

    private static double[][] Estimates(int rank, double? samples, ulong stream)
    {
        if (samples is not { } nu || rank == 0)
        {
            return [];
        }

        var estimates = new double[Covariances][];
        Parallel.For(0, Covariances, k => estimates[k] = EstimatedWhitening.Inverse(rank, nu, stream * 1_000_003 + (ulong)k));
        return estimates;
    }
}
