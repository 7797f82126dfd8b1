using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>A named difference of electrodes: what is read off one trace, for instance `Cz-mastoids`.</summary>
/// <remarks>
/// Written `A-B`. A side is an electrode, `mastoids` (the mean of M1 and M2) or `average` (the mean of the electrodes in use).
/// A derivation's weights sum to zero: it does not change with the reference.
/// </remarks>
public sealed class Derivation
{
    /// <summary>The word for the mean of M1 and M2.</summary>
    public const string Mastoids = "mastoids";

    /// <summary>The word for the mean of the electrodes in use.</summary>
    public const string Average = "average";

    private Derivation(string name, string plus, string minus, IReadOnlyList<string> joined)
    {
        Name = name;
        Plus = plus;
        Minus = minus;
        Joined = joined;
    }

    /// <summary>As written.</summary>
    public string Name { get; }

    /// <summary>Positive side: an electrode, `mastoids` or `average`.</summary>
    public string Plus { get; }

    /// <summary>Negative side.</summary>
    public string Minus { get; }

    /// <summary>Electrodes that it needs and that are not among those it was read against: they must join them.</summary>
    public IReadOnlyList<string> Joined { get; }

    /// <summary>Reads a derivation. Electrode names may hold hyphens themselves: every hyphen is tried.</summary>
    /// <param name="text">For instance `Cz-mastoids`.</param>
    /// <param name="electrodeNames">The electrodes of the study.</param>
    /// <param name="sitesMayJoin">True for layouts: any known site, mastoids included, may join; false for tables of positions.</param>
    /// <param name="key">Key of the study, for messages.</param>
    /// <exception cref="InputException">No reading or more than one; an unknown name is given with the nearest.</exception>
    public static Derivation Parse(
        string text, IReadOnlyCollection<string> electrodeNames, bool sitesMayJoin = true, string? key = "sensors.eeg_derivations")
    {
        List<Derivation> readings = [];
        for (int cut = text.IndexOf('-', StringComparison.Ordinal); cut >= 0; cut = text.IndexOf('-', cut + 1))
        {
            string plus = text[..cut].Trim(), minus = text[(cut + 1)..].Trim();
            if (Needed(plus, electrodeNames, sitesMayJoin) is { } first && Needed(minus, electrodeNames, sitesMayJoin) is { } second)
            {
                readings.Add(new(text, plus, minus, [.. first.Concat(second).Distinct()]));
            }
        }

        if (readings.Count > 1)
        {
            string all = string.Join(" or ", readings.Select(r => $"'{r.Plus}' against '{r.Minus}'"));
            throw new InputException(null, key, $"'{text}' can be read as {all}; rename an electrode");
        }

        if (readings.Count == 0)
        {
            throw new InputException(null, key, WhyNone(text, electrodeNames, sitesMayJoin));
        }

        return readings[0].Plus != readings[0].Minus
            ? readings[0]
            : throw new InputException(null, key, $"'{text}' is the difference of '{readings[0].Plus}' with itself, which is zero; name two different sides");
    }

    /// <summary>Weight of each electrode: the derivation is the sum of weights times potentials.</summary>
    /// <param name="electrodes">The electrodes of the study with those that joined.</param>
    /// <returns>As many weights as electrodes; they sum to zero.</returns>
    /// <exception cref="InputException">An electrode that it needs is missing.</exception>
    public double[] Weights(IReadOnlyList<Electrode> electrodes)
    {
        double[] weights = new double[electrodes.Count];
        Add(weights, electrodes, Plus, 1.0);
        Add(weights, electrodes, Minus, -1.0);
        return weights;
    }

    private void Add(double[] weights, IReadOnlyList<Electrode> electrodes, string side, double sign)
    {
        // An electrode of the study that happens to be called like one of the two words is that electrode.
        int own = IndexOf(electrodes, side);
        if (own >= 0)
        {
            weights[own] += sign;
        }
        else if (side == Average)
        {
            double[] mean = ReferenceWeights.Of(new(ReferenceKind.Average, []), electrodes);
            for (int k = 0; k < mean.Length; k++)
            {
                weights[k] += sign * mean[k];
            }
        }
        else
        {
            string[] names = side == Mastoids ? ["M1", "M2"] : [side];
            foreach (string name in names)
            {
                int k = IndexOf(electrodes, name);
                weights[k >= 0 ? k : throw new InputException(
                    null, "sensors.eeg_derivations", $"'{Name}' needs electrode '{name}', which is not among the electrodes")] += sign / names.Length;
            }
        }
    }

    internal static int IndexOf(IReadOnlyList<Electrode> electrodes, string name)
    {
        for (int k = 0; k < electrodes.Count; k++)
        {
            if (electrodes[k].Name == name)
            {
                return k;
            }
        }

        return -1;
    }

    /// <summary>Electrodes that a side needs to join; empty where all are there; null where the side has no meaning.</summary>
    internal static IReadOnlyList<string>? Needed(string side, IReadOnlyCollection<string> electrodeNames, bool sitesMayJoin)
    {
        if (electrodeNames.Contains(side) || side == Average)
        {
            return [];
        }

        string[] wanted = side == Mastoids ? ["M1", "M2"] : [side];
        string[] missing = [.. wanted.Where(name => !electrodeNames.Contains(name))];
        return missing.Length == 0 || (sitesMayJoin && missing.All(name => TenFiveSystem.TryDirection(name, out _))) ? missing : null;
    }

    private static string WhyNone(string text, IReadOnlyCollection<string> electrodeNames, bool sitesMayJoin)
    {
        int cut = text.IndexOf('-', StringComparison.Ordinal);
        if (cut < 0)
        {
            return $"'{text}' names one side only; write a difference, for instance '{text}-mastoids' or '{text}-average'";
        }

        string[] known = [.. electrodeNames, Mastoids, Average, .. sitesMayJoin ? ElectrodeLayout.Known : []];
        string wrong = text[..cut].Trim();
        wrong = Needed(wrong, electrodeNames, sitesMayJoin) is null ? wrong : text[(cut + 1)..].Trim();
        return wrong == Mastoids
            ? $"'{text}' needs electrodes M1 and M2, which the table does not list; add them or name another side"
            : wrong.Length == 0
                ? $"'{text}' lacks a side; write a difference such as 'Cz-mastoids'"
                : $"'{text}': {ElectrodeLayout.Unknown(wrong, known)}; a side is an electrode, mastoids or average";
    }
}
