using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>Walks a YAML tree along the registry of keys: what comes out is admitted by its key and knows its place; everything else is reported.</summary>
internal sealed class StudyWalk(Reading reading)
{
    /// <summary>The top level.</summary>
    public PlacedMap Root(YamlMap node) => Map(new StudyKey("", "The study.", new MapShape()), "", "", node);

    private PlacedMap Map(StudyKey spec, string path, string key, YamlMap node)
    {
        var map = new PlacedMap(spec, key, node.Line, node.Column);
        IReadOnlyList<StudyKey> known = StudyKeys.Below(path);
        foreach (YamlEntry entry in node.Entries)
        {
            string full = Join(key, entry.Name);
            StudyKey? child = known.FirstOrDefault(k => k.Name == entry.Name);
            if (child is null)
            {
                Unknown(entry, path, full, known);
                continue;
            }

            reading.Places[full] = new(entry.Line, entry.Column);
            if (child.NotYet is { } instead)
            {
                reading.Problem(entry.Line, entry.Column, full, $"not supported yet: {instead}");
            }
            else if (Value(child, full, entry) is { } value)
            {
                map.Entries.Add(entry.Name, value);
                map.Order.Add(entry.Name);
                continue;
            }

            map.Faulty.Add(entry.Name);
        }

        foreach (StudyKey child in known.Where(k => k.Required && !map.Entries.ContainsKey(k.Name) && !map.Faulty.Contains(k.Name)))
        {
            reading.Problem(node.Line, node.Column, Join(key, child.Name),
                $"is missing; it must be {child.Allowed}, for instance `{child.Name}: {child.Example}`");
        }

        return map;
    }

    private Placed? Value(StudyKey spec, string key, YamlEntry entry)
    {
        switch (entry.Value)
        {
            case YamlScalar scalar:
                return scalar.IsNull ? Fault(entry, key, $"has no value; it must be {spec.Allowed}, or remove the key") : Scalar(spec, key, scalar);
            case YamlList list:
                return List(spec, key, list);
            case YamlMap map when spec.Shapes.Any(shape => shape is MapShape):
                return Map(spec, spec.Path, key, map);
            case YamlMap map when spec.ShapesNotYet.Any(shape => shape is MapShape):
                return Fault(map, key, $"not supported yet: {spec.InsteadOfShape}");
            case YamlMap map:
                return Fault(map, key, $"holds keys with values; it must be {spec.Allowed}");
            default:
                return null;
        }
    }

    private Placed? Scalar(StudyKey spec, string key, YamlScalar scalar)
    {
        string reason = "";
        foreach (KeyShape shape in spec.Shapes)
        {
            switch (shape)
            {
                case ChoiceShape choice when choice.Words.Contains(scalar.Text):
                    return new PlacedText(spec, key, scalar.Line, scalar.Column, scalar.Text, isWord: true);
                case ChoiceShape choice when choice.NotYet.Contains(scalar.Text):
                    return Fault(scalar, key, $"{Shown.Quoted(scalar.Text)} is not supported yet: {spec.InsteadOfShape}");
                case ChoiceShape choice when reading.Suggests && choice.Words.Count > 1 && NearestName.Of(scalar.Text, choice.Words) is { } nearest:
                    reason = $"; the nearest is {nearest}";
                    break;
                case NumberShape number when YamlNumber.Parse(scalar, out string fault) is { } value:
                    return number.Admits(value)
                        ? new PlacedNumber(spec, key, scalar.Line, scalar.Column, value)
                        : Fault(scalar, key, $"{Shown.Text(scalar.Text)} is out of range; it must be {spec.Allowed}");
                case NumberShape:
                    YamlNumber.Parse(scalar, out reason);
                    reason = ": " + reason;
                    break;
                case FlagShape when scalar.Text is "true" or "false":
                    return new PlacedText(spec, key, scalar.Line, scalar.Column, scalar.Text, isWord: true);
                case TextShape text when TextFault(scalar.Text, text.LongestLength) is { } fault:
                    return Fault(scalar, key, $"{Shown.Quoted(scalar.Text)} {fault}; it must be {spec.Allowed}");
                case TextShape:
                    return new PlacedText(spec, key, scalar.Line, scalar.Column, scalar.Text, isWord: false);
                case FileShape when TextFault(scalar.Text, FileShape.LongestLength) is { } fault:
                    return Fault(scalar, key, $"{Shown.Quoted(scalar.Text)} {fault}; it must be {spec.Allowed}");
                case FileShape:
                    return File(spec, key, scalar);
                case TextListShape or VectorShape or BandShape or NumberListShape:
                    reason = spec.Shapes.Length == 1 ? $"; a list stands in brackets: [{Shown.Text(scalar.Text)}]" : reason;
                    break;
            }
        }

        string message = reason.StartsWith(':')
            ? $"{Shown.Quoted(scalar.Text)} is not allowed{reason}; it must be {spec.Allowed}"
            : $"{Shown.Quoted(scalar.Text)} is not allowed; it must be {spec.Allowed}{reason}";
        return Fault(scalar, key, message);
    }

