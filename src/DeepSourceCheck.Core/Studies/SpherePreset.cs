using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Units;

namespace DeepSourceCheck.Core.Studies;

/// <summary>A spherical head by name.</summary>
/// <param name="Name">Name in study files.</param>
/// <param name="Layers">Layers, innermost first: tissue, outer radius [mm], conductivity [S/m].</param>
/// <param name="LibraryScale">Factor by which library regions scale about the centre.</param>
/// <param name="RadiiSource">Where the radii come from.</param>
public sealed record SpherePreset(
    string Name, IReadOnlyList<(string Tissue, double RadiusMm, double Conductivity)> Layers, double LibraryScale, string RadiiSource)
{
    /// <summary>Inner radius of the head for which the region library was made [mm].</summary>
    public const double LibraryInnerRadiusMm = 78;

    private const string AdultRadii = "adult head radii 78/80/86/92 mm, textbooks";

    private static readonly SpherePreset[] Presets =
    [
        new("adult-4", [("brain", 78, 0.33), ("csf", 80, 1.79), ("skull", 86, 0.0132), ("scalp", 92, 0.43)], 1, AdultRadii),
        new("adult-3", [("brain", 80, 0.33), ("skull", 86, 0.0132), ("scalp", 92, 0.43)], 1, AdultRadii),
        new("child", [("brain", 68.5, 0.33), ("csf", 70, 1.79), ("skull", 74, 0.0132), ("scalp", 80, 0.43)], 68.5 / LibraryInnerRadiusMm,
            "child of 5 years, scalp radius 80 mm, skull 3.5-4.5 mm: growth charts, Wendel et al. 2010"),
        new("neonate", [("brain", 49, 0.33), ("csf", 50.5, 1.79), ("skull", 52, 0.033), ("scalp", 56, 0.43)], 49 / LibraryInnerRadiusMm,
            "neonate, scalp radius 54-56 mm, skull 1-1.5 mm: Odabaee et al. 2014, Lew et al. 2013"),
    ];

    /// <summary>The preset of a name; `adult` is adult-4.</summary>
    public static SpherePreset? Find(string name) => Presets.FirstOrDefault(preset => preset.Name == (name == "adult" ? "adult-4" : name));

    /// <summary>Where a layer's conductivity comes from, with its grade.</summary>
    public (string Source, Grade Grade) ConductivitySource(string tissue) => tissue switch
    {
        "csf" => ("1.79 S/m at body temperature: Baumann et al. 1997", Grade.Memory),
        "skull" when Name == "neonate" => ("0.33 S/m over a ratio of 10; published 0.02-0.05 S/m: Odabaee et al. 2014", Grade.Memory),
        "skull" => ("0.33 S/m over the measured ratio of 25 (Lai et al. 2005; other measurements 15 to 80)", Grade.Derived),
        _ => ("common six-compartment set; common practice", Grade.Memory),
    };

    /// <summary>The layers in SI units.</summary>
    public IReadOnlyList<SphereLayer> SphereLayers() =>
        [.. Layers.Select(layer => new SphereLayer(layer.Tissue, Si.FromMm(layer.RadiusMm), layer.Conductivity, layer.Conductivity))];
}
