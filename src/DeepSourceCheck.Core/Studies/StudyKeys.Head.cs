namespace DeepSourceCheck.Core.Studies;

public static partial class StudyKeys
{
    private const string VoxelsNotYet = "heads from a label volume are not acted on; use head.spheres or head.leadfields";

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

        new("head.voxels", "A labelled volume.", new MapShape()) { NotYet = VoxelsNotYet, Example = "{labels: head.nii.gz}" },
        Voxel("labels", "The label volume.", new FileShape("a NIfTI label volume"), "head.nii.gz"),
        Voxel("tissues", "Every label of the volume with its tissue.",
            new ListShape("a tissue {label, tissue, conductivity_S_per_m}"), "[{label: 1, tissue: scalp, conductivity_S_per_m: 0.43}]"),
        Voxel("tissues[].label", "Label in the volume.", Count(0, 1e9), "1"),
        Voxel("tissues[].tissue", "Name of the tissue.", new TextShape("the name of a tissue", 60), "scalp"),
        Voxel("tissues[].conductivity_S_per_m", "Conductivity of the tissue.", Conductivity, "0.43", "S/m"),
        Voxel("grid", "Grid of the finite elements.", Choice("adapted", "plain"), "adapted"),
        Voxel("dipole_load", "How a dipole loads the grid.", Choice("monopoles", "element-gradient"), "monopoles"),
        Voxel("tensors", "Conductivity tensors.", new MapShape(), "{file: tensors.nii.gz, tissues: [white]}"),
        Voxel("tensors.file", "The tensor volume.", new FileShape("a NIfTI tensor volume"), "tensors.nii.gz"),
        Voxel("tensors.tissues", "Tissues that take their tensor from the file.", new TextListShape("the name of a tissue"), "[white]"),
        Voxel("landmarks_mm", "Anatomical landmarks in the frame of the volume.", new MapShape(), "{Nz: [0, 85, -40]}"),
        Voxel("landmarks_mm.Nz", "Nasion.", PlaceMm, "[0, 85, -40]", "mm"),
        Voxel("landmarks_mm.Iz", "Inion.", PlaceMm, "[0, -119, -20]", "mm"),
        Voxel("landmarks_mm.LPA", "Left preauricular point.", PlaceMm, "[-87, -19, -49]", "mm"),
        Voxel("landmarks_mm.RPA", "Right preauricular point.", PlaceMm, "[88, -18, -52]", "mm"),
        Voxel("overlays", "Masks that replace the tissue, in order.",
            new ListShape("an overlay {mask, tissue}"), "[{mask: cavity.nii.gz, tissue: csf}]"),
        Voxel("overlays[].mask", "The mask.", new FileShape("a NIfTI mask"), "cavity.nii.gz"),
        Voxel("overlays[].tissue", "Tissue inside the mask.", new TextShape("the name of a tissue", 60), "csf"),

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

    private static StudyKey Voxel(string name, string description, KeyShape shape, string example, string unit = "") =>
        new("head.voxels." + name, description, shape) { NotYet = VoxelsNotYet, Example = example, Unit = unit };
}