    private Placed? File(StudyKey spec, string key, YamlScalar scalar)
    {
        string path = Path.Combine(reading.Folder, scalar.Text);
        if (System.IO.File.Exists(path))
        {
            return new PlacedText(spec, key, scalar.Line, scalar.Column, scalar.Text, isWord: false);
        }

        string fault = Directory.Exists(path) ? "is a folder" : "does not exist";
        return Fault(scalar, key, $"the file {Shown.Quoted(scalar.Text)} {fault}; it must be {spec.Allowed}");
    }

    private Placed? List(StudyKey spec, string key, YamlList list)
    {
        foreach (KeyShape shape in spec.Shapes)
        {
            switch (shape)
            {
                case VectorShape vector:
                    return Numbers(spec, key, list, vector.Count, vector.Each);
                case NumberListShape numbers:
                    return Numbers(spec, key, list, Math.Max(list.Items.Count, 1), numbers.Each);
                case BandShape band:
                    if (Numbers(spec, key, list, 2, band.Each) is not { Values: [var low, var high] } edges)
                    {
                        return null;
                    }

                    return low < high ? edges : Fault(list, key, $"[{KeyShape.Text(low)}, {KeyShape.Text(high)}] is not ordered; it must be {spec.Allowed}");
                case TextListShape texts:
                    return Texts(spec, key, list, texts);
                case ListShape entries:
                    return Entries(spec, key, list, entries);
            }
        }

        return spec.ShapesNotYet.Any(shape => shape is ListShape or VectorShape)
            ? Fault(list, key, $"not supported yet: {spec.InsteadOfShape}")
            : Fault(list, key, $"is a list; it must be {spec.Allowed}");
    }

    private PlacedNumbers? Numbers(StudyKey spec, string key, YamlList list, int count, NumberShape each)
    {
        if (list.Items.Count != count)
        {
            Fault(list, key, $"has {list.Items.Count} entries; it must be {spec.Allowed}");
            return null;
        }

        var values = new double[count];
        for (int k = 0; k < count; k++)
        {
            string reason = "";
            if (list.Items[k] is YamlScalar scalar && YamlNumber.Parse(scalar, out reason) is { } value && each.Admits(value))
            {
                values[k] = value;
                continue;
            }

            YamlNode item = list.Items[k];
            string what = item is YamlScalar { Text: var text }
                ? $"{Shown.Quoted(text)} is not allowed{(reason.Length > 0 ? ": " + reason : "")}"
                : $"entry {k + 1} is {item.What}";
            Fault(item, key, $"{what}; it must be {spec.Allowed}");
            return null;
        }

        return new(spec, key, list.Line, list.Column, values);
    }

