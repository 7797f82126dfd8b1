using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>`head.voxels`: a label volume with its tissues, overlays, tensors and landmarks. The files themselves are read later.</summary>
internal static class VoxelHeadBinder
{
    private const double LeastConductivity = 1e-6;
    private const string ConductivityKey = "conductivity_S_per_m";

    private static readonly string[] LandmarkNames = ["Nz", "Iz", "LPA", "RPA"];

    // Usual conductivities at body temperature [S/m] (common six-compartment set and its published spread, from memory): a value far off is mostly a wrong unit.
    private static readonly Dictionary<TissueKind, TypicalRange> Usual = new()
    {
        [TissueKind.Scalp] = new(0.1, 1),
        [TissueKind.Skull] = new(0.002, 0.1),
        [TissueKind.Csf] = new(1, 2.5),
        [TissueKind.Grey] = new(0.1, 1),
        [TissueKind.White] = new(0.05, 0.5),
    };

    public static VoxelHeadChoice? Bind(Section section, Reading reading)
    {
        string? labels = section.Text("labels");
        List<Tissue>? tissues = Tissues(section, reading);
        string? grid = section.Text("grid"), load = section.Text("dipole_load");
        if (tissues is null)
        {
            // Overlays and tensors name tissues of a list that is wrong itself: one message is enough.
            section.Skip("overlays");
            section.Skip("tensors");
            Landmarks(section);
            return null;
        }

        List<OverlayChoice> overlays = Overlays(section, tissues, reading);
        TensorChoice? tensors = Tensors(section, tissues, reading);
        Dictionary<string, Vec3> landmarks = Landmarks(section);
        return labels is null ? null : new()
        {
            Labels = labels,
            Tissues = tissues,
            Adapted = grid != "plain",
            DipoleLoad = load == "element-gradient" ? DipoleLoadName.ElementGradient : DipoleLoadName.Monopoles,
            Tensors = tensors,
            Landmarks = landmarks,
            Overlays = overlays,
        };
    }

    private static List<Tissue>? Tissues(Section section, Reading reading)
    {
        IReadOnlyList<Section> entries = section.Entries("tissues");
        if (entries.Count >= TissueVolume.MostTissues)
        {
            section.Problem("tissues", $"has {entries.Count} entries; at most {TissueVolume.MostTissues - 1} are allowed");
            return null;
        }

        var tissues = new List<Tissue>();
        foreach (Section entry in entries)
        {
            if (Tissue(entry) is { } tissue && Fits(entry, tissue, tissues))
            {
                tissues.Add(tissue);
            }
        }

        if (tissues.Count == 0 || tissues.Count < entries.Count)
        {
            return null;
        }

        Judge(entries, tissues, reading);
        return tissues;
    }

    private static Tissue? Tissue(Section entry)
    {
        double? label = entry.Number("label");
        string? name = entry.Text("tissue");
        if (label is not { } number || name is null)
        {
            entry.Skip(ConductivityKey);
            return null;
        }

        if (TissueWords.KindOf(name) is not { } kind)
        {
            entry.Skip(ConductivityKey);
            entry.Problem("tissue", $"{Shown.Quoted(name)} does not say what it is: a word of the name must begin with one of these: {TissueWords.Understood}; for instance {Shown.Quoted(name + " (grey)")}");
            return null;
        }

        double? conductivity = entry.Number(ConductivityKey);
        if (kind == TissueKind.Air)
        {
            if (conductivity > 0)
            {
                entry.Problem(ConductivityKey, $"{KeyShape.Text(conductivity.Value)} S/m is not that of air, which does not conduct; write 0 or leave it out");
                return null;
            }

            return new((int)number, name, kind, 0);
        }

        if (number == 0)
        {
            entry.Problem("label", "0 is air in every label volume; give the tissue another label");
            return null;
        }

        if (!entry.States(ConductivityKey))
        {
            entry.Problem($"states no {ConductivityKey}; every tissue but air needs one");
        }
        else if (conductivity < LeastConductivity)
        {
            entry.Problem(ConductivityKey, $"{KeyShape.Text(conductivity.Value)} S/m is no conductor; it must be from {KeyShape.Text(LeastConductivity)} up to 100 S/m, or the tissue be named air");
            return null;
        }

        return conductivity is { } c ? new((int)number, name, kind, c) : null;
    }

    private static bool Fits(Section entry, Tissue tissue, List<Tissue> before)
    {
        if (before.Find(t => t.Label == tissue.Label) is { } same)
        {
            entry.Problem("label", $"{tissue.Label} is already that of {Shown.Quoted(same.Name)}; every label stands once");
            return false;
        }

        if (before.Find(t => t.Name == tissue.Name && t.Conductivity != tissue.Conductivity) is { } twin)
        {
            entry.Problem("tissue", $"{Shown.Quoted(tissue.Name)} stands twice with different conductivities ({KeyShape.Text(twin.Conductivity)} and {KeyShape.Text(tissue.Conductivity)} S/m); give one of them another name");
            return false;
        }

        return true;
    }

