using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Units;

using static System.FormattableString;

namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>What is wrong or doubtful about a head, in words with counts and places.</summary>
/// <param name="Problems">The head cannot be computed with: each with what to do.</param>
/// <param name="Warnings">What the user must know, the gravest first.</param>
public sealed record HeadFindings(IReadOnlyList<string> Problems, IReadOnlyList<string> Warnings);

/// <summary>The checks of a label volume as a head.</summary>
public static class HeadChecks
{
    /// <summary>Voxel edges [m] between which the finite elements were measured against the layered sphere.</summary>
    public static readonly (double Low, double High) UsualEdge = (0.0005, 0.006);

    /// <summary>Ratio of a voxel's longest to its shortest edge from which it is said.</summary>
    public const double LongestEdgeRatio = 2;

    /// <summary>Share of the head that a second piece may have: above it nobody knows which one is meant.</summary>
    public const double LargestSecondPiece = 0.1;

    /// <summary>Share of the skull's inner surface that may be thinner than two voxels without a warning.</summary>
    public const double ThinSkullShare = 0.01;

    /// <summary>Voxels of an enclosed cavity up to which it counts as a hole of the segmentation rather than a sinus.</summary>
    public const int LargestHole = 8;

    /// <summary>Checks a head.</summary>
    /// <param name="head">The head cut out of its volume, all pieces.</param>
    /// <param name="pieces">The same split into pieces.</param>
    public static HeadFindings Judge(CroppedHead head, HeadPieces pieces)
    {
        List<string> problems = [], warnings = [];
        TissueVolume volume = pieces.Volume;
        int[] counts = Counts(volume);
        Sources(volume, counts, problems);
        Pieces(volume, counts, pieces.LeftOut, problems, warnings);
        bool skull = Has(volume, counts, TissueKind.Skull);
        if (skull)
        {
            Leaks(volume, head.Touched, warnings);
        }
        else
        {
            warnings.Add("no voxel is skull: without the bone's poor conduction EEG comes out many times too large and too sharp; name the label of the bone so that its name says it (skull, bone)");
        }

        if (!Has(volume, counts, TissueKind.Scalp))
        {
            warnings.Add("no voxel is scalp: electrodes stand on the outermost tissue instead");
        }

        if (skull && !Has(volume, counts, TissueKind.Csf))
        {
            warnings.Add("no voxel is csf: without it EEG is overestimated, while MEG hardly changes");
        }

        if (skull)
        {
            Thickness(volume, head.Touched, warnings);
        }

        Faces(head.Touched, warnings);
        Brain(volume, counts, warnings);
        Holes(volume, warnings);
        Edges(volume.Grid, warnings);
        return new(problems, warnings);
    }

    /// <summary>Radius of the sphere that has the volume of a head [m], for the usual range of head sizes.</summary>
    public static double Radius(TissueVolume volume) => Math.Cbrt(3 * (volume.Grid.Count - Counts(volume)[0]) * volume.Grid.VoxelVolume / (4 * Math.PI));

    /// <summary>A place [m] as messages write it, in whole millimetres.</summary>
    public static string Place(Vec3 world) => string.Create(CultureInfo.InvariantCulture, $"({Si.ToMm(world.X):0}, {Si.ToMm(world.Y):0}, {Si.ToMm(world.Z):0}) mm");

    private static int[] Counts(TissueVolume volume)
    {
        var counts = new int[volume.Tissues.Count];
        foreach (byte tissue in volume.Cells)
        {
            counts[tissue]++;
        }

        return counts;
    }

    private static bool Has(TissueVolume volume, int[] counts, TissueKind kind) => counts.Where((n, t) => n > 0 && volume.Tissues[t].Kind == kind).Any();

    private static void Sources(TissueVolume volume, int[] counts, List<string> problems)
    {
        if (!counts.Where((n, t) => n > 0 && VoxelHead.IsSource(volume.Tissues[t].Kind)).Any())
        {
            string present = string.Join(", ", volume.Tissues.Where((_, t) => t > 0 && counts[t] > 0).Select(t => t.Name));
            problems.Add($"no voxel is grey or white matter, so that no source has a place; the head holds {present}: name the label of the brain so that its name says it (brain, grey, white)");
        }
    }

    private static void Pieces(TissueVolume volume, int[] counts, IReadOnlyList<VoxelPiece> leftOut, List<string> problems, List<string> warnings)
    {
        if (leftOut.Count == 0)
        {
            return;
        }

        int kept = volume.Grid.Count - counts[0], lost = leftOut.Sum(p => p.Count);
        string which = Invariant($"the largest of them, {Voxels(leftOut[0].Count)}, at {Place(leftOut[0].Centre)}");
        if (leftOut[0].Count > LargestSecondPiece * kept)
        {
            problems.Add(Invariant($"the head falls into {leftOut.Count + 1} disconnected pieces, {which}: no current passes between them; label what lies between, or remove what is no head"));
            return;
        }

        warnings.Add(Invariant($"{leftOut.Count} disconnected piece{(leftOut.Count == 1 ? "" : "s")} ({Voxels(lost)}; {which}) {(leftOut.Count == 1 ? "hangs" : "hang")} together with nothing and {(leftOut.Count == 1 ? "is" : "are")} left out"));
    }