    private PlacedTexts? Texts(StudyKey spec, string key, YamlList list, TextListShape shape)
    {
        if (list.Items.Count < shape.Fewest)
        {
            Fault(list, key, $"is empty; it must be {spec.Allowed}");
            return null;
        }

        var items = new List<YamlScalar>();
        bool sound = true;
        foreach (YamlNode item in list.Items)
        {
            string? fault = item switch
            {
                YamlRefused => null,
                YamlScalar { IsNull: true } => "an entry has no value",
                YamlScalar scalar when TextFault(scalar.Text, 200) is { } wrong => $"{Shown.Quoted(scalar.Text)} {wrong}",
                YamlScalar => "",
                _ => $"an entry is {item.What}",
            };
            if (fault?.Length > 0)
            {
                Fault(item, key, $"{fault}; it must be {spec.Allowed}");
            }

            sound &= fault == "";
            if (fault == "")
            {
                items.Add((YamlScalar)item);
            }
        }

        return sound ? new(spec, key, list.Line, list.Column, items) : null;
    }

    private PlacedList? Entries(StudyKey spec, string key, YamlList list, ListShape shape)
    {
        if (list.Items.Count == 0)
        {
            Fault(list, key, $"is empty; it must be {spec.Allowed}");
            return null;
        }

        var items = new List<PlacedMap>();
        StudyKey entrySpec = spec with { Path = spec.Path + "[]" };
        for (int k = 0; k < list.Items.Count; k++)
        {
            string full = $"{key}[{k}]";
            if (list.Items[k] is not YamlMap map)
            {
                if (list.Items[k] is not YamlRefused)
                {
                    Fault(list.Items[k], full, $"is {list.Items[k].What}; it must be {shape.What}");
                }

                continue;
            }

            full = NamedKey(spec, key, map, full);
            reading.Places[full] = new(map.Line, map.Column);
            items.Add(Map(entrySpec, entrySpec.Path, full, map));
        }

        return new(spec, key, list.Line, list.Column, items);
    }

    /// <summary>Responses are called by name, `responses.wave V`; the second of a name and one without a name by number.</summary>
    private string NamedKey(StudyKey spec, string key, YamlMap map, string numbered)
    {
        if (spec.Path != "responses" || map.Entries.FirstOrDefault(e => e.Name == "name")?.Value is not YamlScalar { IsNull: false } name)
        {
            return numbered;
        }

        string named = Join(key, name.Text);
        return name.Text.Length <= 200 && TextFault(name.Text, 200) is null && !reading.Places.ContainsKey(named) ? named : numbered;
    }

    private void Unknown(YamlEntry entry, string path, string full, IReadOnlyList<StudyKey> known)
    {
        string name = entry.Name;
        List<string> elsewhere = [.. StudyKeys.Named(name).Select(k => k.Path)];
        string? nearest = reading.Suggests ? NearestName.Of(name, known.Select(k => k.Name)) : null;
        string hint = elsewhere.Count > 0
            ? $"the key {Shown.Quoted(name)} does not belong here; it is known as {string.Join(", ", elsewhere.Take(3))}"
            : $"unknown key {Shown.Quoted(name)}" + (nearest is null ? "" : $"; the nearest known one is {nearest}");
        string allowed = known.Count > 0 ? $"; allowed here: {string.Join(", ", known.Select(k => k.Name))}" : "";
        reading.Problem(entry.Line, entry.Column, Shown.Text(full, 120), hint + allowed);
    }

    private static string? TextFault(string text, int longest) => text switch
    {
        _ when text.Length > longest => "is too long",
        _ when string.IsNullOrWhiteSpace(text) => "is empty",
        _ when text.Any(Shown.IsHidden) || HasLoneSurrogate(text) => "holds control or invisible characters",
        _ => null,
    };

    private static bool HasLoneSurrogate(string text)
    {
        for (int i = 0; i < text.Length; i++)
        {
            if (char.IsSurrogate(text[i]) && !(i + 1 < text.Length && char.IsSurrogatePair(text[i], text[++i])))
            {
                return true;
            }
        }

        return false;
    }

    private Placed? Fault(YamlNode at, string key, string message)
    {
        if (at is not YamlRefused)
        {
            reading.Problem(at.Line, at.Column, key, message);
        }

        return null;
    }

    private Placed? Fault(YamlEntry at, string key, string message)
    {
        reading.Problem(at.Line, at.Column, key, message);
        return null;
    }

    private static string Join(string key, string name) => key.Length > 0 ? $"{key}.{name}" : name;
}
