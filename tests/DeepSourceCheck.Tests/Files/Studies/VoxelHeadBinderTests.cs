using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>`head.voxels` as the study file has it.</summary>
public class VoxelHeadBinderTests
{
    private const string Tissues = "tissues: [{label: 1, tissue: scalp, conductivity_S_per_m: 0.43}, {label: 2, tissue: skull, conductivity_S_per_m: 0.0132}, "
        + "{label: 3, tissue: csf, conductivity_S_per_m: 1.79}, {label: 4, tissue: grey, conductivity_S_per_m: 0.33}, {label: 5, tissue: white, conductivity_S_per_m: 0.14}]";

    private static string Study(string more = "", string tissues = Tissues) =>
        StudyText.Small.With("{spheres: {preset: adult-4}}", $"{{voxels: {{labels: head.nii.gz, {tissues}{more}}}}}");

    [Fact]
    public void PlainStudy_TakesTheDefaultsAsAssumptions()
    {
        StudyReading reading = StudyText.Read(Study());
        var head = Assert.IsType<VoxelHeadChoice>(reading.Study.Head);
        Assert.Equal(("head.nii.gz", true, DipoleLoadName.Monopoles), (head.Labels, head.Adapted, head.DipoleLoad));
        Assert.Equal(
            [(1, "scalp", TissueKind.Scalp, 0.43), (2, "skull", TissueKind.Skull, 0.0132), (3, "csf", TissueKind.Csf, 1.79), (4, "grey", TissueKind.Grey, 0.33), (5, "white", TissueKind.White, 0.14)],
            head.Tissues.Select(t => (t.Label, t.Name, t.Kind, t.Conductivity)));
        Assert.Null(head.Tensors);
        Assert.Empty(head.Overlays);
        Assert.Empty(head.Landmarks);
        Assumption grid = Assert.Single(reading.Assumptions, a => a.Key == "head.voxels.grid");
        Assert.Equal(("adapted", false), (grid.Value, grid.FromStudy));
        Assert.Equal("monopoles", Assert.Single(reading.Assumptions, a => a.Key == "head.voxels.dipole_load").Value);
        Assert.Empty(reading.Warnings);
    }

    [Fact]
    public void EveryKey_IsRead()
    {
        var head = (VoxelHeadChoice)StudyText.Read(Study(", grid: plain, dipole_load: element-gradient, tensors: {file: tensors.nii.gz, tissues: [white, grey]}, "
            + "landmarks_mm: {Nz: [0, 85, -40], RPA: [88, -18, -52]}, overlays: [{mask: mask.nii.gz, tissue: csf}, {mask: mask.nii.gz, tissue: air}]")).Study.Head;
        Assert.Equal((false, DipoleLoadName.ElementGradient), (head.Adapted, head.DipoleLoad));
        Assert.Equal("tensors.nii.gz", head.Tensors!.File);
        Assert.Equal(["white", "grey"], head.Tensors.Tissues);
        Assert.Equal(new Dictionary<string, Vec3> { ["Nz"] = new(0, 0.085, -0.04), ["RPA"] = new(0.088, -0.018, -0.052) }, head.Landmarks);
        Assert.Equal([("mask.nii.gz", TissueKind.Csf, "head.voxels.overlays[0]"), ("mask.nii.gz", TissueKind.Air, "head.voxels.overlays[1]")], head.Overlays.Select(o => (o.Mask, o.Tissue.Kind, o.Key)));
    }

    [Fact]
    public void ListedAir_NeedsNoConductivity()
    {
        var head = (VoxelHeadChoice)StudyText.Read(Study(tissues: Tissues[..^1] + ", {label: 9, tissue: air}, {label: 0, tissue: outside, conductivity_S_per_m: 0}]")).Study.Head;
        Assert.Equal([(9, 0.0), (0, 0.0)], head.Tissues.Where(t => t.Kind == TissueKind.Air).Select(t => (t.Label, t.Conductivity)));
    }

