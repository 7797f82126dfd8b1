using DeepSourceCheck.Cli;
using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Cli.Pipeline;

/// <summary>Heads of voxels through the pipeline: each malformed one is refused with its reason, and a sound one reaches the same figures as the spheres whose leadfields it is given.</summary>
public sealed class VoxelPipelineTests : IDisposable
{
    private const double Edge = 0.004;

    private const string Tissues =
        """
            tissues:
              - {label: 1, tissue: scalp, conductivity_S_per_m: 0.43}
              - {label: 2, tissue: skull, conductivity_S_per_m: 0.0132}
              - {label: 3, tissue: csf, conductivity_S_per_m: 1.79}
              - {label: 4, tissue: brain, conductivity_S_per_m: 0.33}
        """;

    private const string Layers =
        "{centre_mm: [0, 0, 0], layers: [{tissue: brain, radius_mm: 71, conductivity_S_per_m: 0.33}, "
        + "{tissue: skull, radius_mm: 83, conductivity_S_per_m: 0.0132}, {tissue: scalp, radius_mm: 92, conductivity_S_per_m: 0.43}]}";

    private const string Rest =
        """
        sensors:
          eeg: {layout: ten-twenty-21, reference: average}
          eeg_derivations: [Cz-mastoids]
          meg: {coil: magnetometer, sites: 40, gap_mm: 20}
        noise:
          eeg_total: {rms_uV: 20, derivation: Cz-mastoids, band_Hz: [1, 100]}
          eeg_sensor_nV_per_rtHz: 20
          meg_sensor_fT_per_rtHz: 5
        regions:
          - {name: core, spacing_mm: 4, ellipsoid: {centre_mm: [12, -20, 0], semi_axes_mm: [9, 9, 9]}}
        responses: [{name: r, regions: [core], moment_nAm: 10, band_Hz: [1, 40], direction: tangential}]
        """;

    internal static readonly LayeredSphere Sphere = new("sphere", Vec3.Zero,
        [new("brain", 0.071, 0.33, 0.33), new("skull", 0.083, 0.0132, 0.0132), new("scalp", 0.092, 0.43, 0.43)]);

    private readonly ScratchFolder _folder = new();
    private readonly StandInParts _parts = new(Sphere);

    public VoxelPipelineTests() => Head(Good());

    public void Dispose() => _folder.Dispose();

    /// <summary>A study on head.nii.</summary>
    internal static string Voxels(string more = "") => $"title: t\nhead:\n  voxels:\n    labels: head.nii\n{Tissues}\n{more}{Rest}";

    private PreparedStudy Prepare(string study, bool checkOnly = false, long? memory = null, Purpose purpose = Purpose.Assess) =>
        StudyPipeline.Prepare(_folder.Write("study.yaml", study), purpose, Settings(checkOnly, memory));

    private RunSettings Settings(bool checkOnly = false, long? memory = null) =>
        new(memory, new HashSet<string>(), null, CancellationToken.None) { CheckOnly = checkOnly, VoxelParts = _parts.Parts };

    private string Refusal(string study, bool checkOnly = false, long? memory = null) => Assert.Throws<InputException>(() => Prepare(study, checkOnly, memory)).Message;

    /// <summary>The sphere of the leadfields, with 2 mm of csf around the brain.</summary>
    internal static TissueVolume Good(double edge = Edge) => SphereVolumes.Of(edge, [0.092, 0.083, 0.071, 0.069]);

    private void Head(TissueVolume volume) => _folder.Write("head.nii", volume.File());

    [Fact]
    public void Check_ComputesNothing_AndPredictsTheFiniteElements()
    {
        PreparedStudy voxels = Prepare(Voxels(), checkOnly: true), spheres = Prepare($"title: t\nhead: {{spheres: {Layers}}}\n{Rest}", checkOnly: true);
        Assert.Empty(_parts.Solved);
        Assert.Null(voxels.Setup.Noise);
        Assert.Equal((spheres.Electrodes, spheres.MegChannels, spheres.Dipoles), (voxels.Electrodes, voxels.MegChannels, voxels.Dipoles));
        Assert.True(voxels.PredictedMemory > spheres.PredictedMemory);
        Assert.True(voxels.PredictedSeconds > spheres.PredictedSeconds);
        Assert.Equal(["the stand-in placed the sensors"], voxels.Warnings);
        Assert.Throws<InvalidOperationException>(() => voxels.Setup.Source.Fill(new(voxels.Setup.Source.EegRows, voxels.Setup.Source.MegRows)));
    }