    private static void Leaks(TissueVolume volume, IReadOnlyList<TouchedFace> touched, List<string> warnings)
    {
        foreach (SkullLeak leak in SkullLeaks.Find(volume, touched))
        {
            string edges = leak.AlongEdges == 0 ? "" : Invariant($", {(leak.AlongEdges == leak.Voxels ? "all" : Invariant($"{leak.AlongEdges:N0}"))} of them along an edge alone, where finite elements conduct too");
            string places = leak.Places.Count == 1 ? $"at {Place(leak.Places[0].Centre)}"
                : Invariant($"in {leak.Places.Count:N0} places, the largest ({Voxels(leak.Places[0].Count)}) at {Place(leak.Places[0].Centre)}");
            string effect = leak.Outer.Kind == TissueKind.Air ? "no bone parts them" : "current passes there as if the skull were open, which spoils EEG";
            warnings.Add(Invariant($"leak: {leak.Outer.Name} touches {leak.Inner.Name} at {Voxels(leak.Voxels)}{edges}, {places}; {effect}: label bone there, unless the opening is meant (the base of the skull, a craniotomy)"));
        }
    }

    private static void Thickness(TissueVolume volume, IReadOnlyList<TouchedFace> touched, List<string> warnings)
    {
        SkullThickness thickness = SkullThickness.Of(volume, touched);
        if (thickness.Share > ThinSkullShare)
        {
            warnings.Add(Invariant($"the skull is thinner than two voxels behind {100 * thickness.Share:0.#} % of its inner surface ({thickness.Thin:N0} of {thickness.Surface:N0} voxels, the largest place at {Place(thickness.Place)}): EEG is less exact there; smaller voxels keep more of it"));
        }
    }

    private static void Faces(IReadOnlyList<TouchedFace> touched, List<string> warnings)
    {
        string[] cut = [.. touched.Where(f => f.Side != "below").Select(f => Invariant($"{f.Side} ({Voxels(f.Voxels)})"))];
        if (cut.Length > 0)
        {
            warnings.Add($"the head touches the end of the volume {string.Join(", ", cut)}: it is cut off there, and no current flows where it should go on; use a volume that holds the whole head (below, through the neck, a cut is usual)");
        }
    }

    private static void Brain(TissueVolume volume, int[] counts, List<string> warnings)
    {
        if (!Has(volume, counts, TissueKind.Grey) && !Has(volume, counts, TissueKind.White))
        {
            return;
        }

        bool[] brain = [.. volume.Tissues.Select(t => VoxelHead.IsSource(t.Kind))];
        IReadOnlyList<VoxelPiece> pieces = ConnectedVoxels.Find(volume.Grid, at => brain[volume.Cells[at]], corners: true);
        if (pieces.Count > 1)
        {
            warnings.Add(Invariant($"grey and white matter hold {pieces.Count - 1:N0} island{(pieces.Count == 2 ? "" : "s")} apart from the brain ({Voxels(pieces.Skip(1).Sum(p => p.Count))}; the largest, {Voxels(pieces[1].Count)}, at {Place(pieces[1].Centre)}): sources may come to stand there"));
        }
    }

    private static void Holes(TissueVolume volume, List<string> warnings)
    {
        bool[] air = [.. volume.Tissues.Select(t => t.Kind == TissueKind.Air)];
        VoxelPiece[] holes = [.. ConnectedVoxels.Find(volume.Grid, at => air[volume.Cells[at]], corners: false).Where(p => p.Runs[0].Start != 0 && p.Count <= LargestHole)];
        if (holes.Length > 0)
        {
            warnings.Add(Invariant($"{holes.Length:N0} hole{(holes.Length == 1 ? "" : "s")} of at most {LargestHole} voxels of air ({Voxels(holes.Sum(p => p.Count))} together; the largest, {Voxels(holes[0].Count)}, at {Place(holes[0].Centre)}): likely gaps of the segmentation"));
        }
    }

    private static void Edges(VoxelGrid grid, List<string> warnings)
    {
        double[] edges = [.. Enumerable.Range(0, 3).Select(axis => grid.ToWorld.Column(axis).Norm)];
        string size = string.Create(CultureInfo.InvariantCulture, $"{Si.ToMm(edges[0]):0.###} x {Si.ToMm(edges[1]):0.###} x {Si.ToMm(edges[2]):0.###} mm");
        if (edges.Max() > UsualEdge.High * (1 + 1e-6) || edges.Min() < UsualEdge.Low * (1 - 1e-6))
        {
            warnings.Add(Invariant($"voxels of {size} lie outside the {Si.ToMm(UsualEdge.Low):0.#} to {Si.ToMm(UsualEdge.High):0.#} mm for which the errors of the finite elements are known: larger ones lose the skull and csf, smaller ones cost much and gain nothing"));
        }

        if (edges.Max() > LongestEdgeRatio * edges.Min() * (1 + 1e-6))
        {
            warnings.Add($"voxels of {size} are far from cubes: the solver takes longer, and errors depend on the direction; resample to cubes");
        }
    }

    private static string Voxels(int count) => Invariant($"{count:N0} voxel{(count == 1 ? "" : "s")}");
}
