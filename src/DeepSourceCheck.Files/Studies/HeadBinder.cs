using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`head`: spheres by preset or layers, a label volume, or imported leadfields.</summary>
internal static class HeadBinder
{
    private const string Skull = "skull";
    private const int MostLayers = 50;

    private static readonly string[] Anisotropic = ["radial_S_per_m", "tangential_S_per_m"];

    // Innermost conductivity over the skull's: usual range of the study file's plausibility rules.
    internal static readonly TypicalRange SkullRatio = new(5, 120);

    public static HeadChoice? Bind(Section root, Reading reading)
    {
        if (root.Map("head") is not { } head)
        {
            return null;
        }

        return head.OneOf("write exactly one of spheres, voxels and leadfields", "spheres", "voxels", "leadfields") switch
        {
            "spheres" when head.Map("spheres") is { } spheres => Spheres(spheres, reading),
            "voxels" when head.Map("voxels") is { } voxels => VoxelHeadBinder.Bind(voxels, reading),
            "leadfields" when head.Map("leadfields") is { } leadfields => Imported(leadfields),
            _ => null,
        };
    }

    private static ImportedHeadChoice? Imported(Section section)
    {
        if (!section.States("eeg") && !section.States("meg"))
        {
            section.Problem("states neither eeg nor meg; name at least one array");
        }

        string? eeg = section.Text("eeg"), meg = section.Text("meg");
        return section.Text("points") is { } points && section.Text("rows") is { } rows ? new(eeg, meg, points, rows) : null;
    }

    private static SphereHeadChoice? Spheres(Section section, Reading reading)
    {
        string? which = section.OneOf("write preset for a head by name, or layers for your own", "preset", "layers");
        Vec3 centre = section.Millimetres("centre_mm") ?? Vec3.Zero;
        if (which == "preset" && section.Text("preset") is { } name && SpherePreset.Find(name) is { } preset)
        {
            for (int k = 0; k < preset.Layers.Count; k++)
            {
                (string tissue, double radius, double conductivity) = preset.Layers[k];
                (string source, Grade grade) = preset.ConductivitySource(tissue);
                Section layer = section.Entry("layers", k);
                layer.Assume("radius_mm", radius, $"preset {preset.Name}, {tissue}: {preset.RadiiSource}", Grade.Memory);
                layer.Assume("conductivity_S_per_m", conductivity, $"preset {preset.Name}, {tissue}: {source}", grade);
            }

            return new(new LayeredSphere($"spheres: {preset.Name}", centre, preset.SphereLayers()), preset.Name, preset.LibraryScale);
        }

        return which == "layers" && Layers(section, reading) is { } layers
            ? new(new LayeredSphere(string.Create(CultureInfo.InvariantCulture, $"spheres: {layers.Count} layers of the study"), centre, layers), null, 1)
            : null;
    }

    private static List<SphereLayer>? Layers(Section section, Reading reading)
    {
        IReadOnlyList<Section> entries = section.Entries("layers");
        if (entries.Count > MostLayers)
        {
            section.Problem("layers", $"has {entries.Count} layers; at most {MostLayers} are allowed");
            return null;
        }

        var layers = new List<SphereLayer>();
        double inner = 0;
        foreach (Section entry in entries)
        {
            string? tissue = entry.Text("tissue");
            double? radius = entry.Number("radius_mm");
            if (radius <= inner)
            {
                entry.Problem("radius_mm", $"{KeyShape.Text(radius.Value)} mm is not larger than the {KeyShape.Text(inner)} mm of the layer before; "
                    + "list the layers from the innermost to the outermost");
            }

            inner = radius ?? inner;
            (double Radial, double Tangential)? conductivity = Conductivity(entry);
            if (tissue is not null && radius is { } r && conductivity is { } c)
            {
                layers.Add(new(tissue, Si.FromMm(r), c.Radial, c.Tangential));
            }
        }

        if (layers.Count == 0 || layers.Count < entries.Count)
        {
            return null;
        }

        JudgeRadius(entries[^1], reading);
        for (int k = 1; k < layers.Count; k++)
        {
            if (layers[k].Tissue.Contains(Skull, StringComparison.OrdinalIgnoreCase))
            {
                JudgeSkull(entries[k], layers[0].RadialConductivity / layers[k].RadialConductivity, reading);
            }
        }

        return layers;
    }

    private static (double Radial, double Tangential)? Conductivity(Section layer)
    {
        const string Instruction = "write conductivity_S_per_m, or radial_S_per_m and tangential_S_per_m together";
        bool split = layer.States("radial_S_per_m") || layer.States("tangential_S_per_m");
        if (split && layer.States("conductivity_S_per_m"))
        {
            layer.Problem("conductivity_S_per_m", $"stands beside radial_S_per_m or tangential_S_per_m; {Instruction}");
            return null;
        }

        if (!split)
        {
            if (!layer.States("conductivity_S_per_m"))
            {
                layer.Problem($"states no conductivity; {Instruction}");
            }

            return layer.Number("conductivity_S_per_m") is { } both ? (both, both) : null;
        }

        foreach (string name in Anisotropic.Where(name => !layer.States(name)))
        {
            layer.Problem(name, $"is missing; {Instruction}");
        }

        return layer.Number("radial_S_per_m") is { } radial && layer.Number("tangential_S_per_m") is { } tangential ? (radial, tangential) : null;
    }

    private static void JudgeRadius(Section outermost, Reading reading)
    {
        if (outermost.Raw("radius_mm") is PlacedNumber { Spec.Typical: { } usual } radius)
        {
            reading.Judge(radius, radius.Value, usual, radius.Spec.Unit, "the head's radius");
        }
    }

    private static void JudgeSkull(Section skull, double ratio, Reading reading)
    {
        if ((skull.Raw("conductivity_S_per_m") ?? skull.Raw("radial_S_per_m")) is { } conductivity)
        {
            reading.Judge(conductivity, ratio, SkullRatio, "", "the ratio of the innermost conductivity to the skull's,");
        }
    }
}