    [Fact]
    public void CheckCommand_PrintsHeadAndWarnings()
    {
        Head(Good().With((new(0.002, 0.002, 0.074), 3), (new(0.002, 0.002, 0.078), 3), (new(0.002, 0.002, 0.082), 3)));
        string path = _folder.Write("study.yaml", Voxels());
        PipelineSteps steps = PipelineSteps.Real with { Prepare = (p, purpose, s) => StudyPipeline.Prepare(p, purpose, s with { VoxelParts = _parts.Parts }) };
        Outcome outcome = InProcess.Run(s => s with { Steps = steps }, "check", path);
        Assert.Equal(0, outcome.Status);
        Assert.Matches(@"(?m)^head +voxels: head\.nii, [0-9,]+ elements of 4 mm, scalp, skull, csf, brain$", outcome.Out);
        Assert.Contains("head.nii: leak: scalp touches csf at 1 voxel", outcome.Error, StringComparison.Ordinal);
        Assert.Equal(2, InProcess.Run(s => s with { Steps = steps }, "check", path, "--memory", "30MB").Status);
    }

    [Fact]
    public void Figures_AreThoseOfTheSphere_WhereTheLeadfieldIs()
    {
        Assessment voxels = Assess(Voxels().Replace("eeg_total: {rms_uV: 20, derivation: Cz-mastoids, band_Hz: [1, 100]}", "brain: none", StringComparison.Ordinal));
        Assessment spheres = Assess($"title: t\nhead: {{spheres: {Layers}}}\n{Rest}".Replace("eeg_total: {rms_uV: 20, derivation: Cz-mastoids, band_Hz: [1, 100]}", "brain: none", StringComparison.Ordinal));
        RegionResult a = voxels.Responses[0].Regions[0], b = spheres.Responses[0].Regions[0];
        Assert.Equal(b.Dipoles, a.Dipoles);
        foreach (MeasureResult expected in b.Results)
        {
            MeasureResult actual = a.Find(expected.Modality, expected.Direction, expected.Measure)!;
            Assert.Equal(expected.SnrDb, actual.SnrDb);
        }

        Assert.Equal(2, _parts.Solved.Count + 1);
    }

    [Fact]
    public void RemovalOfTheRoom_IsThatOfTheSphere_WhereTheLeadfieldIs()
    {
        static string Room(string study) => study.Replace("eeg_total: {rms_uV: 20, derivation: Cz-mastoids, band_Hz: [1, 100]}", "brain: none\n  environment: {meg_fT_per_rtHz: 3, removed: true}", StringComparison.Ordinal);
        RegionResult a = Assess(Room(Voxels())).Responses[0].Regions[0], b = Assess(Room($"title: t\nhead: {{spheres: {Layers}}}\n{Rest}")).Responses[0].Regions[0];
        Assert.Equal(b.Removal, a.Removal);
        Assert.True(a.Removal!.MatchedFilterDb < -1, "outward magnetometers above a deep source");
        PreparedStudy prepared = Prepare(Room(Voxels()));
        prepared.ReleaseLeadfields();
        Assert.Null(prepared.Setup.Removal);
    }

    [Fact]
    public void BrainNoise_StandsInTheGreyMatter_AndItsTablesAreSolvedToo()
    {
        PreparedStudy prepared = Prepare(Voxels());
        Assert.NotNull(prepared.Setup.Noise);
        Assert.Equal(2, _parts.Solved.Count);
        Assert.Equal(prepared.Dipoles + 500, _parts.Solved[0].Places.Count);
        Assert.Equal(500, _parts.Solved[1].Places.Count);
        Assert.All(_parts.Solved[1].Places, p => Assert.Equal("brain", _parts.Built!.Head.TissueAt(p)));
        Assert.Equal(["Cz", "M1", "M2"], _parts.Solved[1].Electrodes.Select(e => e.Name));
    }

