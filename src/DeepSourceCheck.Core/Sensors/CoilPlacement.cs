using System.Globalization;

using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>Checks coils that are given against a real head.</summary>
public static class CoilPlacement
{
    private const int Listed = 6;

    /// <summary>Refuses a generated array of which a coil lies inside the head, and tells where coils lie too near to it for finite elements.</summary>
    /// <param name="scalp">Scalp; cavities count as inside.</param>
    /// <param name="channels">Channels of the array.</param>
    /// <param name="voxel">Edge of the head's voxels [m].</param>
    /// <param name="warnings">Receives what the user must know.</param>
    /// <exception cref="InputException">Names the channels with a point inside the head, and how far.</exception>
    public static void CheckGenerated(ScalpSurface scalp, IReadOnlyList<MegChannel> channels, double voxel, List<string> warnings)
    {
        (MegChannel Channel, double Gap)[] gaps = [.. channels.Select(c => (c, c.Points.Min(p => scalp.Nearest(p.Position).SignedDistance)))];
        (MegChannel Channel, double Gap)[] inside = [.. gaps.Where(g => g.Gap <= 0).OrderBy(g => g.Gap)];
        if (inside.Length > 0)
        {
            throw new InputException(null, CoilArray.Key + ".gap_mm", string.Create(CultureInfo.InvariantCulture,
                $"{inside.Length} of {channels.Count} channels of the generated array have a coil point inside the head, below the scalp by: {Names(inside, -1)}; coils must lie outside: give a larger gap, or, for gradiometers, a smaller baseline"));
        }

        if (TooNear("the generated MEG array", gaps, voxel) is { } warning)
        {
            warnings.Add(warning);
        }
    }

    /// <summary>Says which coils of a table lie nearer to the scalp than a voxel; null where none does.</summary>
    /// <param name="scalp">Scalp.</param>
    /// <param name="channels">Channels, all outside the head.</param>
    /// <param name="voxel">Edge of the head's voxels [m].</param>
    /// <param name="file">Table that they come from.</param>
    public static string? TooNear(ScalpSurface scalp, IReadOnlyList<MegChannel> channels, double voxel, string file) =>
        TooNear(file, [.. channels.Select(c => (c, c.Points.Min(p => scalp.Nearest(p.Position).SignedDistance)))], voxel);

    private static string? TooNear(string what, (MegChannel Channel, double Gap)[] gaps, double voxel)
    {
        (MegChannel Channel, double Gap)[] near = [.. gaps.Where(g => g.Gap < voxel).OrderBy(g => g.Gap)];
        return near.Length == 0 ? null : string.Create(CultureInfo.InvariantCulture,
            $"{what}: {near.Length} of {gaps.Length} channels have a coil point nearer to the scalp than one voxel ({Si.ToMm(voxel):0.##} mm): {Names(near, 1)}; the steps of the voxels enter their fields, and hardly a sensor has so thin a wall");
    }

    private static string Names((MegChannel Channel, double Gap)[] gaps, int sign)
    {
        string names = string.Join(", ", gaps.Take(Listed).Select(g => string.Create(CultureInfo.InvariantCulture, $"{g.Channel.Name} {Si.ToMm(sign * g.Gap):0.0} mm")));
        return gaps.Length > Listed ? string.Create(CultureInfo.InvariantCulture, $"{names} and {gaps.Length - Listed} more") : names;
    }

    /// <summary>Refuses coils inside the head.</summary>
    /// <param name="scalp">Scalp; cavities count as inside.</param>
    /// <param name="channels">Channels.</param>
    /// <param name="file">Table that they come from, for messages.</param>
    /// <exception cref="InputException">Every channel with a point inside the head or a place that is not a number; says how far inside.</exception>
    public static void CheckOutside(ScalpSurface scalp, IReadOnlyList<MegChannel> channels, string? file = null)
    {
        List<InputProblem> problems = [];
        foreach (MegChannel channel in channels)
        {
            double deepest = 0;
            foreach (CoilPoint point in channel.Points)
            {
                deepest = !point.Position.IsFinite ? double.NaN
                    : double.IsFinite(deepest) && scalp.Contains(point.Position) ? Math.Max(deepest, -scalp.Nearest(point.Position).SignedDistance)
                    : deepest;
            }

            if (double.IsNaN(deepest))
            {
                problems.Add(new(file, 0, 0, "coils", $"channel {channel.Name} has a coil point whose place is not a number; give finite coordinates"));
            }
            else if (deepest > 0)
            {
                problems.Add(new(file, 0, 0, "coils", string.Create(CultureInfo.InvariantCulture,
                    $"channel {channel.Name} has a coil point inside the head, {Si.ToMm(deepest):0.0} mm below the scalp; coils must lie outside: check the coils' frame and unit, or the volume's frame")));
            }
        }

        if (problems.Count > 0)
        {
            throw new InputException(problems);
        }
    }
}
