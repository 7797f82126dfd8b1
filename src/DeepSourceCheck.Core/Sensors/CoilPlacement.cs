using System.Globalization;

using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>Checks coils that are given against a real head.</summary>
public static class CoilPlacement
{
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
