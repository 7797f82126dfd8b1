using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>The landmarks of a real head: those that the study gives, set on the scalp, and the others by the head's shape.</summary>
public static class LandmarkPlacement
{
    /// <summary>Key of the study that gives landmarks.</summary>
    internal const string Key = "head.voxels.landmarks_mm";

    /// <summary>A given landmark that is moved farther is told of [m].</summary>
    public const double TellMove = 0.005;

    /// <summary>Sets given landmarks on the scalp and finds the others.</summary>
    /// <param name="scalp">Scalp.</param>
    /// <param name="given">Places [m] by name: none, some or all of Nz, Iz, LPA and RPA.</param>
    /// <exception cref="InputException">A name is not one of the four, a place is not finite, or lies more than 20 mm from the scalp; every such landmark is named.</exception>
    public static HeadLandmarks On(ScalpSurface scalp, IReadOnlyDictionary<string, Vec3>? given = null)
    {
        given ??= new Dictionary<string, Vec3>();
        List<InputProblem> problems = [];
        Dictionary<string, Landmark> placed = [];
        foreach ((string name, Vec3 position) in given.OrderBy(g => g.Key, StringComparer.Ordinal))
        {
            if (!HeadLandmarks.Names.Contains(name))
            {
                problems.Add(new(null, 0, 0, Key, $"there is no landmark '{name}'{NearestName.Hint(name, HeadLandmarks.Names)}; use {string.Join(", ", HeadLandmarks.Names)}"));
                continue;
            }

            if (!position.IsFinite)
            {
                problems.Add(new(null, 0, 0, $"{Key}.{name}", "has a coordinate that is not a number"));
                continue;
            }

            (Vec3 foot, double distance) = scalp.Nearest(position);
            if (Math.Abs(distance) > ElectrodePlacement.LargestMove)
            {
                problems.Add(new(null, 0, 0, $"{Key}.{name}", string.Create(CultureInfo.InvariantCulture,
                    $"lies {Si.ToMm(Math.Abs(distance)):0.0} mm {(distance > 0 ? "outside" : "inside")} the scalp; at most {Si.ToMm(ElectrodePlacement.LargestMove):0} mm is allowed: check the unit and the frame of the volume")));
                continue;
            }

            placed[name] = new(name, foot, true, 0, Math.Abs(distance));
        }

        if (problems.Count > 0)
        {
            throw new InputException(problems);
        }

        // Each as far from the scalp as no reading of a point on skin should be.
        string[] said = [.. placed.Values.Where(l => l.MovedBy > TellMove).Select(l => string.Create(CultureInfo.InvariantCulture,
            $"{Key}.{l.Name} lies {Si.ToMm(l.MovedBy):0.0} mm from the scalp and was moved onto it: check the frame of the landmarks"))];
        bool allGiven = placed.Count == HeadLandmarks.Names.Count;
        said = [.. said, .. LandmarkChecks.Judge(scalp, placed.Values, frameToo: allGiven).Select(w => $"{Key}: {w}")];
        if (allGiven)
        {
            return new(placed["Nz"], placed["Iz"], placed["LPA"], placed["RPA"], said);
        }

        HeadLandmarks found = LandmarkFinder.Find(scalp, placed.GetValueOrDefault("Nz")?.Position, placed.GetValueOrDefault("Iz")?.Position);
        Landmark Of(Landmark l) => placed.GetValueOrDefault(l.Name, l);
        Landmark[] all = [.. found.All.Select(Of)];
        string stated = string.Join(", ", all.Where(l => !l.Given).Select(l => string.Create(CultureInfo.InvariantCulture,
            $"{l.Name} ({Si.ToMm(l.Position.X):0}, {Si.ToMm(l.Position.Y):0}, {Si.ToMm(l.Position.Z):0}) mm, to about {Si.ToMm(l.Uncertainty):0} mm")));
        return new(all[0], all[1], all[2], all[3], [.. said, .. found.Warnings, $"landmarks found by the head's shape, with x to the right, y to the front and z up: {stated}; give {Key} where they are known"]);
    }
}
