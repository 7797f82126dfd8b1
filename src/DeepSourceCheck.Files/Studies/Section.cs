using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>
/// A map of the study as the binders see it. Asking for a value takes it: a stated one or the registry's default becomes an assumption of the study;
/// null means that it is neither stated nor has a default, or that it was wrong and is reported already.
/// </summary>
internal sealed class Section(Reading reading, PlacedMap map, string path)
{
    public string Key { get; } = map.Key;

    public IReadOnlyList<string> Order => map.Order;

    /// <summary>True when the file states the key, right or wrong.</summary>
    public bool States(string name) => map.Entries.ContainsKey(name) || map.Faulty.Contains(name);

    /// <summary>The stated value as it stands, without taking it.</summary>
    public Placed? Raw(string name) => map.Entries.GetValueOrDefault(name);

    public string KeyOf(string name) => Key.Length > 0 ? $"{Key}.{name}" : name;

    public double? Number(string name, string useCase = "") => Take(name, useCase) is { } value ? (double)value : null;

    public string? Text(string name, string useCase = "") => Take(name, useCase) as string;

    public Vec3? Vector(string name) => Take(name, "") is double[] v ? new Vec3(v[0], v[1], v[2]) : null;

    /// <summary>A list of numbers, in the key's unit; null where it is not stated.</summary>
    public IReadOnlyList<double>? Numbers(string name) => Take(name, "") as double[];

    /// <summary>A place or length in mm, as metres.</summary>
    public Vec3? Millimetres(string name) => Vector(name) is { } v ? new Vec3(Si.FromMm(v.X), Si.FromMm(v.Y), Si.FromMm(v.Z)) : null;

    public Band? Band(string name) => Take(name, "") is double[] v ? new Band(v[0], v[1]) : null;

    /// <summary>A list of texts, each with its place.</summary>
    public IReadOnlyList<YamlScalar> Texts(string name)
    {
        if (map.Entries.GetValueOrDefault(name) is not PlacedTexts texts)
        {
            return [];
        }

        Take(name, "");
        return texts.Items;
    }

    /// <summary>The map below a key, or null.</summary>
    public Section? Map(string name)
    {
        if (map.Entries.GetValueOrDefault(name) is not PlacedMap below)
        {
            return null;
        }

        below.Taken = true;
        return new(reading, below, below.Spec.Path);
    }

    /// <summary>The entries of a list of maps.</summary>
    public IReadOnlyList<Section> Entries(string name)
    {
        if (map.Entries.GetValueOrDefault(name) is not PlacedList list)
        {
            return [];
        }

        list.Taken = true;
        foreach (PlacedMap item in list.Items)
        {
            item.Taken = true;
        }

        return [.. list.Items.Select(item => new Section(reading, item, item.Spec.Path))];
    }

    /// <summary>An entry of a list that does not stand in the file, for values that stand in for it.</summary>
    public Section Entry(string name, int index) =>
        new(reading, new PlacedMap(map.Spec, $"{KeyOf(name)}[{index}]", map.Line, map.Column), PathOf(name) + "[]");

    /// <summary>A map that does not stand in the file, for values that stand in for it.</summary>
    public Section Entry(string name) => new(reading, new PlacedMap(map.Spec, KeyOf(name), map.Line, map.Column), PathOf(name));

    /// <summary>A value that enters the answer without standing in the file under this key.</summary>
    public void Assume(string name, object value, string source, Grade grade)
    {
        StudyKey? spec = StudyKeys.Find(PathOf(name));
        reading.Assumptions.Add(new(KeyOf(name), value, spec?.Unit ?? "", FromStudy: false, source, grade));
    }

    /// <summary>A problem at a stated key, or at this map where the key is not stated.</summary>
    public void Problem(string name, string message)
    {
        (int line, int column) = Place(name);
        reading.Problem(line, column, KeyOf(name), message);
    }

    /// <summary>A problem with one entry of a list of texts.</summary>
    public void ProblemAt(YamlScalar item, string name, string message) => reading.Problem(item.Line, item.Column, KeyOf(name), message);

    /// <summary>A problem with this map as a whole.</summary>
    public void Problem(string message) => reading.Problem(map.Line, map.Column, Key, message);

    public void Warn(string name, string message) => reading.Warn(KeyOf(name), message);

    /// <summary>A stated key that has no effect in this study but does no harm: a warning with the reason.</summary>
    public void WithoutEffect(string name, string reason)
    {
        if (States(name))
        {
            Warn(name, $"has no effect: {reason}");
            Skip(name);
        }
    }

    /// <summary>Marks a key as dealt with.</summary>
    public void Skip(string name)
    {
        if (map.Entries.GetValueOrDefault(name) is { } value)
        {
            MarkTaken(value);
        }
    }

    /// <summary>Exactly one of the names must stand here; the one that does, or null where none or several do (reported).</summary>
    public string? OneOf(string instruction, params string[] names)
    {
        List<string> stated = [.. names.Where(States)];
        if (stated.Count == 1)
        {
            return stated[0];
        }

        if (stated.Count == 0)
        {
            Problem($"states none of {string.Join(", ", names)}; {instruction}");
        }
        else
        {
            Problem(stated[1], $"stands beside {stated[0]}; {instruction}");
        }

        return null;
    }

    public static void MarkTaken(Placed value)
    {
        value.Taken = true;
        IEnumerable<Placed> below = value switch
        {
            PlacedMap inner => inner.Entries.Values,
            PlacedList list => list.Items,
            _ => [],
        };
        foreach (Placed inner in below)
        {
            MarkTaken(inner);
        }
    }

    private (int Line, int Column) Place(string name) =>
        reading.Places.TryGetValue(KeyOf(name), out TextPlace place) ? (place.Line, place.Column) : (map.Line, map.Column);

    private string PathOf(string name) => path.Length > 0 ? $"{path}.{name}" : name;

    private object? Take(string name, string useCase)
    {
        if (map.Entries.GetValueOrDefault(name) is { } stated)
        {
            object? value = stated switch
            {
                PlacedNumber number => number.Value,
                PlacedText text => text.Text,
                PlacedNumbers numbers => numbers.Values,
                PlacedTexts texts => string.Join(", ", texts.Items.Select(item => item.Text)),
                _ => null,
            };
            if (value is not null && !stated.Taken && !stated.Spec.LabelOnly)
            {
                reading.Assumptions.Add(new(stated.Key, value, stated.Spec.Unit, FromStudy: true, "stated by the study", null));
            }

            stated.Taken |= value is not null;
            return value;
        }

        if (map.Faulty.Contains(name) || StudyKeys.Find(PathOf(name))?.DefaultFor(useCase) is not { } standard)
        {
            return null;
        }

        Assume(name, standard.Value, standard.Source, standard.Grade);
        return standard.Value;
    }
}
