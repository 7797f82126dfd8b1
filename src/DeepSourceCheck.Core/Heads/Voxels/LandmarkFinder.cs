using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Heads.Voxels;

// Lengths are in head lengths L (front-back extent of the upper head), so that children's and scaled heads are served alike.
//  Nz   the deepest point of the first hollow of the midline profile below the forehead: hollow means below a tape over forehead and nose, by 0.01 L at least, 0.45
//       to 0.88 L below the top. Without a hollow (no face in the volume): 0.69 L below the top.
//  Iz   the midline scalp at the back, 0.075 L above Nz. The bump itself is often not to be felt, still less to be seen in a label volume.
//  PA   the scalp 0.51 of the way from Iz to Nz and 0.105 L below that line, to either side. Where the ear shows as a pit (0.025 L, 5 mm, below tapes over the side in
//       both directions; the temple is a shallower hollow) within 0.13 L of there: 0.025 L in front of the pit's front edge, level with its top.
// The ratios without a hollow or a pit are those of the landmarks on this program's spherical heads (elevations -23, -14 and -32 degrees, R = L/2), which
// were taken from a real head in MNI space: 1/2 (1 + sin 23), 1/2 (sin 23 - sin 14), cos 14/(cos 14 + cos 23), and the height of that line above PA.
// They hold for heads in the usual upright orientation; 5 degrees of nodding move Iz by 0.08 L.

/// <summary>Finds nasion, inion and preauricular points by the shape of the head.</summary>
/// <remarks>The world frame must be x right, y front, z up; what in the shape contradicts it becomes a warning.</remarks>
public static class LandmarkFinder
{
    /// <summary>Height of the nasion below the top of a head without a face, as a ratio to the head's length.</summary>
    public const double NasionBelowTop = 0.69;

    /// <summary>Height of the inion above the nasion, as a ratio to the head's length.</summary>
    public const double InionAboveNasion = 0.075;

    /// <summary>Place of the preauricular points on the way from inion to nasion, as a fraction.</summary>
    public const double PreauricularShare = 0.51;

    /// <summary>Depth of the preauricular points below the line from inion to nasion, as a ratio to the head's length.</summary>
    public const double PreauricularBelow = 0.105;

    // A hollow higher than this below the top is a dent of the forehead, a lower one the mouth or the neck: nodding by 10 degrees moves a nasion by 0.09 L.
    private const double HighestNasion = 0.45, LowestNasion = 0.88;

    private const double HollowDepth = 0.01, PitDepth = 0.025, PitWindow = 0.13, BeforePit = 0.025;

    // How far each may be off, in head lengths (200 mm): 3 mm for a nasion that is seen, 9 mm for an inion by its ratio, 6 mm in front of a pit, 12 mm without one.
    private const double SeenNasion = 0.015, GuessedNasion = 0.075, GuessedInion = 0.045, SeenEar = 0.03, GuessedEar = 0.06;

    /// <summary>The four landmarks.</summary>
    /// <param name="scalp">Scalp.</param>
    /// <param name="knownNasion">Nz [m] where it is known: the others are measured from it.</param>
    /// <param name="knownInion">Iz [m] where it is known.</param>
    /// <returns>The landmarks with their uncertainty, and warnings.</returns>
    public static HeadLandmarks Find(ScalpSurface scalp, Vec3? knownNasion = null, Vec3? knownInion = null)
    {
        HeadFrame frame = new(scalp);
        List<string> warnings = [.. frame.Contradictions()];
        (Landmark nasion, bool seen) = knownNasion is { } known ? (new("Nz", known, true, 0, 0), true) : Nasion(frame);
        if (!seen)
        {
            warnings.Add(string.Create(CultureInfo.InvariantCulture,
                $"no nasion shows in the head's profile (a volume without a face, or y does not point to the front); it was placed by the head's proportions, to about {Si.ToMm(nasion.Uncertainty):0} mm; give landmarks_mm for exact sites"));
        }

        Vec3 inion = knownInion ?? OnMidline(frame, nasion.Position.Z + InionAboveNasion * frame.Length, -1);
        (Landmark left, Landmark right) = Preauricular(frame, nasion.Position, inion);
        Vec3 across = right.Position - left.Position;
        if (Math.Abs(across.Y) > 0.08 * frame.Length || Math.Abs(across.Z) > 0.08 * frame.Length)
        {
            warnings.Add(string.Create(CultureInfo.InvariantCulture,
                $"the preauricular points found differ by {Si.ToMm(Math.Abs(across.Y)):0} mm front to back and {Si.ToMm(Math.Abs(across.Z)):0} mm in height; look at them, or give landmarks_mm"));
        }

        return new(nasion, new("Iz", inion, knownInion is not null, knownInion is null ? GuessedInion * frame.Length : 0, 0), left, right, warnings);
    }