    [Theory]
    [InlineData("tissue: skull,", "tissue: mystery,", "head.voxels.tissues[1].tissue", "'mystery' does not say what it is")]
    [InlineData("label: 2", "label: 1", "head.voxels.tissues[1].label", "1 is already that of 'scalp'")]
    [InlineData("label: 2", "label: 0", "head.voxels.tissues[1].label", "0 is air in every label volume")]
    [InlineData("label: 2", "label: 2.5", "head.voxels.tissues[1].label", "whole number")]
    [InlineData("label: 2", "label: -2", "head.voxels.tissues[1].label", "whole number")]
    [InlineData("tissue: skull", "tissue: scalp", "head.voxels.tissues[1].tissue", "'scalp' stands twice with different conductivities (0.43 and 0.0132 S/m)")]
    [InlineData("tissue: csf, conductivity_S_per_m: 1.79", "tissue: csf", "head.voxels.tissues[2]", "states no conductivity_S_per_m")]
    [InlineData("0.0132", "0", "head.voxels.tissues[1].conductivity_S_per_m", "0 S/m is no conductor")]
    [InlineData("0.0132", "1000", "head.voxels.tissues[1].conductivity_S_per_m", "out of range")]
    [InlineData("tissue: skull", "tissue: air", "head.voxels.tissues[1].conductivity_S_per_m", "is not that of air")]
    [InlineData("0.0132", "0.0002", "head.voxels.tissues[1].conductivity_S_per_m", "the ratio of the brain's conductivity to the skull's, 1650 is far from the usual 5 to 120")]
    public void FaultyTissue_IsRefusedAtItsKey(string place, string replacement, string key, string said)
    {
        InputProblem problem = StudyText.Problem(Study().With(place, replacement));
        Assert.Equal(key, problem.Key);
        Assert.Contains(said, problem.Message, StringComparison.Ordinal);
        Assert.True(problem.Line > 0);
    }

    [Theory]
    [InlineData(", grid: fine", "head.voxels.grid", "adapted or plain")]
    [InlineData(", overlays: [{mask: mask.nii.gz, tissue: gray}]", "head.voxels.overlays[0].tissue", "not in the list of tissues; the nearest is grey; allowed: scalp, skull, csf, grey, white, air")]
    [InlineData(", tensors: {file: tensors.nii.gz, tissues: [wite]}", "head.voxels.tensors.tissues", "the nearest is white")]
    [InlineData(", tensors: {file: tensors.nii.gz}", "head.voxels.tensors.tissues", "is missing")]
    [InlineData(", landmarks_mm: {LPA: [88, 0, 0], RPA: [-87, 0, 0]}", "head.voxels.landmarks_mm.LPA", "lies to the right of RPA")]
    [InlineData(", landmarks_mm: {Nz: [0, -119, 0], Iz: [0, 85, 0]}", "head.voxels.landmarks_mm.Nz", "lies behind Iz")]
    [InlineData(", landmarks_mm: {A1: [0, 0, 0]}", "head.voxels.landmarks_mm.A1", "allowed here: Nz, Iz, LPA, RPA")]
    public void FaultyKey_IsRefusedThere(string more, string key, string said)
    {
        InputProblem problem = StudyText.Problem(Study(more));
        Assert.Equal(key, problem.Key);
        Assert.Contains(said, problem.Message, StringComparison.Ordinal);
    }

    // It closes the skull but is no bone: its conductivity is that of soft tissue.
    [Fact]
    public void Fontanelle_IsJudgedAsSoftTissue()
    {
        Assert.Empty(StudyText.Read(Study().With("tissue: skull", "tissue: fontanelle").With("0.0132", "0.33")).Warnings);
        Assert.Contains("0.0132 S/m is far from the usual 0.1 to 1 S/m of fontanelle", Assert.Single(StudyText.Read(Study().With("tissue: skull", "tissue: fontanelle")).Warnings), StringComparison.Ordinal);
    }

    [Fact]
    public void SpheresBesideVoxels_AreRefused() =>
        Assert.Contains("stands beside spheres", StudyText.Problem(Study().With("{voxels:", "{spheres: {preset: adult-4}, voxels:")).Message, StringComparison.Ordinal);

    [Fact]
    public void AcceptedRatio_AndOddConductivities_Warn()
    {
        Assert.Contains("accepted by accept_implausible", Assert.Single(StudyText.Read(
            Study().With("0.0132", "0.0002").With("title: small", "title: small\naccept_implausible: ['head.voxels.tissues[1].conductivity_S_per_m']")).Warnings), StringComparison.Ordinal);
        Assert.Contains("17.9 S/m is far from the usual 1 to 2.5 S/m of csf; check the unit", Assert.Single(StudyText.Read(Study().With("1.79", "17.9")).Warnings), StringComparison.Ordinal);
    }
}
