using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

using static System.FormattableString;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>Puts measured electrode positions on a head.</summary>
public static class ElectrodePlacement
{
    /// <summary>Farthest that an electrode may lie from the scalp [m]: beyond it, positions and head are in different frames or units.</summary>
    public const double LargestMove = 0.020;

    /// <summary>
    /// Deepest that an electrode for the scalp may lie in bone [m], and that one in soft tissue is moved without a word: what registration and the thickness of a scalp explain
    /// (common practice, no source).
    /// </summary>
    public const double DeepEnough = 0.005;

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

    /// <summary>Sets each position on the nearest point of a real scalp; contacts inside the head stay where they are.</summary>
    /// <remarks>
    /// A position counts as an interior contact (depth electrode, grid) when it lies in fluid or brain, more than 5 mm below the scalp in bone, across which potentials fall steeply, or more
    /// than 20 mm below it in any tissue. Every other one within 20 mm of the scalp is moved onto it, in soft tissue outside the skull too, where potentials change little with depth;
    /// from more than 5 mm below, by name. Farther outside it is refused.
    /// </remarks>
    /// <param name="names">Names, all different.</param>
    /// <param name="positions">Positions [m], as many as names, in the frame of the volume.</param>
    /// <param name="scalp">Scalp.</param>
    /// <param name="volume">Head.</param>
    /// <param name="warnings">Receives which electrodes count as interior contacts.</param>
    /// <param name="file">Table that they come from, for messages.</param>
    /// <returns>Electrodes in the same order with the distance that each was moved; all in use.</returns>
    /// <exception cref="InputException">
    /// Every electrode that is named twice, not finite, more than 20 mm outside, or inside in a cavity of air; or interior contacts that all lie at one place.
    /// </exception>
    public static Electrode[] OnScalp(
        IReadOnlyList<string> names, IReadOnlyList<Vec3> positions, ScalpSurface scalp, TissueVolume volume, List<string> warnings, string? file = null)
    {
        if (names.Count != positions.Count)
        {
            throw new ArgumentException($"{names.Count} names and {positions.Count} positions.", nameof(positions));
        }

        List<InputProblem> problems = [];
        HashSet<string> seen = new(StringComparer.Ordinal);
        Electrode[] electrodes = new Electrode[names.Count];
        List<string> raised = [], doubtful = [];
        for (int k = 0; k < names.Count; k++)
        {
            (string name, Vec3 position) = (names[k], positions[k]);
            string? problem = !seen.Add(name) ? "is listed twice; names must be unique"
                : !position.IsFinite ? "has a coordinate that is not a number; give its position or leave the electrode out"
                : null;
            if (problem is null)
            {
                (Vec3 foot, double distance) = scalp.Nearest(position);
                Tissue tissue = volume.At(position);
                TissueKind kind = tissue.Kind;
                bool deep = distance < -DeepEnough;
                bool interior = distance < 0 && (kind is TissueKind.Csf or TissueKind.Grey or TissueKind.White || (kind == TissueKind.Skull && deep) || distance < -LargestMove);
                problem = distance > LargestMove ? Invariant(
                        $"is {Si.ToMm(distance):0.0} mm outside the scalp; at most {Si.ToMm(LargestMove):0} mm is allowed: check the unit and the frame of the volume")
                    : interior && kind == TissueKind.Air ? Invariant(
                        $"lies in a cavity of air {Si.ToMm(-distance):0.0} mm below the scalp, where nothing conducts; check its coordinates")
                    : null;
                string place = Invariant($"{name} ({tissue.Name}, {Si.ToMm(-distance):0} mm below the scalp)");
                if (interior && kind is TissueKind.Skull or TissueKind.Scalp)
                {
                    doubtful.Add(place);
                }
                else if (deep && !interior)
                {
                    raised.Add(place);
                }

                electrodes[k] = interior ? new(name, position, InAverage: true, 0, IsInterior: true) : new(name, foot, InAverage: true, Math.Abs(distance));
            }

            if (problem is not null)
            {
                problems.Add(new(file, 0, 0, "electrodes", $"electrode '{name}' {problem}"));
            }
        }

        string[] cut = [.. electrodes.Where(e => e is { IsInterior: false } && scalp.IsOnCut(e.Position)).Select(e => e.Name)];
        if (cut.Length > 0)
        {
            warnings.Add($"{(file is null ? "" : file + ": ")}{string.Join(", ", cut)}: the nearest scalp is where the volume cuts the neck; use a volume that reaches lower, or leave these electrodes out");
        }

        // Contacts in the brain are no part of the average that a cap is referenced to.
        if (electrodes.Any(e => e is { IsInterior: false }))
        {
            electrodes = [.. electrodes.Select(e => e is { IsInterior: true } ? e with { InAverage = false } : e)];
        }

        if (problems.Count == 0)
        {
            Describe([.. electrodes.Where(e => e.IsInterior)], scalp, volume, warnings, problems, file);
            string from = file is null ? "" : file + ": ";
            if (doubtful.Count > 0)
            {
                warnings.Add($"{from}of these contacts, some lie outside fluid and brain: {Listed(doubtful)}; bone shields them from the brain, and scalp electrodes whose frame is off look the same: leave them out, or correct their places");
            }

            if (raised.Count > 0)
            {
                warnings.Add(Invariant($"{from}electrodes more than {Si.ToMm(DeepEnough):0} mm below the scalp were moved up to it, as they lie in no fluid, brain or bone: {Listed(raised)}; look whether their frame fits the volume"));
            }
        }

        return problems.Count == 0 ? electrodes : throw new InputException(problems);
    }

    private static string Listed(List<string> places)
    {
        const int most = 6;
        return string.Join(", ", places.Take(most)) + (places.Count > most ? Invariant($" and {places.Count - most} more") : "");
    }

    private static void Describe(Electrode[] contacts, ScalpSurface scalp, TissueVolume volume, List<string> warnings, List<InputProblem> problems, string? file)
    {
        if (contacts.Length == 0)
        {
            return;
        }

        if (contacts.Length > 2 && contacts.All(c => (c.Position - contacts[0].Position).Norm < ContactsApart))
        {
            problems.Add(new(file, 0, 0, "electrodes", Invariant(
                $"{contacts.Length} electrodes lie inside the head within {Si.ToMm(ContactsApart):0} mm of each other: their coordinates are in another unit than stated (BIDS: coordsystem.json; without it, mm)")));
            return;
        }

        string listed = Listed([.. contacts.Select(c => Invariant($"{c.Name} ({volume.At(c.Position).Name}, {Si.ToMm(-scalp.Nearest(c.Position).SignedDistance):0} mm below the scalp)"))]);
        warnings.Add($"{(file is null ? "" : file + ": ")}electrodes inside the head count as interior contacts and stay where they are: {listed}; "
            + "if they belong on the scalp, their frame does not fit the volume");
    }

    // Contacts of depth electrodes and grids are millimetres apart (common practice, no source); metres read as millimetres put a whole cap within a third of one.
    private const double ContactsApart = 0.001;

    private static string TooFar(double distance, LayeredSphere head) => string.Create(
        CultureInfo.InvariantCulture,
        $"is {Si.ToMm(Math.Abs(distance - head.OuterRadius)):0.0} mm {(distance > head.OuterRadius ? "outside" : "inside")} the scalp of {head.Name} "
        + $"(radius {Si.ToMm(head.OuterRadius):0.#} mm); at most {Si.ToMm(LargestMove):0} mm is allowed: "
        + $"check the unit, the frame and the head's centre and radius");
}