    private static (Landmark Nasion, bool Seen) Nasion(HeadFrame frame) => Hollow(frame) is { } hollow
        ? (new("Nz", hollow, false, SeenNasion * frame.Length, 0), true)
        : (new("Nz", OnMidline(frame, frame.Top - NasionBelowTop * frame.Length, 1), false, GuessedNasion * frame.Length, 0), false);

    /// <summary>The midline scalp at a height, in front (1) or at the back (-1).</summary>
    private static Vec3 OnMidline(HeadFrame frame, double height, int side)
    {
        Vec3 outwards = side * Vec3.Cross(new(0, 0, 1), frame.Rightwards).Unit();
        Vec3 from = new(frame.MidlineX(frame.Centre.Y, height), frame.Centre.Y, height);
        return frame.Scalp.Outermost(from, outwards) ?? frame.Scalp.Nearest(from + frame.Length / 2 * outwards).Point;
    }

    /// <summary>The deepest point of the first hollow of the midline profile below the forehead; null where it is no nasion.</summary>
    private static Vec3? Hollow(HeadFrame frame)
    {
        const int Steps = 720;      // a quarter of a degree
        Vec3 forwards = Vec3.Cross(new(0, 0, 1), frame.Rightwards).Unit(), up = Vec3.Cross(frame.Rightwards, forwards);
        ScalpSection section = new(frame.Scalp, frame.Centre, up, forwards);
        List<Vec3> profile = [];
        for (int n = 0; n <= Steps && section.At(Math.PI * n / Steps) is { } point; n++)
        {
            profile.Add(point);
        }

        (double U, double V)[] outline = [.. profile.Select(section.InPlane)];
        List<int> tape = TautString.Over(outline);
        for (int n = 1; n < tape.Count; n++)
        {
            (double u0, double v0) = outline[tape[n - 1]];
            (double du, double dv) = (outline[tape[n]].U - u0, outline[tape[n]].V - v0);
            double length = Math.Sqrt(du * du + dv * dv);
            int deepest = tape[n - 1];
            double depth = 0;
            for (int k = tape[n - 1] + 1; k < tape[n]; k++)
            {
                double under = Math.Abs((outline[k].U - u0) * dv - (outline[k].V - v0) * du) / length;
                (deepest, depth) = under > depth ? (k, under) : (deepest, depth);
            }

            double below = (frame.Top - profile[deepest].Z) / frame.Length;
            if (depth >= HollowDepth * frame.Length && below > HighestNasion)
            {
                return below < LowestNasion ? profile[deepest] : null;
            }
        }

        return null;
    }

    private static (Landmark Left, Landmark Right) Preauricular(HeadFrame frame, Vec3 nasion, Vec3 inion)
    {
        Vec3 middle = inion + PreauricularShare * (nasion - inion) - new Vec3(0, 0, PreauricularBelow * frame.Length);
        Vec3? left = EarPit(frame, middle, -1), right = EarPit(frame, middle, 1);

        // One ear tells where the other is: its mirror image in the midline plane.
        Vec3 Mirrored(Vec3 p) => p - 2 * Vec3.Dot(p - frame.Centre, frame.Rightwards) * frame.Rightwards;
        Landmark Place(string name, int side, Vec3? own, Vec3? other) => new(
            name,
            Beside(frame, own ?? (other is { } o ? Mirrored(o) : middle), side),
            false,
            (own is not null ? SeenEar : other is not null ? 1.5 * SeenEar : GuessedEar) * frame.Length,
            0);
        return (Place("LPA", -1, left, right), Place("RPA", 1, right, left));
    }

