using System.Runtime.Intrinsics;

using DeepSourceCheck.Core.Detection;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;

namespace DeepSourceCheck.Core.Planning;

// ProfileTally.cs - SNR of one trial over the cortex by depth below the inner skull and by source angle.
//   Each dipole stands along the cortex's own normal, as pyramidal cells do, and carries the whole moment of the response. Per bin: percentiles over its points of the channel-mean and of the
//   best channel.
// Source of the measure and of the comparison by depth: [Goldenholz et al. 2009]. The bins' widths are ours.

/// <summary>Counts the cortical comparison of one region. One a thread, merged at the end: the same figures in any order.</summary>
internal sealed class ProfileTally
{
    /// <summary>Width of a bin of depth [m].</summary>
    public const double DepthStep = 0.005;

    /// <summary>Bins of the angle between 0 and 90 degrees.</summary>
    public const int AngleBins = 6;

    /// <summary>From this angle on the cortex is called upright [rad]: 60 degrees.</summary>
    public const double Upright = Math.PI / 3;

    private const double AngleStep = Math.PI / 2 / AngleBins;

    // Depths come from distances in single precision: a value this close below an edge stands on it.
    private const double EdgeTolerance = 1e-5;

    private readonly long _dipoles;
    private readonly IMeasure[] _measures;
    private readonly double _gain;
    private readonly List<QuantileStore[]?> _byDepth = [];
    private readonly List<QuantileStore[]?> _byAngle = [];
    private readonly List<QuantileStore[]?> _uprightByDepth = [];
    private int _without;

    /// <param name="plan">What is read.</param>
    /// <param name="dipoles">Dipoles of the region, over all threads.</param>
    public ProfileTally(EvaluationPlan plan, long dipoles)
    {
        _dipoles = dipoles;
        _gain = plan.Gain;
        _measures = [.. plan.Measures.Where(m => m is ChannelMeanMeasure or BestChannelMeasure)];
    }

    /// <summary>Reads the block that <paramref name="signals"/> holds; leaves another direction asked.</summary>
    /// <param name="signals">Channels of the block.</param>
    /// <param name="places">Places of its dipoles, at most eight.</param>
    public void Read(BlockSignals signals, ReadOnlySpan<CorticalPlace?> places)
    {
        Span<double> x = stackalloc double[Vector512<double>.Count], y = stackalloc double[Vector512<double>.Count], z = stackalloc double[Vector512<double>.Count];
        for (int lane = 0; lane < places.Length; lane++)
        {
            // A lane without a normal is read along nothing and left out below.
            (x[lane], y[lane], z[lane]) = places[lane]?.Normal ?? default;
        }

        signals.Ask(DirectionMode.Alone, new LaneDirection(Vector512.Create<double>(x), Vector512.Create<double>(y), Vector512.Create<double>(z)));
        for (int m = 0; m < _measures.Length; m++)
        {
            Vector512<double> power = _measures[m].Power(signals) * Vector512.Create(_gain);
            for (int lane = 0; lane < places.Length; lane++)
            {
                if (places[lane] is { } place)
                {
                    int depth = (int)(place.Depth / DepthStep + EdgeTolerance);
                    Bin(_byDepth, depth)[m].Add(power[lane]);
                    Bin(_byAngle, Math.Min((int)(place.SourceAngle / AngleStep + EdgeTolerance), AngleBins - 1))[m].Add(power[lane]);
                    if (place.SourceAngle >= Upright)
                    {
                        Bin(_uprightByDepth, depth)[m].Add(power[lane]);
                    }
                }
            }
        }

        foreach (CorticalPlace? place in places)
        {
            _without += place is null ? 1 : 0;
        }
    }

    /// <summary>Adds another thread's counts.</summary>
    public void Merge(ProfileTally other)
    {
        Merge(_byDepth, other._byDepth);
        Merge(_byAngle, other._byAngle);
        Merge(_uprightByDepth, other._uprightByDepth);
        _without += other._without;
    }

    /// <summary>The comparison.</summary>
    public CorticalProfile Profile() => new(Bins(_byDepth, DepthStep), Bins(_byAngle, AngleStep), Bins(_uprightByDepth, DepthStep), _without);

    private void Merge(List<QuantileStore[]?> into, List<QuantileStore[]?> from)
    {
        for (int bin = 0; bin < from.Count; bin++)
        {
            if (from[bin] is { } stores)
            {
                QuantileStore[] own = Bin(into, bin);
                for (int m = 0; m < own.Length; m++)
                {
                    own[m].Merge(stores[m]);
                }
            }
        }
    }

    private QuantileStore[] Bin(List<QuantileStore[]?> bins, int index)
    {
        while (bins.Count <= index)
        {
            bins.Add(null);
        }

        return bins[index] ??= [.. _measures.Select(_ => new QuantileStore(_dipoles))];
    }

    private List<ProfileBin> Bins(List<QuantileStore[]?> bins, double step)
    {
        List<ProfileBin> found = [];
        for (int bin = 0; bin < bins.Count; bin++)
        {
            if (bins[bin] is { } stores && stores.Max(s => s.Count) is > 0 and var points)
            {
                found.Add(new(bin * step, (bin + 1) * step, (int)points,
                    [.. _measures.Select((m, k) => new ProfileFigure(m.Modality, m.Name, stores[k].Percentiles(RegionReport.Decibels)))]));
            }
        }

        return found;
    }
}
