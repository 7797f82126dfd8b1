using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Files.Regions;

/// <summary>Reads one file of the region library: a structure with its sides. The form is described in regions/README.md.</summary>
public static class LibraryRegionReader
{
    private static readonly string[] Keys =
        ["structure", "frame", "left", "right", "midline", "computed", "volume_mL", "place", "sphere_limits", "note"];

    /// <summary>The regions of a structure: left and right, or the midline one.</summary>
    /// <param name="file">Name of the file, for messages.</param>
    /// <param name="text">Its YAML text.</param>
    /// <exception cref="InvalidDataException">Malformed; names file and key.</exception>
    public static IReadOnlyList<LibraryRegion> Read(string file, TextReader text)
    {
        Node root = new(file, "", Tree(file, text.ReadToEnd()));
        root.AllowOnly(Keys);
        string structure = root.Text("structure");
        Node volume = root.Map("volume_mL"), place = root.Map("place");
        LibraryRegion Region(string side, Ellipsoid? shape) => new()
        {
            Name = side == "midline" ? structure : $"{structure}-{side}",
            Structure = structure,
            Side = side,
            Frame = root.Text("frame"),
            Shape = shape,
            VolumeRange = shape is null ? null : (volume.Number("low") / 1e6, volume.Number("high") / 1e6),
            VolumeSource = volume.Text("source"),
            VolumeGrade = volume.Grade("grade"),
            PlaceSource = place.Text("source"),
            PlaceGrade = place.Grade("grade"),
            SphereLimits = root.Has("sphere_limits") ? root.Text("sphere_limits") : null,
            Note = root.Text("note"),
        };

        if (root.Has("computed"))
        {
            return root.Text("computed") == "shell" ? [Region("midline", null)] : throw root.Wrong("computed", "must be shell");
        }

        if (root.Has("midline"))
        {
            return [Region("midline", Shape(root.Map("midline")))];
        }

        Ellipsoid left = Shape(root.Map("left"));
        return [Region("left", left), Region("right", root.Has("right") ? Shape(root.Map("right")) : left.MirrorX())];
    }

    /// <summary>Names of the regions that <see cref="Read"/> gives, found by the file's top-level keys alone.</summary>
    /// <param name="text">YAML text of a sound file.</param>
    public static IReadOnlyList<string> Names(string text)
    {
        string structure = "";
        bool one = false;
        foreach (string line in text.Split('\n'))
        {
            structure = line.StartsWith("structure:", StringComparison.Ordinal) ? line["structure:".Length..].Trim() : structure;
            one |= line.StartsWith("midline:", StringComparison.Ordinal) || line.StartsWith("computed:", StringComparison.Ordinal);
        }

        return one ? [structure] : [structure + "-left", structure + "-right"];
    }

    private static YamlMap Tree(string file, string text)
    {
        try
        {
            return YamlTree.Parse(text, file) as YamlMap ?? throw new InvalidDataException($"{file}: must be a mapping");
        }
        catch (InputException error)
        {
            throw new InvalidDataException(error.Message, error);
        }
    }

    private static Ellipsoid Shape(Node node)
    {
        node.AllowOnly(["centre_mm", "semi_axes_mm", "rotation_deg"]);
        Vec3 turns = node.Vector("rotation_deg");
        return new(
            Metres(node.Vector("centre_mm")),
            Metres(node.Vector("semi_axes_mm")),
            Rotation.FromFixedAxes(Si.FromDegrees(turns.X), Si.FromDegrees(turns.Y), Si.FromDegrees(turns.Z)));
    }

    private static Vec3 Metres(Vec3 mm) => new(Si.FromMm(mm.X), Si.FromMm(mm.Y), Si.FromMm(mm.Z));

    /// <summary>A mapping with its place in the file.</summary>
    private sealed class Node(string file, string path, YamlMap map)
    {
        public bool Has(string key) => Find(key) is not null;

        public InvalidDataException Wrong(string key, string what) => new($"{file}: {path}{key} {what}");

        public void AllowOnly(string[] keys)
        {
            foreach (YamlEntry entry in map.Entries)
            {
                if (Array.IndexOf(keys, entry.Name) < 0)
                {
                    throw Wrong(entry.Name, $"is not a key of the library; keys are {string.Join(", ", keys)}");
                }
            }
        }

        public Node Map(string key) => Get(key) is YamlMap child ? new(file, $"{path}{key}.", child) : throw Wrong(key, "must be a mapping");

        public string Text(string key) => Get(key) is YamlScalar { Text: { Length: > 0 } value } ? value : throw Wrong(key, "must be text");

        public double Number(string key) => Parse(key, Get(key));

        public Vec3 Vector(string key) => Get(key) is YamlList { Items: { Count: 3 } c }
            ? new(Parse(key, c[0]), Parse(key, c[1]), Parse(key, c[2]))
            : throw Wrong(key, "must be three numbers");

        public Grade Grade(string key) => Text(key) switch
        {
            "seen" => Core.Studies.Grade.Seen,
            "memory" => Core.Studies.Grade.Memory,
            "derived" => Core.Studies.Grade.Derived,
            _ => throw Wrong(key, "must be seen, memory or derived"),
        };

        private YamlNode Get(string key) => Find(key) ?? throw Wrong(key, "is missing");

        private YamlNode? Find(string key)
        {
            foreach (YamlEntry entry in map.Entries)
            {
                if (entry.Name == key)
                {
                    return entry.Value;
                }
            }

            return null;
        }

        private double Parse(string key, YamlNode node) =>
            node is YamlScalar scalar
            && double.TryParse(scalar.Text, NumberStyles.Float, CultureInfo.InvariantCulture, out double value) && double.IsFinite(value)
                ? value
                : throw Wrong(key, "must be a number");
    }
}
