namespace DeepSourceCheck.Core.Heads.Voxels;

/// <summary>What a tissue is, read from its name: study files name tissues in the user's own words.</summary>
/// <remarks>
/// A name is split into words; the kinds are tried in a fixed order, and the first of which a word begins with one of the stems decides: `white matter of the cerebellum` is white,
/// `cortical bone` is skull. Case does not matter.
/// </remarks>
public static class TissueWords
{
    private const string Membrane = "fontanel";

    // The order decides where a name holds words of two kinds: bone before soft and cortical, white before cerebellum.
    private static readonly (TissueKind Kind, string[] Stems, string[] Whole)[] Known =
    [
        (TissueKind.Air, ["air", "background", "outside"], []),
        (TissueKind.Csf, ["csf", "fluid", "liquor", "ventric", "cerebrospinal"], []),
        (TissueKind.Skull, ["skull", "bone", "compact", "spong", "diplo", "cancellous", "marrow", "cranium", "vertebra", "tooth", "teeth", Membrane], []),
        (TissueKind.Scalp, ["scalp", "skin", "soft", "muscle", "fat", "eye", "cartilage", "mucosa"], []),
        (TissueKind.White, ["white"], ["wm"]),
        (TissueKind.Grey, ["grey", "gray", "brain", "cortex", "cortical", "nucle", "cerebell", "thalam", "hippocamp"], ["gm"]),
    ];

    /// <summary>The words that are understood, for messages.</summary>
    public const string Understood =
        "scalp, skin, soft, muscle, fat, eye; skull, bone, compact, spongy, marrow, fontanelle; csf, fluid, ventricle; grey, gray, brain, cortex, nucleus, cerebellum; white; air";

    /// <summary>The kind of tissue that a name tells, or null where none of its words is known.</summary>
    public static TissueKind? KindOf(string name)
    {
        string[] words = Split(name);
        foreach ((TissueKind kind, string[] stems, string[] whole) in Known)
        {
            if (words.Any(word => stems.Any(stem => word.StartsWith(stem, StringComparison.Ordinal)) || whole.Contains(word)))
            {
                return kind;
            }
        }

        return null;
    }

    /// <summary>Whether a name tells of a fontanelle: it closes the skull as bone does, but conducts as soft tissue.</summary>
    public static bool IsMembrane(string name) => Split(name).Any(word => word.StartsWith(Membrane, StringComparison.Ordinal));

    private static string[] Split(string name)
    {
        char[] letters = [.. name.ToLowerInvariant().Select(c => char.IsLetter(c) ? c : ' ')];
        return new string(letters).Split(' ', StringSplitOptions.RemoveEmptyEntries);
    }
}