    /// <summary>The scalp beside the midline at the height and depth of a point.</summary>
    private static Vec3 Beside(HeadFrame frame, Vec3 at, int side)
    {
        Vec3 inMidline = at - Vec3.Dot(at - frame.Centre, frame.Rightwards) * frame.Rightwards;
        Vec3 outwards = side * frame.Rightwards;
        return frame.Scalp.Outermost(inMidline, outwards) ?? frame.Scalp.Nearest(inMidline + frame.Breadth / 2 * outwards).Point;
    }

    /// <summary>The point in front of the ear's pit, where a pit shows.</summary>
    private static Vec3? EarPit(HeadFrame frame, Vec3 middle, int side)
    {
        const int Half = 20;
        double step = PitWindow * frame.Length / Half;
        var height = new double[2 * Half + 1, 2 * Half + 1];
        Vec3 At(int y, int z) => middle + new Vec3(0, (y - Half) * step, (z - Half) * step);
        for (int y = 0; y <= 2 * Half; y++)
        {
            for (int z = 0; z <= 2 * Half; z++)
            {
                height[y, z] = Math.Abs(Vec3.Dot(Beside(frame, At(y, z), side) - frame.Centre, frame.Rightwards));
            }
        }

        double[,] depth = PitDepths(height, step);
        (int py, int pz) = (Half, Half);
        foreach ((int y, int z) in from y in Enumerable.Range(0, 2 * Half + 1) from z in Enumerable.Range(0, 2 * Half + 1) select (y, z))
        {
            (py, pz) = depth[y, z] > depth[py, pz] ? (y, z) : (py, pz);
        }

        double deepest = depth[py, pz];
        if (deepest < PitDepth * frame.Length)
        {
            return null;
        }

        (int front, int top) = (py, pz);
        while (front < 2 * Half && depth[front + 1, pz] > deepest / 2)
        {
            front++;
        }

        while (top < 2 * Half && depth[py, top + 1] > deepest / 2)
        {
            top++;
        }

        return At(front, top) + new Vec3(0, BeforePit * frame.Length, 0);
    }

    /// <summary>Depth below tapes along both directions, the smaller of the two [m].</summary>
    private static double[,] PitDepths(double[,] height, double step)
    {
        int n = height.GetLength(0);
        var depth = new double[n, n];
        for (int line = 0; line < n; line++)
        {
            double[] along = Below([.. Enumerable.Range(0, n).Select(k => height[k, line])], step);
            for (int k = 0; k < n; k++)
            {
                depth[k, line] = along[k];
            }
        }

        for (int line = 0; line < n; line++)
        {
            double[] along = Below([.. Enumerable.Range(0, n).Select(k => height[line, k])], step);
            for (int k = 0; k < n; k++)
            {
                depth[line, k] = Math.Min(depth[line, k], along[k]);
            }
        }

        return depth;
    }

    private static double[] Below(double[] height, double step)
    {
        // The scan goes anticlockwise about a point far below the profile: from the last to the first.
        int n = height.Length;
        (double U, double V)[] outline = [.. Enumerable.Range(0, n).Select(k => ((n - 1 - k) * step, height[n - 1 - k]))];
        List<int> tape = TautString.Over(outline);
        double[] below = new double[n];
        for (int t = 1; t < tape.Count; t++)
        {
            (int a, int b) = (tape[t - 1], tape[t]);
            for (int k = a + 1; k < b; k++)
            {
                double share = (k - a) / (double)(b - a);
                below[n - 1 - k] = outline[a].V + share * (outline[b].V - outline[a].V) - outline[k].V;
            }
        }

        return below;
    }
}