    [Fact]
    public void Overlays_ActInTheirOrder()
    {
        var grid = new VoxelGrid(5, 5, 5, new(new(Edge, 0, 0), new(0, Edge, 0), new(0, 0, Edge), new(0.006, -0.022, -0.006)));
        _folder.Write("cavity.nii", SphereVolumes.Bytes(grid, [.. Enumerable.Repeat(1.0, 125)]).File());
        PreparedStudy prepared = Prepare(Voxels("    overlays: [{mask: cavity.nii, tissue: air}, {mask: cavity.nii, tissue: csf}]\n"), checkOnly: true);
        Assert.Equal(TissueKind.Csf, ((VoxelHead)prepared.Setup.Head).Volume.At(new(0.014, -0.014, 0.002)).Kind);
        Assert.Contains(prepared.Warnings, w => w.StartsWith("core: ", StringComparison.Ordinal) && w.Contains("fell into csf", StringComparison.Ordinal));
        Assert.Contains(prepared.Inputs, f => f.Path == "cavity.nii");
    }

    [Fact]
    public void Tensors_ReachTheSolver_AndDiffusionIsToldFromConductivity()
    {
        TissueVolume volume = Good(0.008);
        Head(volume);
        WriteTensors(volume.Grid, 0.3);
        string study = Voxels("    tensors: {file: tensors.nii, tissues: [brain]}\n");
        Prepare(study);
        Assert.Equal(volume.Cells.Count((byte)4), _parts.Built!.Tensors!.Count);
        WriteTensors(volume.Grid, 0.0007);
        Assert.Contains("the mean over directions and voxels of brain, against the tissue's own conductivity, 0.0007 S/m is far from the usual 0.33 to 0.33 S/m", Refusal(study), StringComparison.Ordinal);
    }

    [Fact]
    public void Leadfield_OfLibraryRegions_IsUnscaled()
    {
        PreparedStudy prepared = Prepare(Voxels().Replace("regions: [core]", "regions: [core, cortex, pons]", StringComparison.Ordinal), checkOnly: true);
        Assert.Equal(["core", "cortex", "pons"], prepared.Regions.Select(r => r.Region));
        Assert.All(prepared.Setup.Regions[1].Positions, p => Assert.Equal("brain", prepared.Setup.Head.TissueAt(p)));
    }

    [Fact]
    public void LibraryRegions_AreWarnedOfWhereTheHeadIsOff_AndRefusedWhereItIsAnother()
    {
        // The sphere's centre lies 19 mm from that of the library's head; moved by 30 mm it cannot be meant.
        string study = Voxels().Replace("regions: [core]", "regions: [core, pons]", StringComparison.Ordinal);
        Assert.Contains(Prepare(study, checkOnly: true).Warnings, w => w.StartsWith("library regions are drawn for an adult head", StringComparison.Ordinal));
        Assert.DoesNotContain(Prepare(Voxels(), checkOnly: true).Warnings, w => w.StartsWith("library regions", StringComparison.Ordinal));
        TissueVolume good = Good();
        VoxelGrid grid = good.Grid;
        var moved = new VoxelGrid(grid.Nx, grid.Ny, grid.Nz, grid.ToWorld with { Offset = grid.ToWorld.Offset + new Vec3(0.03, 0, 0) });
        Head(new TissueVolume(moved, good.Cells.ToArray(), good.Tissues));
        string message = Refusal(study, checkOnly: true);
        Assert.Matches(@"study\.yaml:\d+:\d+: .*region 'pons': library regions are drawn for an adult head .* give a mask that fits this head", message);
    }

    [Fact]
    public void Leadfield_OfElectrodesAlone_SolvesNoOtherRow()
    {
        string eeg = Voxels().Replace("  meg: {coil: magnetometer, sites: 40, gap_mm: 20}\n", "", StringComparison.Ordinal).Replace("  meg_sensor_fT_per_rtHz: 5\n", "", StringComparison.Ordinal);
        PreparedStudy prepared = Prepare(eeg, purpose: Purpose.Leadfield);
        VoxelProblem solved = Assert.Single(_parts.Solved);
        Assert.Equal((prepared.Electrodes, 0), (solved.Electrodes.Count, solved.Channels.Count));
    }

