using System.Collections.Frozen;

namespace DeepSourceCheck.Core.Studies;

/// <summary>The registry of every key of the study file's language, in the order in which a study is written.</summary>
public static partial class StudyKeys
{
    private const string CommonPractice = "common practice, no source";

    /// <summary>All keys.</summary>
    public static IReadOnlyList<StudyKey> All { get; } =
        [.. Top(), .. Head(), .. Sensors(), .. Noise(), .. Regions(), .. Responses(), .. Planning(), .. Unknowns()];

    // After All: static fields are set in the order of their text, within one file only; the other files of this class therefore hold none.
    private static readonly FrozenDictionary<string, StudyKey> ByPath = All.ToFrozenDictionary(key => key.Path, StringComparer.Ordinal);

    private static readonly FrozenDictionary<string, StudyKey[]> ByParent =
        All.GroupBy(key => key.Parent, StringComparer.Ordinal).ToFrozenDictionary(group => group.Key, group => group.ToArray(), StringComparer.Ordinal);

    /// <summary>The key of a path (`head.spheres.layers[].radius_mm`), or null.</summary>
    public static StudyKey? Find(string path) => ByPath.GetValueOrDefault(path);

    /// <summary>The keys directly below a path; empty where there are none.</summary>
    /// <param name="parent">Path of a map, `path[]` for the entries of a list, empty for the top level.</param>
    public static IReadOnlyList<StudyKey> Below(string parent) => ByParent.GetValueOrDefault(parent) ?? [];

    /// <summary>The keys of a name, wherever they stand.</summary>
    public static IEnumerable<StudyKey> Named(string name) => All.Where(key => key.Name == name);

    private static StudyKey[] Top() =>
    [
        new("title", "What the study is about, as the report's heading.", new TextShape("a title", 300))
        {
            Example = "Click response of the brainstem, adult volunteers",
            LabelOnly = true,
        },
        new("accept_implausible", "Keys whose values are meant although they lie more than 10 times outside the usual range.",
            new TextListShape("the full key of a value in this study", Fewest: 0))
        {
            Example = "[responses.wave V.moment_nAm]",
        },
    ];

    private static NumberShape Above0(double high) => new(0, high, AboveLow: true);

    private static NumberShape From0(double high) => new(0, high);

    private static NumberShape Count(double low, double high) => new(low, high, Whole: true);

    private static ChoiceShape Choice(params string[] words) => new(words);

    private static double[] Numbers(params double[] values) => values;

    private static KeyDefault[] Default(object value, string source, Grade grade) => [new(value, source, grade)];
}
