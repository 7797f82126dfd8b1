using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Sensors;

/// <summary>The reference of the EEG as weights over the electrodes: the referenced potential is v_k - sum_j w_j v_j.</summary>
public static class ReferenceWeights
{
    private const string Key = "sensors.eeg.reference";

    /// <summary>Electrodes that the reference names and that must join those of the study.</summary>
    /// <param name="reference">The reference.</param>
    /// <param name="electrodeNames">The electrodes of the study.</param>
    /// <param name="sitesMayJoin">True for layouts: any known site may join; false for tables of positions.</param>
    /// <exception cref="InputException">A name is not known; names the nearest.</exception>
    public static IReadOnlyList<string> Joined(ReferenceChoice reference, IReadOnlyCollection<string> electrodeNames, bool sitesMayJoin = true)
    {
        string[] known = [.. electrodeNames, Derivation.Mastoids, .. sitesMayJoin ? ElectrodeLayout.Known : []];
        return
        [
            .. Sides(reference)
                .SelectMany(name => Derivation.Needed(name, electrodeNames, sitesMayJoin)
                    ?? throw new InputException(null, Key, $"{ElectrodeLayout.Unknown(name, known)}; a reference is average, none or electrodes"))
                .Distinct(),
        ];
    }

    /// <summary>Weights of a reference: they sum to one, or are all zero for none.</summary>
    /// <param name="reference">Average: equal over the electrodes in use; none: zero; electrodes: equal over the named ones.</param>
    /// <param name="electrodes">The electrodes with those that joined.</param>
    /// <exception cref="InputException">A named electrode is missing, or none is in use for the average.</exception>
    public static double[] Of(ReferenceChoice reference, IReadOnlyList<Electrode> electrodes)
    {
        double[] weights = new double[electrodes.Count];
        switch (reference.Kind)
        {
            case ReferenceKind.None:
                break;
            case ReferenceKind.Average:
                int inUse = electrodes.Count(e => e.InAverage);
                if (inUse == 0)
                {
                    throw new InputException(null, Key, "average needs at least one electrode in use besides joined mastoids");
                }

                for (int k = 0; k < weights.Length; k++)
                {
                    weights[k] = electrodes[k].InAverage ? 1.0 / inUse : 0.0;
                }

                break;
            default:
                string[] names = [.. Sides(reference)
                    .SelectMany(n => n == Derivation.Mastoids && Derivation.IndexOf(electrodes, n) < 0 ? ["M1", "M2"] : new[] { n }).Distinct()];
                foreach (string name in names)
                {
                    int k = Derivation.IndexOf(electrodes, name);
                    weights[k >= 0 ? k : throw new InputException(
                        null, Key, ElectrodeLayout.Unknown(name, electrodes.Select(e => e.Name)) + "; a reference is average, none or electrodes")] = 1.0 / names.Length;
                }

                break;
        }

        return weights;
    }

    private static IReadOnlyList<string> Sides(ReferenceChoice reference) => reference.Kind != ReferenceKind.Electrodes
        ? []
        : reference.Electrodes.Count > 0
            ? reference.Electrodes
            : throw new InputException(null, Key, "the reference names no electrode; write average, none, or one or more electrodes");
}