    [Fact]
    public void UnknownLabel_IsRefused()
    {
        byte[] bytes = Good().File();
        bytes[^100_000] = 7;
        _folder.Write("head.nii", bytes);
        Assert.Matches(@"^head.nii: head.voxels.tissues: label 7 \(1 voxel, the first at \(.*\) mm\) has no tissue", Refusal(Voxels()));
    }

    [Fact]
    public void EmptyVolume_IsRefused()
    {
        Head(SphereVolumes.Of(Edge, [0, 0, 0, 0]));
        Assert.StartsWith("head.nii: the volume is empty", Refusal(Voxels()), StringComparison.Ordinal);
    }

    [Fact]
    public void MaskInAir_IsRefusedByTheRegionsName()
    {
        var grid = new VoxelGrid(3, 3, 1, new(new(Edge, 0, 0), new(0, Edge, 0), new(0, 0, Edge), new(0.085, 0.085, 0.085)));
        _folder.Write("mask.nii", SphereVolumes.Bytes(grid, [.. Enumerable.Repeat(1.0, 9)]).File());
        string study = Voxels().Replace("{name: core, spacing_mm: 4, ellipsoid: {centre_mm: [12, -20, 0], semi_axes_mm: [9, 9, 9]}}", "{name: far-nucleus, mask: mask.nii, label: 1}", StringComparison.Ordinal)
            .Replace("[core]", "[far-nucleus]", StringComparison.Ordinal);
        Assert.Matches("region 'far-nucleus' keeps no dipole in voxels: head.nii: its centroid lies in air", Refusal(study));
    }

    [Fact]
    public void ElectrodeOffTheScalp_AndCoilInside_AreRefusedByName()
    {
        _folder.Write("electrodes.tsv", "name\tx\ty\tz\nE001\t0\t0\t92\nE002\t0\t152\t0\nE003\t-92\t0\t0\n");
        Assert.Contains("E002", Refusal(Voxels().Replace("layout: ten-twenty-21", "electrodes: electrodes.tsv", StringComparison.Ordinal).Replace("  eeg_derivations: [Cz-mastoids]\n", "", StringComparison.Ordinal)
            .Replace("derivation: Cz-mastoids", "derivation: E001-E003", StringComparison.Ordinal)), StringComparison.Ordinal);
        _folder.Write("coils.tsv", "channel\tkind\tx_mm\ty_mm\tz_mm\taxis_x\taxis_y\taxis_z\tshare\nS001\tmagnetometer\t0\t0\t120\t0\t0\t1\t1\nS007\tmagnetometer\t0\t60\t0\t0\t1\t0\t1\n");
        string coils = Refusal(Voxels().Replace("{coil: magnetometer, sites: 40, gap_mm: 20}", "{coils: coils.tsv}", StringComparison.Ordinal));
        Assert.Matches("coils.tsv.*S007 has a coil point 60 mm from the sphere's centre", coils);
        Assert.DoesNotContain("S001", coils, StringComparison.Ordinal);
    }

    // The program's own placement, nothing solved: what `check` says of a contact in bone, of a generated array on the skin and of landmarks that pitch the head.
    [Fact]
    public void WhatWasGivenAndDoesNotFit_IsToldByCheck()
    {
        _folder.Write("electrodes.tsv", "name\tx\ty\tz\nE001\t0\t0\t92\nE003\t-92\t0\t0\nG1\t77\t0\t0\n");
        string study = Voxels().Replace("layout: ten-twenty-21", "electrodes: electrodes.tsv", StringComparison.Ordinal).Replace("  eeg_derivations: [Cz-mastoids]\n", "", StringComparison.Ordinal)
            .Replace("derivation: Cz-mastoids", "derivation: E001-E003", StringComparison.Ordinal).Replace("coil: magnetometer, sites: 40, gap_mm: 20", "coil: on-scalp, sites: 40, gap_mm: 1.5", StringComparison.Ordinal)
            .Replace("    labels: head.nii\n", "    labels: head.nii\n    landmarks_mm: {Nz: [0, 92, 0], Iz: [0, -65, 65], LPA: [-88, 0, -26], RPA: [88, 0, -26]}\n", StringComparison.Ordinal);
        IReadOnlyList<string> warnings = StudyPipeline.Prepare(_folder.Write("study.yaml", study), Purpose.Assess, Settings(checkOnly: true) with { VoxelParts = VoxelParts.Own }).Warnings;
        Assert.Contains(warnings, w => System.Text.RegularExpressions.Regex.IsMatch(w, @"^electrodes\.tsv: .*stay where they are: G1 \(skull, 1\d mm below the scalp\)"));
        Assert.Contains(warnings, w => w.StartsWith("the generated MEG array: ", StringComparison.Ordinal) && w.Contains("nearer to the scalp than one voxel (4 mm)", StringComparison.Ordinal));
        Assert.Contains(warnings, w => w.StartsWith("head.voxels.landmarks_mm: Nz and Iz say that the head is pitched by ", StringComparison.Ordinal) && w.Contains("its face down", StringComparison.Ordinal));
    }

