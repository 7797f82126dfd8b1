using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>Coils about a head of voxels must lie in the air around it.</summary>
public static class CoilsOutside
{
    /// <summary>Refuses coil points inside the head; a sinus or an ear canal that is closed to the outside counts as inside.</summary>
    /// <param name="head">Head.</param>
    /// <param name="channels">Channels.</param>
    /// <param name="file">File that the coils come from, or null.</param>
    /// <param name="key">Key of the study that the coils come from, or null.</param>
    /// <exception cref="InputException">Names every such channel once, with the depth of its deepest point and the tissue there.</exception>
    public static void Check(VoxelHead head, IReadOnlyList<MegChannel> channels, string? file = null, string? key = null)
    {
        List<InputProblem> problems = [];
        foreach (MegChannel channel in channels)
        {
            if (channel.Points.Count == 0 || channel.Points.Any(p => !p.Position.IsFinite))
            {
                problems.Add(new(file, 0, 0, key, $"channel {channel.Name} has {(channel.Points.Count == 0 ? "no coil point; give it at least one" : "a coil point whose place is not a number; give finite coordinates")}"));
                continue;
            }

            CoilPoint[] inside = [.. channel.Points.Where(p => !head.IsOutside(p.Position))];
            if (inside.Length > 0)
            {
                Vec3 deepest = inside.MaxBy(p => head.Depth(p.Position) ?? 0).Position;
                problems.Add(new(file, 0, 0, key, string.Create(CultureInfo.InvariantCulture,
                    $"channel {channel.Name} has a coil point inside the head, at {HeadChecks.Place(deepest)} in {head.TissueAt(deepest)}, {Si.ToMm(Math.Max(0, head.Depth(deepest) ?? 0)):0.0} mm below its surface; coil points must lie in the air around it: check the coils' frame and unit")));
            }
        }

        if (problems.Count > 0)
        {
            throw new InputException(problems);
        }
    }
}
