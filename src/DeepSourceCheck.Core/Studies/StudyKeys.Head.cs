namespace DeepSourceCheck.Core.Studies;

public static partial class StudyKeys
{
    private static VectorShape PlaceMm => new(3, new NumberShape(-1000, 1000));

    private static StudyKey[] Head() =>
    [
        new("head", "The conductor: exactly one of spheres, voxels, leadfields.", new MapShape())
        {
            Required = true,
            Example = "{spheres: {preset: adult-4}}",
        },
        new("head.spheres", "Concentric spherical layers: a preset or layers of the study's own.", new MapShape())
        {
            Example = "{preset: adult-4}",
        },
        new("head.spheres.preset", "A head with its centre, radii and conductivities by name.",
            new ChoiceShape(["adult-4", "adult-3", "child", "neonate", "adult"]))
        {
            Example = "adult-4",
        },
        new("head.spheres.centre_mm", "Centre of the spheres in the frame of the regions.", PlaceMm)
        {
            Unit = "mm",
            Example = "[0, -18, 5]",
            Defaults = Default(Numbers(0, -18, 5),
                "rounded from a sphere fitted to the inner skull of a real MNI-space head above z = -10: centre (0.5, -17.8, 5.9) mm, misfit 5.5 mm standard deviation", Grade.Derived),
        },
        new("head.spheres.layers", "Layers, innermost first; sources stand in the innermost.",
            new ListShape("a layer {tissue, radius_mm, conductivity_S_per_m}"))
        {
            Example = "[{tissue: brain, radius_mm: 80, conductivity_S_per_m: 0.33}]",
        },
        new("head.spheres.layers[].tissue", "Name of the layer; `skull` marks the one whose ratio to the innermost is judged.",
            new TextShape("the name of a tissue", 60))
        {
            Required = true,
            Example = "skull",
        },
        new("head.spheres.layers[].radius_mm", "Outer radius of the layer; each larger than the one before.", Above0(1000))
        {
            Unit = "mm",
            Required = true,
            Example = "86",
            Typical = new(45, 110),
        },
        new("head.spheres.layers[].conductivity_S_per_m", "Conductivity of an isotropic layer.", Conductivity)
        {
            Unit = "S/m",
            Example = "0.0132",
        },
        new("head.spheres.layers[].radial_S_per_m", "Conductivity along the radius, together with tangential_S_per_m.", Conductivity)
        {
            Unit = "S/m",
            Example = "0.01",
        },
        new("head.spheres.layers[].tangential_S_per_m", "Conductivity across the radius, together with radial_S_per_m.", Conductivity)
        {
            Unit = "S/m",
            Example = "0.02",
        },

        new("head.voxels", "A head from a labelled volume, by finite elements on its voxels.", new MapShape())
        {
            Example = "{labels: head.nii.gz, tissues: [{label: 1, tissue: scalp, conductivity_S_per_m: 0.43}]}",
        },
        new("head.voxels.labels", "The label volume: a whole number a voxel, 0 is air.", new FileShape("a NIfTI label volume"))
        {
            Required = true,
            Example = "head.nii.gz",
        },
        new("head.voxels.tissues", "Every label of the volume with its tissue.", new ListShape("a tissue {label, tissue, conductivity_S_per_m}"))
        {
            Required = true,
            Example = "[{label: 1, tissue: scalp, conductivity_S_per_m: 0.43}]",
        },
        new("head.voxels.tissues[].label", "Label in the volume.", Count(0, 1e9)) { Required = true, Example = "1" },
        new("head.voxels.tissues[].tissue", "Name of the tissue; one of its words says what it is (scalp, skull, csf, grey, white, air).",
            new TextShape("the name of a tissue", 60))
        {
            Required = true,
            Example = "scalp",
        },
        new("head.voxels.tissues[].conductivity_S_per_m", "Conductivity of the tissue; 0 for air alone, which needs none.", From0(100))
        {
            Unit = "S/m",
            Example = "0.43",
        },
        new("head.voxels.grid", "Nodes of the finite elements: moved towards the borders between tissues, or at the voxels' corners.", Choice("adapted", "plain"))
        {
            Example = "adapted",
            Defaults = Default("adapted", "nodes at borders moved by 0.33 of a voxel: Wolters et al. 2007; held against the layered sphere, EEG errs 35 to 45 % less than on the plain grid", Grade.Memory),
        },
        new("head.voxels.dipole_load", "How a dipole loads the finite elements: monopoles on the nodes around it, or the gradient within its element.",
            Choice("monopoles", "element-gradient"))
        {
            Example = "monopoles",
            Defaults = Default("monopoles", "Saint-Venant's principle: Buchner et al. 1997; held against the layered sphere, MEG of deep dipoles errs several times less than with the gradient", Grade.Memory),
        },
        new("head.voxels.tensors", "Conductivity tensors of some tissues.", new MapShape()) { Example = "{file: tensors.nii.gz, tissues: [white]}" },
        new("head.voxels.tensors.file", "The tensors: symmetric 3 x 3, S/m, on the grid of the labels (NIfTI intent 1005: xx, xy, yy, xz, yz, zz), in world axes (x right, y front, z up), never in voxel axes.",
            new FileShape("a NIfTI tensor volume"))
        {
            Required = true,
            Example = "tensors.nii.gz",
        },
        new("head.voxels.tensors.tissues", "Tissues that take their tensors from the file.", new TextListShape("the name of a tissue of the list"))
        {
            Required = true,
            Example = "[white]",
        },
        new("head.voxels.landmarks_mm", "Landmarks in the frame of the volume; those left out are found on the scalp.", new MapShape()) { Example = "{Nz: [0, 85, -40]}" },
        Landmark("Nz", "Nasion.", "[0, 85, -40]"),
        Landmark("Iz", "Inion.", "[0, -119, -20]"),
        Landmark("LPA", "Left preauricular point.", "[-87, -19, -49]"),
        Landmark("RPA", "Right preauricular point.", "[88, -18, -52]"),
        new("head.voxels.overlays", "Masks that replace the tissue, in order.", new ListShape("an overlay {mask, tissue}"))
        {
            Example = "[{mask: cavity.nii.gz, tissue: csf}]",
        },
        new("head.voxels.overlays[].mask", "The mask, on any grid: a voxel of the head takes the nearest value.", new FileShape("a NIfTI mask"))
        {
            Required = true,
            Example = "cavity.nii.gz",
        },
        new("head.voxels.overlays[].tissue", "Tissue inside the mask: one of the list, or air.", new TextShape("the name of a tissue of the list", 60))
        {
            Required = true,
            Example = "csf",
        },

        new("head.leadfields", "Leadfields that were computed elsewhere.", new MapShape())
        {
            Example = "{eeg: eeg.npy, points: points.tsv, rows: rows.tsv}",
        },
        new("head.leadfields.eeg", "EEG leadfield, channels x points x 3.", new FileShape("an .npy array")) { Example = "eeg.npy" },
        new("head.leadfields.meg", "MEG leadfield, channels x points x 3.", new FileShape("an .npy array")) { Example = "meg.npy" },
        new("head.leadfields.points", "Names and places of the arrays' points, in their order.",
            new FileShape("a table with columns name, x, y, z"))
        {
            Required = true,
            Example = "points.tsv",
        },
        new("head.leadfields.rows", "Names, kinds and units of the arrays' rows, in their order.",
            new FileShape("a table with columns row, modality, kind, unit"))
        {
            Required = true,
            Example = "rows.tsv",
        },
    ];

    private static NumberShape Conductivity => new(1e-6, 100);

    private static StudyKey Landmark(string name, string description, string example) =>
        new("head.voxels.landmarks_mm." + name, description, PlaceMm) { Unit = "mm", Example = example };
}