    [Fact]
    public void TooLittleMemory_IsRefusedBeforeAnythingIsSolved()
    {
        string header = Refusal(Voxels(), memory: 100_000), fewest = Refusal(Voxels(), memory: 30_000_000);
        long whole = Prepare(Voxels(), checkOnly: true).PredictedMemory;
        Assert.Matches(@"^head.nii: head.voxels.labels: 48 x 48 x 48 voxels take about [\d.]+ kB to read alone, more than the 100 kB that --memory allows", header);
        Assert.Matches(@"^head.nii: head.voxels.labels: the finite elements on it need at least [\d.]+ [MG]B of memory, more than the 30 MB that --memory allows", fewest);

        // Between the least and the whole, the study's own sensors and dipoles decide: base and results come on top of the elements' share.
        long own = whole - 160_000_000;
        Assert.Matches(@"^.*study.yaml:4:\d+: head.voxels.labels: the finite elements on head.nii would need about [\d.]+ [MG]B of memory, more than", Refusal(Voxels(), memory: own - 2_000_000));
        Assert.Empty(_parts.Solved);
    }

    [Fact]
    public void MillimetresTakenForMetres_AreRefused()
    {
        // The same file with its affine in metres, as the unit code says millimetres.
        VoxelGrid grid = Good().Grid;
        var tiny = new VoxelGrid(grid.Nx, grid.Ny, grid.Nz, grid.ToWorld.ThenScale(0.001));
        _folder.Write("head.nii", SphereVolumes.Bytes(tiny, [.. Good().Cells.ToArray().Select(c => (double)c)]).File());
        Assert.Contains("the radius of a sphere of the head's volume, 0.1 mm is far from the usual 45 to 110 mm", Refusal(Voxels()), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(430_000, 355, 0.3e9, 0.7e9, 4, 12)]
    [InlineData(3_300_000, 355, 2.2e9, 4.4e9, 35, 95)]
    [InlineData(4_800_000, 266, 3.6e9, 7e9, 40, 110)]
    public void Prediction_ComesWithinTwoTimesOfWhatWasMeasured(long nodes, long rows, double leastBytes, double mostBytes, double leastSeconds, double mostSeconds)
    {
        // Peak of the process and half of its processor time on two processors: 0.41 GB and 5 s, 2.6 GB and 47 s, 4.2 GB and 54 s.
        LeadfieldCost cost = VoxelCost.Of(2 * nodes, nodes, rows, 2000, kept: 16_000, processors: 2);
        Assert.InRange(cost.Bytes, leastBytes, mostBytes);
        Assert.InRange(cost.Seconds, leastSeconds, mostSeconds);
    }

    private Assessment Assess(string study) => StudyPipeline.Assess(Prepare(study), Settings(), null);

    private void WriteTensors(VoxelGrid grid, double mean)
    {
        var values = new double[6 * grid.Count];
        foreach ((int entry, double value) in new[] { (0, 1.2 * mean), (2, mean), (5, 0.8 * mean) })
        {
            values.AsSpan(entry * grid.Count, grid.Count).Fill(value);
        }

        NiftiBytes one = SphereVolumes.Bytes(grid, values, 16, 32);
        _folder.Write("tensors.nii", new NiftiBytes { Dim = [5, grid.Nx, grid.Ny, grid.Nz, 1, 6, 1, 1], Pixdim = one.Pixdim, Rows = one.Rows, Intent = 1005, DataType = 16, Bitpix = 32, Values = values }.File());
    }
}
