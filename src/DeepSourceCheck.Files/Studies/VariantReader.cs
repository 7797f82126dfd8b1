using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>A variant of a study as read.</summary>
/// <param name="Name">Its name.</param>
/// <param name="Reading">The study with the variant's keys in place of its own.</param>
public sealed record VariantReading(string Name, StudyReading Reading);

/// <summary>`variants`: takes them out of the tree and lays each over the study.</summary>
internal static class VariantReader
{
    private const string Key = "variants";
    private const int Most = 50;
    private const int LongestName = 60;

    private static readonly string[] Overridden = ["head", "sensors", "noise", "regions", "responses", "target", "protocol", "accept_implausible"];

    /// <summary>The study's own top level, and each variant's.</summary>
    /// <param name="top">Top level of the file.</param>
    /// <param name="reading">Receives problems.</param>
    public static (YamlMap Study, IReadOnlyList<(string Name, YamlMap Merged)> Variants) Split(YamlMap top, Reading reading)
    {
        if (top.Entries.FirstOrDefault(e => e.Name == Key) is not { } stated)
        {
            return (top, []);
        }

        YamlMap study = top with { Entries = [.. top.Entries.Where(e => e.Name != Key)] };
        reading.Places[Key] = new(stated.Line, stated.Column);
        StudyKey spec = StudyKeys.Find(Key)!;
        if (stated.Value is not YamlList { Items.Count: > 0 and <= Most } list)
        {
            if (stated.Value is not YamlRefused)
            {
                string found = stated.Value is YamlList { Items.Count: var n } ? $"has {n} entries" : $"is {stated.Value.What}";
                reading.Problem(stated.Line, stated.Column, Key, $"{found}; it must be {spec.Allowed}, 1 to {Most} of them, for instance `{Key}: {spec.Example}`");
            }

            return (study, []);
        }

        var variants = new List<(string, YamlMap)>();
        var names = new HashSet<string>(StringComparer.Ordinal);
        for (int k = 0; k < list.Items.Count; k++)
        {
            if (Variant(list.Items[k], $"{Key}[{k}]", names, reading) is { } found)
            {
                variants.Add((found.Name, VariantMerge.Of(study, found.Keys)));
            }
        }

        return (study, variants);
    }

    private static (string Name, YamlMap Keys)? Variant(YamlNode node, string key, HashSet<string> names, Reading reading)
    {
        if (node is not YamlMap map)
        {
            if (node is not YamlRefused)
            {
                reading.Problem(node.Line, node.Column, key, $"is {node.What}; it must be a variant {{name, and the keys that it overrides}}");
            }

            return null;
        }

        reading.Places[key] = new(map.Line, map.Column);
        if (map.Entries.FirstOrDefault(e => e.Name == "name") is not { Value: YamlScalar { IsNull: false } name }
            || string.IsNullOrWhiteSpace(name.Text) || name.Text.Length > LongestName || name.Text.Any(Shown.IsHidden))
        {
            reading.Problem(map.Line, map.Column, key + ".name", $"is missing or no name; a variant has a name of at most {LongestName} characters, for instance `name: three layers`");
            return null;
        }

        bool sound = names.Add(name.Text);
        if (!sound)
        {
            reading.Problem(name.Line, name.Column, key + ".name", $"there are two variants {Shown.Quoted(name.Text)}; give each its own name");
        }

        YamlEntry[] keys = [.. map.Entries.Where(e => e.Name != "name")];
        foreach (YamlEntry entry in keys.Where(e => !Overridden.Contains(e.Name)))
        {
            sound = false;
            string hint = NearestName.Of(entry.Name, Overridden) is { } nearest ? $"; the nearest is {nearest}" : "";
            reading.Problem(entry.Line, entry.Column, Shown.Text($"{key}.{entry.Name}", 120), $"a variant cannot override {Shown.Quoted(entry.Name)}{hint}; it overrides {string.Join(", ", Overridden)}");
        }

        if (keys.Length == 0)
        {
            sound = false;
            reading.Problem(map.Line, map.Column, key, $"the variant {Shown.Quoted(name.Text)} overrides nothing; name the keys in which it differs from the study");
        }

        return sound ? (name.Text, map with { Entries = keys }) : null;
    }
}
