using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>A value of a study that its key admits, with its place in the file.</summary>
/// <param name="spec">The key in the registry.</param>
/// <param name="key">Full key in this study: `responses.wave V.moment_nAm`.</param>
/// <param name="line">Line, from 1.</param>
/// <param name="column">Column, from 1.</param>
internal abstract class Placed(StudyKey spec, string key, int line, int column)
{
    public StudyKey Spec { get; } = spec;

    public string Key { get; } = key;

    public int Line { get; } = line;

    public int Column { get; } = column;

    /// <summary>True once the study uses it. A value that nothing uses is reported: no key is read and ignored.</summary>
    public bool Taken { get; set; }
}

/// <summary>A number in the key's unit.</summary>
internal sealed class PlacedNumber(StudyKey spec, string key, int line, int column, double value) : Placed(spec, key, line, column)
{
    public double Value { get; } = value;
}

/// <summary>A text: a word, a name or a path.</summary>
internal sealed class PlacedText(StudyKey spec, string key, int line, int column, string text, bool isWord) : Placed(spec, key, line, column)
{
    public string Text { get; } = text;

    /// <summary>True for one of the key's words, false for a text of the user's own.</summary>
    public bool IsWord { get; } = isWord;
}

/// <summary>Numbers of a fixed count.</summary>
internal sealed class PlacedNumbers(StudyKey spec, string key, int line, int column, double[] values) : Placed(spec, key, line, column)
{
    public double[] Values { get; } = values;
}

/// <summary>A list of texts, each with its place.</summary>
internal sealed class PlacedTexts(StudyKey spec, string key, int line, int column, IReadOnlyList<YamlScalar> items) : Placed(spec, key, line, column)
{
    public IReadOnlyList<YamlScalar> Items { get; } = items;
}

/// <summary>A list of maps.</summary>
internal sealed class PlacedList(StudyKey spec, string key, int line, int column, IReadOnlyList<PlacedMap> items) : Placed(spec, key, line, column)
{
    public IReadOnlyList<PlacedMap> Items { get; } = items;
}

/// <summary>Keys with values, in the order of the file.</summary>
internal sealed class PlacedMap(StudyKey spec, string key, int line, int column) : Placed(spec, key, line, column)
{
    public Dictionary<string, Placed> Entries { get; } = new(StringComparer.Ordinal);

    /// <summary>Keys that stand here with a value that was reported.</summary>
    public HashSet<string> Faulty { get; } = new(StringComparer.Ordinal);

    /// <summary>Names of the entries in the order of the file.</summary>
    public List<string> Order { get; } = [];
}
