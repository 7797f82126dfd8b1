using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Leadfields;
using DeepSourceCheck.Core.Leadfields.Spheres;
using DeepSourceCheck.Core.Sensors;

namespace DeepSourceCheck.Core.Directions;

// CentreShift.cs - how far the MEG of a deep source depends on where the sphere's centre was put.
//   In a sphere every MEG row is Q . (r0 x H), r0 from the centre: near the centre the field grows with |r0|, so that a centre that is off by 5 mm changes
//   a source 10 mm away by about half. The closed form needs no radius: only the centre is moved, coils and source stay.
// Source: [Sarvas 1987]; a sphere fitted to a real inner skull leaves 5.5 mm of misfit (standard deviation, see the region library).

/// <summary>Change of MEG power for one size of centre shift.</summary>
/// <param name="Shift">Shift [m], along each axis in turn, both ways.</param>
/// <param name="LowestDb">Smallest of the six powers against the unshifted one [dB]; minus infinity where a shifted centre meets the source.</param>
/// <param name="HighestDb">Largest of them [dB].</param>
public sealed record CentreShiftRange(double Shift, double LowestDb, double HighestDb);

/// <summary>How much a region's MEG depends on the sphere's centre.</summary>
/// <param name="Distance">Distance of its centroid from the centre [m].</param>
/// <param name="Ranges">One a shift, smallest first; empty where the unshifted power is zero.</param>
public sealed record CentreSensitivity(double Distance, IReadOnlyList<CentreShiftRange> Ranges);

/// <summary>Moves a sphere's centre and looks what becomes of MEG.</summary>
public static class CentreShift
{
    /// <summary>Sources nearer to the centre than this [m] are told their range.</summary>
    public const double Near = 0.025;

    /// <summary>The shifts [m].</summary>
    public static IReadOnlyList<double> Shifts { get; } = [0.005, 0.010];

    /// <summary>Best-channel power of the strongest tangential direction under shifted centres, against the unshifted one.</summary>
    /// <param name="position">Source [m].</param>
    /// <param name="centre">Centre of the sphere [m].</param>
    /// <param name="channels">MEG channels; at least one.</param>
    /// <param name="deviations">Noise standard deviation of each channel [T or T/m].</param>
    public static CentreSensitivity Of(Vec3 position, Vec3 centre, IReadOnlyList<MegChannel> channels, IReadOnlyList<double> deviations)
    {
        double nominal = Strongest(position, centre, channels, deviations).BestChannel;
        if (!(nominal > 0))
        {
            return new((position - centre).Norm, []);
        }

        return new((position - centre).Norm,
        [
            .. Shifts.Select(shift =>
            {
                double[] powers = [.. Moves(shift).Select(move => Strongest(position, centre + move, channels, deviations).BestChannel / nominal)];
                return new CentreShiftRange(shift, 10 * Math.Log10(powers.Min()), 10 * Math.Log10(powers.Max()));
            }),
        ]);
    }

    /// <summary>Both ways along the three axes [m].</summary>
    /// <param name="shift">Length of the shift [m].</param>
    public static IEnumerable<Vec3> Moves(double shift) =>
        [new(shift, 0, 0), new(-shift, 0, 0), new(0, shift, 0), new(0, -shift, 0), new(0, 0, shift), new(0, 0, -shift)];

    /// <summary>Second singular value and best-channel power of the strongest direction for one centre.</summary>
    /// <returns>s2 [1/(A m)] and power [1/(A m)^2] over the noise; both 0 at the centre itself.</returns>
    internal static (double Second, double BestChannel) Strongest(Vec3 position, Vec3 centre, IReadOnlyList<MegChannel> channels, IReadOnlyList<double> deviations)
    {
        var block = new LeadfieldBlock(0, channels.Count);
        block.Load([position], default);
        new MegSphere(centre, channels).Fill(block);
        for (int k = 0; k < block.Meg.Length; k++)
        {
            block.Meg[k] /= deviations[k / (3 * LeadfieldBlock.Lanes)];
        }

        var split = new SplitBlock();
        DirectionSplit.Compute(block.Meg, channels.Count, block, new ImportedHead(), split);
        if (split.States[0] == SplitState.Undefined)
        {
            return (0, 0);
        }

        Vec3 v1 = split.V(0, 0);
        double best = 0;
        for (int row = 0; row < channels.Count; row++)
        {
            double reading = block.Meg[LeadfieldBlock.At(row, 0)] * v1.X + block.Meg[LeadfieldBlock.At(row, 1)] * v1.Y + block.Meg[LeadfieldBlock.At(row, 2)] * v1.Z;
            best = Math.Max(best, reading * reading);
        }

        return (split.S(1, 0), best);
    }
}
