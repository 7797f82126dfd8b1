using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>Holds given landmarks against the shape of the head.</summary>
/// <remarks>
/// The shape is asked as if no landmark were given. Tolerances are three to four times what people differ by, and what <see cref="LandmarkFinder"/> says of itself (common practice,
/// no source): a warning means a misplaced landmark or a head that does not stand upright in its frame.
/// </remarks>
public static class LandmarkChecks
{
    /// <summary>Angle [rad] of a line between two landmarks against the head's own axes from which it is told.</summary>
    public static readonly double MostAngle = Si.FromDegrees(10);

    /// <summary>Distance from where the shape has a landmark from which it is told [head lengths], 30 mm in an adult.</summary>
    public const double MostOff = 0.15;

    // Nz to Iz in head lengths, LPA to RPA in head breadths.
    private const double ShortestMidline = 0.75, LongestMidline = 1.15, ShortestAcross = 0.65, LongestAcross = 1.15;

    /// <summary>What in the given landmarks contradicts the head; nothing where none is given.</summary>
    /// <param name="scalp">Scalp.</param>
    /// <param name="given">Given landmarks, on the scalp.</param>
    /// <param name="frameToo">Whether the shape's own contradictions to x right, y front, z up are told too.</param>
    /// <returns>Sentences; each names landmarks and figures.</returns>
    public static IReadOnlyList<string> Judge(ScalpSurface scalp, IReadOnlyCollection<Landmark> given, bool frameToo)
    {
        if (given.Count == 0)
        {
            return [];
        }

        HeadFrame frame = new(scalp);
        Dictionary<string, Landmark> by = given.ToDictionary(l => l.Name);
        List<string> said = frameToo ? [.. frame.Contradictions()] : [];
        Dictionary<string, double> off = LandmarkFinder.Find(scalp).All.Where(f => by.ContainsKey(f.Name)).ToDictionary(f => f.Name, f => (by[f.Name].Position - f.Position).Norm);
        foreach ((string name, double distance) in off.Where(o => o.Value > MostOff * frame.Length))
        {
            said.Add(string.Create(CultureInfo.InvariantCulture,
                $"{name} lies {Si.ToMm(distance):0} mm from where the shape of an upright head has it: the landmark is misplaced, or the head is pitched or turned in its frame"));
        }

        if (by.TryGetValue("Nz", out Landmark? nasion) && by.TryGetValue("Iz", out Landmark? inion))
        {
            said.AddRange(Length("Nz to Iz", (nasion.Position - inion.Position).Norm, frame.Length, "length", ShortestMidline, LongestMidline));
            said.AddRange(Pitch(frame, nasion.Position, inion.Position, off));
        }

        if (by.TryGetValue("LPA", out Landmark? left) && by.TryGetValue("RPA", out Landmark? right))
        {
            Vec3 across = right.Position - left.Position;
            said.AddRange(Length("LPA to RPA", across.Norm, frame.Breadth, "breadth", ShortestAcross, LongestAcross));
            double angle = Math.Atan2(Vec3.Cross(across, frame.Rightwards).Norm, Vec3.Dot(across, frame.Rightwards));
            if (angle > MostAngle)
            {
                said.Add(string.Create(CultureInfo.InvariantCulture,
                    $"the line from LPA to RPA stands {Si.ToDegrees(angle):0} degrees off the head's own axis from left to right: one of the two is misplaced ({Suspect(off, "LPA", "RPA")} lies farther from where the shape has it)"));
            }
        }

        return said;
    }

    private static IEnumerable<string> Length(string what, double length, double whole, string of, double shortest, double longest)
    {
        double share = length / whole;
        if (share < shortest || share > longest)
        {
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{what} measures {Si.ToMm(length):0} mm, {share:0.00} of the head's {of} ({Si.ToMm(whole):0} mm), where {shortest:0.00} to {longest:0.00} is usual: look at both");
        }
    }

    private static IEnumerable<string> Pitch(HeadFrame frame, Vec3 nasion, Vec3 inion, Dictionary<string, double> off)
    {
        // In an upright head Iz lies a little above Nz; positive: the face looks down.
        Vec3 forwards = Vec3.Cross(new(0, 0, 1), frame.Rightwards).Unit(), line = inion - nasion;
        double usual = Math.Atan(LandmarkFinder.InionAboveNasion), found = Math.Atan2(line.Z, -Vec3.Dot(line, forwards)), pitch = found - usual;
        if (Math.Abs(pitch) > MostAngle)
        {
            yield return string.Create(CultureInfo.InvariantCulture,
                $"Nz and Iz say that the head is pitched by {Si.ToDegrees(Math.Abs(pitch)):0} degrees, its face {(pitch > 0 ? "down" : "up")}, against the frame x right, y front, z up ({Suspect(off, "Nz", "Iz")} lies farther from where the shape of an upright head has it): correct the landmark; or bring an upright volume, as the edge of a generated MEG array and the library's regions follow the frame");
        }
    }

    private static string Suspect(Dictionary<string, double> off, string a, string b) => off[a] > off[b] ? a : b;
}
