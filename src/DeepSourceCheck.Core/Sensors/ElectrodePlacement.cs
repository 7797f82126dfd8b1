using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>Puts measured electrode positions on a spherical head.</summary>
public static class ElectrodePlacement
{
    /// <summary>Farthest that an electrode may lie from the sphere [m]: beyond it, positions and head are in different frames or units.</summary>
    public const double LargestMove = 0.020;

    /// <summary>Reduces each position to its direction from the centre and sets it on the outer surface.</summary>
    /// <param name="names">Names, all different.</param>
    /// <param name="positions">Positions [m], as many as names, in the frame of the head.</param>
    /// <param name="head">Head.</param>
    /// <param name="file">Table that they come from, for messages.</param>
    /// <returns>Electrodes in the same order with the distance that each was moved; all in use.</returns>
    /// <exception cref="InputException">Every electrode that is named twice, not finite, at the centre, or more than 20 mm from the surface.</exception>
    public static Electrode[] OnSphere(IReadOnlyList<string> names, IReadOnlyList<Vec3> positions, LayeredSphere head, string? file = null)
    {
        if (names.Count != positions.Count)
        {
            throw new ArgumentException($"{names.Count} names and {positions.Count} positions.", nameof(positions));
        }

        List<InputProblem> problems = [];
        HashSet<string> seen = new(StringComparer.Ordinal);
        Electrode[] electrodes = new Electrode[names.Count];
        for (int k = 0; k < names.Count; k++)
        {
            Vec3 offset = positions[k] - head.Centre;
            double distance = offset.Norm, moved = Math.Abs(distance - head.OuterRadius);
            string? problem = !seen.Add(names[k]) ? "is listed twice; names must be unique"
                : !offset.IsFinite ? "has a coordinate that is not a number; give its position or leave the electrode out"
                : distance <= LayeredSphere.CentreTolerance ? "lies at the head's centre, which has no direction to the scalp; check its coordinates"
                : moved > LargestMove ? TooFar(distance, head)
                : null;
            if (problem is not null)
            {
                problems.Add(new(file, 0, 0, "electrodes", $"electrode '{names[k]}' {problem}"));
                continue;
            }

            electrodes[k] = new(names[k], head.Centre + (head.OuterRadius / distance) * offset, InAverage: true, moved);
        }

        return problems.Count == 0 ? electrodes : throw new InputException(problems);
    }

    private static string TooFar(double distance, LayeredSphere head) => string.Create(
        CultureInfo.InvariantCulture,
        $"is {Si.ToMm(Math.Abs(distance - head.OuterRadius)):0.0} mm {(distance > head.OuterRadius ? "outside" : "inside")} the scalp of {head.Name} "
        + $"(radius {Si.ToMm(head.OuterRadius):0.#} mm); at most {Si.ToMm(LargestMove):0} mm is allowed: "
        + $"check the unit, the frame and the head's centre and radius");
}
