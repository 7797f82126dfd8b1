namespace DeepSourceCheck.Files.Studies;

/// <summary>A variant laid over the study, node by node.</summary>
/// <remarks>
/// Keys merge with keys. A list whose entries are known by a name (regions, responses) or a label (tissues) merges entry by entry, new entries are appended; every other value is replaced.
/// Where the contract wants one of several alternatives (spheres, voxels or leadfields; preset or layers), the variant's takes the place of the study's; a new kind of coil
/// takes baseline and gap of the old one away. Every node keeps its place in the file.
/// </remarks>
internal static class VariantMerge
{
    // Alternatives by path: a key of one group that the variant states takes the study's keys of the other groups away.
    private static readonly Dictionary<string, string[][]> Alternatives = new()
    {
        ["head"] = [["spheres"], ["voxels"], ["leadfields"]],
        ["head.spheres"] = [["preset"], ["layers"]],
        ["sensors.eeg"] = [["layout"], ["electrodes", "coordinates"]],
        ["sensors.meg"] = [["coil", "sites", "baseline_mm", "gap_mm"], ["coils"]],
        ["regions[]"] = [["mask", "label", "threshold"], ["ellipsoid"], ["points"]],
        ["responses[]"] = [["moment_nAm"], ["amplitude"], ["density"]],
    };

    private static readonly Dictionary<string, string[][]> NoiseAlternatives = new()
    {
        ["eeg"] = [["eeg_sensor_nV_per_rtHz", "eeg_corner_Hz", "eeg_total"], ["eeg_sensor_uV_rms"], ["eeg_covariance"], ["eeg_recording"]],
        ["meg"] = [["meg_sensor_fT_per_rtHz", "meg_planar_fT_per_cm_rtHz", "meg_corner_Hz"], ["meg_sensor_fT_rms"], ["meg_covariance"]],
    };

    // A key whose change takes away what depends on it: a baseline belongs to one kind of coil only, a spacing to no list of points.
    private static readonly Dictionary<string, (string Key, string[] Dependents)> Dependent = new()
    {
        ["sensors.meg"] = ("coil", ["baseline_mm", "gap_mm"]),
        ["regions[]"] = ("points", ["spacing_mm"]),
    };

    private static readonly Dictionary<string, string> EntryNames = new() { ["regions"] = "name", ["responses"] = "name", ["head.voxels.tissues"] = "label" };

    /// <summary>The study with a variant's keys in place of its own.</summary>
    /// <param name="study">Top level of the study, without `variants`.</param>
    /// <param name="variant">The variant, without its name.</param>
    public static YamlMap Of(YamlMap study, YamlMap variant) => Map("", study, variant);

    private static YamlMap Map(string path, YamlMap below, YamlMap above)
    {
        List<YamlEntry> entries = [.. below.Entries];
        IEnumerable<string[][]> groups = path == "noise" ? NoiseAlternatives.Values : Alternatives.TryGetValue(path, out string[][]? own) ? [own] : [];
        foreach (string[][] group in groups)
        {
            foreach (string[] stated in group.Where(names => names.Any(n => above.Entries.Any(e => e.Name == n))))
            {
                entries.RemoveAll(e => !stated.Contains(e.Name) && group.Any(names => names.Contains(e.Name)));
            }
        }

        if (Dependent.TryGetValue(path, out (string Key, string[] Dependents) chosen) && above.Entries.Any(e => e.Name == chosen.Key))
        {
            entries.RemoveAll(e => chosen.Dependents.Contains(e.Name));
        }

        foreach (YamlEntry entry in above.Entries)
        {
            int at = entries.FindIndex(e => e.Name == entry.Name);
            if (at < 0)
            {
                entries.Add(entry);
            }
            else
            {
                string full = path.Length > 0 ? $"{path}.{entry.Name}" : entry.Name;
                entries[at] = entry with { Value = Node(full, entries[at].Value, entry.Value) };
            }
        }

        return above with { Entries = entries };
    }

    private static YamlNode Node(string path, YamlNode below, YamlNode above) => (below, above) switch
    {
        (YamlMap a, YamlMap b) => Map(path, a, b),
        (YamlList a, YamlList b) when EntryNames.TryGetValue(path, out string? by) => List(path, by, a, b),
        _ => above,
    };

    private static YamlList List(string path, string by, YamlList below, YamlList above)
    {
        List<YamlNode> items = [.. below.Items];
        foreach (YamlNode item in above.Items)
        {
            int at = NameOf(item, by) is { } name ? items.FindIndex(i => NameOf(i, by) == name) : -1;
            if (at < 0)
            {
                items.Add(item);
            }
            else
            {
                items[at] = Map(path + "[]", (YamlMap)items[at], (YamlMap)item);
            }
        }

        return above with { Items = items };
    }

    private static string? NameOf(YamlNode node, string by) =>
        node is YamlMap map && map.Entries.FirstOrDefault(e => e.Name == by)?.Value is YamlScalar { IsNull: false } scalar ? scalar.Text : null;
}
