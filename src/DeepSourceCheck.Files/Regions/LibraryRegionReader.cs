using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

using YamlDotNet.RepresentationModel;

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
        YamlStream yaml = [];
        yaml.Load(text);
        Node root = new(file, "", (YamlMappingNode)yaml.Documents[0].RootNode);
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
    private sealed class Node(string file, string path, YamlMappingNode map)
    {
        public bool Has(string key) => map.Children.ContainsKey(new YamlScalarNode(key));

        public InvalidDataException Wrong(string key, string what) => new($"{file}: {path}{key} {what}");

        public void AllowOnly(string[] keys)
        {
            foreach (YamlNode key in map.Children.Keys)
            {
                string name = ((YamlScalarNode)key).Value ?? "";
                if (!keys.Contains(name))
                {
                    throw Wrong(name, $"is not a key of the library; keys are {string.Join(", ", keys)}");
                }
            }
        }

        public Node Map(string key) => Get(key) is YamlMappingNode child ? new(file, $"{path}{key}.", child) : throw Wrong(key, "must be a mapping");

        public string Text(string key) => Get(key) is YamlScalarNode { Value: { Length: > 0 } value } ? value : throw Wrong(key, "must be text");

        public double Number(string key) => Parse(key, Get(key));

        public Vec3 Vector(string key) => Get(key) is YamlSequenceNode { Children: { Count: 3 } c }
            ? new(Parse(key, c[0]), Parse(key, c[1]), Parse(key, c[2]))
            : throw Wrong(key, "must be three numbers");

        public Grade Grade(string key) => Text(key) switch
        {
            "seen" => Core.Studies.Grade.Seen,
            "memory" => Core.Studies.Grade.Memory,
            "derived" => Core.Studies.Grade.Derived,
            _ => throw Wrong(key, "must be seen, memory or derived"),
        };

        private YamlNode Get(string key) =>
            map.Children.TryGetValue(new YamlScalarNode(key), out YamlNode? node) ? node : throw Wrong(key, "is missing");

        private double Parse(string key, YamlNode node) =>
            node is YamlScalarNode scalar
            && double.TryParse(scalar.Value, NumberStyles.Float, CultureInfo.InvariantCulture, out double value) && double.IsFinite(value)
                ? value
                : throw Wrong(key, "must be a number");
    }
}
