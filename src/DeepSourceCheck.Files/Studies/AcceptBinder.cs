using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`accept_implausible`: each entry must name a key that this study states.</summary>
internal static class AcceptBinder
{
    private const string Name = "accept_implausible";

    /// <summary>The accepted keys, written as messages write them.</summary>
    public static IReadOnlyList<string> Bind(Section root, Reading reading)
    {
        IReadOnlyList<YamlScalar> entries = root.Texts(Name);
        if (entries.Count == 0)
        {
            return [];
        }

        Dictionary<string, string> keys = reading.Places.Keys.ToDictionary(key => key, StringComparer.Ordinal);
        AddNames(root, "regions", keys);
        AddNumbers(root, "responses", keys);
        var accepted = new List<string>();
        foreach (YamlScalar entry in entries)
        {
            if (keys.TryGetValue(entry.Text, out string? key))
            {
                accepted.Add(key);
                continue;
            }

            string? near = reading.Suggests ? NearestName.Of(entry.Text, reading.Places.Keys.Where(k => k != Name)) : null;
            string nearest = near is null ? "" : $"; the nearest is {Shown.Text(near, 120)}";
            root.ProblemAt(entry, Name, $"{Shown.Quoted(entry.Text)} names no key of this study{nearest}");
        }

        return accepted;
    }

    /// <summary>Regions are called by number in messages; their names are accepted too.</summary>
    private static void AddNames(Section root, string list, Dictionary<string, string> keys)
    {
        foreach (Section entry in root.Entries(list))
        {
            if (entry.Raw("name") is PlacedText name)
            {
                AddBelow(entry.Key, $"{list}.{name.Text}", keys);
            }
        }
    }

    /// <summary>Responses are called by name in messages; their numbers are accepted too.</summary>
    private static void AddNumbers(Section root, string list, Dictionary<string, string> keys)
    {
        IReadOnlyList<Section> entries = root.Entries(list);
        for (int k = 0; k < entries.Count; k++)
        {
            // A moment that is found from an amplitude or a density is judged under the key that it stands in for.
            if (entries[k].States("amplitude") || entries[k].States("density"))
            {
                keys.TryAdd(entries[k].KeyOf("moment_nAm"), entries[k].KeyOf("moment_nAm"));
            }

            AddBelow(entries[k].Key, $"{list}[{k}]", keys);
        }
    }

    private static void AddBelow(string key, string alias, Dictionary<string, string> keys)
    {
        foreach (string below in keys.Values.Where(k => k == key || k.StartsWith(key + ".", StringComparison.Ordinal)).ToList())
        {
            keys.TryAdd(alias + below[key.Length..], below);
        }
    }
}