    /// <summary>The ratio of brain to bone stops an implausible study, as on spheres; other conductivities only warn.</summary>
    private static void Judge(IReadOnlyList<Section> entries, List<Tissue> tissues, Reading reading)
    {
        double? brain = (tissues.Find(t => t.Kind == TissueKind.Grey) ?? tissues.Find(t => t.Kind == TissueKind.White))?.Conductivity;
        for (int k = 0; k < tissues.Count; k++)
        {
            // A fontanelle is part of the skull, but no bone: it is judged as the soft tissue that it is.
            bool membrane = TissueWords.IsMembrane(tissues[k].Name);
            if (entries[k].Raw(ConductivityKey) is not { } stated || !Usual.TryGetValue(membrane ? TissueKind.Scalp : tissues[k].Kind, out TypicalRange? usual))
            {
                continue;
            }

            if (tissues[k].Kind == TissueKind.Skull && !membrane && brain is { } b)
            {
                reading.Judge(stated, b / tissues[k].Conductivity, HeadBinder.SkullRatio, "", "the ratio of the brain's conductivity to the skull's,");
            }
            else if (Plausibility.Judge(stated.Key, tissues[k].Conductivity, usual.Low, usual.High, "S/m", [stated.Key]) is { Is: not Plausible.Yes })
            {
                entries[k].Warn(ConductivityKey, $"{KeyShape.Text(tissues[k].Conductivity)} S/m is far from the usual {KeyShape.Text(usual.Low)} to {KeyShape.Text(usual.High)} S/m of {tissues[k].Name}; check the unit");
            }
        }
    }

    private static List<OverlayChoice> Overlays(Section section, List<Tissue> tissues, Reading reading)
    {
        var overlays = new List<OverlayChoice>();
        foreach (Section entry in section.Entries("overlays"))
        {
            string? mask = entry.Text("mask"), name = entry.Text("tissue");
            if (mask is null || name is null)
            {
                continue;
            }

            // Air needs no place in the list: what an overlay turns into air is taken out of the head.
            if ((tissues.Find(t => t.Name == name) ?? (TissueWords.KindOf(name) == TissueKind.Air ? new Tissue(0, name, TissueKind.Air, 0) : null)) is not { } tissue)
            {
                entry.Problem("tissue", $"{Shown.Quoted(name)} is not in the list of tissues{Nearest(name, tissues, reading)}; allowed: {string.Join(", ", tissues.Select(t => t.Name).Append("air").Distinct())}");
                continue;
            }

            overlays.Add(new(mask, tissue, entry.Key));
        }

        return overlays;
    }

    private static TensorChoice? Tensors(Section section, List<Tissue> tissues, Reading reading)
    {
        if (section.Map("tensors") is not { } tensors)
        {
            return null;
        }

        string? file = tensors.Text("file");
        IReadOnlyList<YamlScalar> names = tensors.Texts("tissues");
        bool sound = true;
        foreach (YamlScalar name in names)
        {
            Tissue? tissue = tissues.Find(t => t.Name == name.Text);
            if (tissue is null)
            {
                tensors.ProblemAt(name, "tissues", $"{Shown.Quoted(name.Text)} is not in the list of tissues{Nearest(name.Text, tissues, reading)}; allowed: {string.Join(", ", tissues.Where(t => t.Kind != TissueKind.Air).Select(t => t.Name).Distinct())}");
            }
            else if (tissue.Kind == TissueKind.Air)
            {
                tensors.ProblemAt(name, "tissues", "air does not conduct; leave it out");
            }

            sound &= tissue is { Kind: not TissueKind.Air };
        }

        return sound && file is not null && names.Count > 0 ? new(file, [.. names.Select(n => n.Text).Distinct()]) : null;
    }

    private static Dictionary<string, Vec3> Landmarks(Section section)
    {
        var places = new Dictionary<string, Vec3>();
        if (section.Map("landmarks_mm") is not { } landmarks)
        {
            return places;
        }

        foreach (string name in LandmarkNames)
        {
            if (landmarks.Millimetres(name) is { } place)
            {
                places[name] = place;
            }
        }

        if (places.TryGetValue("LPA", out Vec3 left) && places.TryGetValue("RPA", out Vec3 right) && left.X >= right.X)
        {
            landmarks.Problem("LPA", "lies to the right of RPA: x grows to the right; exchange them");
        }

        if (places.TryGetValue("Nz", out Vec3 nasion) && places.TryGetValue("Iz", out Vec3 inion) && nasion.Y <= inion.Y)
        {
            landmarks.Problem("Nz", "lies behind Iz: y grows to the front; exchange them");
        }

        return places;
    }

    private static string Nearest(string name, List<Tissue> tissues, Reading reading) =>
        reading.Suggests && NearestName.Of(name, tissues.Select(t => t.Name)) is { } nearest ? $"; the nearest is {nearest}" : "";
}
