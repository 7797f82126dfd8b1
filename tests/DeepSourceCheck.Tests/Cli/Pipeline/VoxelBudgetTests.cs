using System.Runtime.CompilerServices;

using DeepSourceCheck.Cli;
using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Leadfields.Voxels;
using DeepSourceCheck.Core.Numerics.Multigrid;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Sensors;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Cli.Pipeline;

/// <summary>What does not fit or cannot be meant is refused before anything is solved, whosever it is; what a head holds is gone when the next one is solved for; failures of the solver are told as the user's.</summary>
public sealed class VoxelBudgetTests : IDisposable
{
    // The elements of a variant whose array is ten times as large.
    private const string LargeVariant = "\nvariants: [{name: dense array, sensors: {meg: {sites: 4000}}}]";
    private const string LayoutVariants = "\nvariants: [{name: a, sensors: {eeg: {layout: ten-ten-64}}}, {name: b, sensors: {eeg: {layout: ten-ten-81}}}]";

    private readonly ScratchFolder _folder = new();
    private readonly StandInParts _parts = new(VoxelPipelineTests.Sphere);

    public VoxelBudgetTests() => _folder.Write("head.nii", VoxelPipelineTests.Good().File());

    public void Dispose() => _folder.Dispose();

    private static string Study(string more = "") => VoxelPipelineTests.Voxels() + more;

    private RunSettings Settings(long? memory = null, bool checkOnly = false, VoxelParts? parts = null) =>
        new(memory, new HashSet<string>(), null, CancellationToken.None) { CheckOnly = checkOnly, VoxelParts = parts ?? _parts.Parts };

    private PreparedStudy Prepare(string study, long? memory = null, bool checkOnly = false, VoxelParts? parts = null, Purpose purpose = Purpose.Assess) =>
        StudyPipeline.Prepare(_folder.Write("study.yaml", study), purpose, Settings(memory, checkOnly, parts));

    private string Refusal(string study, long? memory = null, VoxelParts? parts = null) => Assert.Throws<InputException>(() => Prepare(study, memory, parts: parts)).Message;

    private Outcome Command(string study, VoxelParts parts, string command, params string[] more)
    {
        PipelineSteps steps = PipelineSteps.Real with { Prepare = (path, purpose, s) => StudyPipeline.Prepare(path, purpose, s with { VoxelParts = parts }) };
        return InProcess.Run(s => s with { Steps = steps }, [command, _folder.Write("study.yaml", study), .. more]);
    }

    [Theory]
    [InlineData(Purpose.Assess)]
    [InlineData(Purpose.Leadfield)]
    public void RunThatMissesTheBudgetByALittle_IsRefusedBeforeAnythingIsSolved(Purpose purpose)
    {
        long whole = Prepare(Study(), checkOnly: true, purpose: purpose).PredictedMemory;
        InputException error = Assert.Throws<InputException>(() => Prepare(Study(), whole - 1, purpose: purpose));
        Assert.Matches("^.*study.yaml: the run would need about .*, more than the .* that --memory allows", error.Message);
        Assert.Empty(_parts.Solved);
        Prepare(Study(), whole, purpose: purpose);
        Assert.NotEmpty(_parts.Solved);
    }

    [Theory]
    [InlineData("assess", "--out")]
    [InlineData("leadfield", "--out")]
    [InlineData("why", null)]
    public void RefusedCommand_EndsWith2AndWritesNothing(string command, string? folder)
    {
        Outcome outcome = Command(Study(), _parts.Parts, command, [.. folder is null ? Array.Empty<string>() : [folder, _folder.At("results")], "--memory", "80MB", "--cache", _folder.At("rows")]);
        Assert.Equal(2, outcome.Status);
        Assert.Contains("--memory allows", Assert.Single(outcome.ErrorLines), StringComparison.Ordinal);
        Assert.Empty(_parts.Solved);
        Assert.False(Path.Exists(_folder.At("results")) || Path.Exists(_folder.At("rows")));
    }

    [Fact]
    public void VariantThatDoesNotFit_IsRefusedByNameBeforeTheStudyIsSolved()
    {
        long own = Prepare(Study(), checkOnly: true).PredictedMemory, both = Prepare(Study(LargeVariant), checkOnly: true).PredictedMemory;
        Assert.True(both > own + 50_000_000);
        Assert.Contains("dense array", Refusal(Study(LargeVariant), own), StringComparison.Ordinal);
        Assert.Contains("the run would need", Refusal(Study(LargeVariant), both - 1), StringComparison.Ordinal);
        Assert.Empty(_parts.Solved);
    }

    [Fact]
    public void VariantOrNoiseThatIsWrong_IsRefusedBeforeTheStudyIsSolved()
    {
        Assert.Contains("gone.nii", Refusal(Study("\nvariants: [{name: other head, head: {voxels: {labels: gone.nii}}}]")), StringComparison.Ordinal);
        string covariance = Study().Replace("  meg_sensor_fT_per_rtHz: 5", "  meg_covariance: {file: gone.npy}", StringComparison.Ordinal);
        Assert.Contains("gone.npy", Refusal(covariance), StringComparison.Ordinal);
        Assert.Empty(_parts.Solved);
    }

    [Fact]
    public void LeadfieldsOfOneHead_AreGoneWhenTheNextIsSolvedFor()
    {
        // The prediction takes the largest head, not the sum: whatever was solved for before must be free by then. The tables' own are solved for beside the study's.
        List<WeakReference> solved = [];
        List<bool> alive = [];
        _parts.OnSolved = (n, source) =>
        {
            if (n > 0 && n % 2 == 0)
            {
                GC.Collect();
                alive.AddRange(solved.Take(n).Select(s => s.IsAlive));
            }

            solved.Add(new WeakReference(source));
        };
        PreparedStudy prepared = Prepare(Study(LayoutVariants));
        Assessment assessment = Assess(prepared);
        Assert.Equal(["a", "b"], assessment.Variants.Select(v => v.Name));
        Assert.Equal((6, 6), (solved.Count, alive.Count));
        Assert.All(alive, Assert.False);
        Assert.Equal(23, prepared.Electrodes);               // 21 and the two mastoids: counts outlive the leadfields
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private Assessment Assess(PreparedStudy prepared) => StudyPipeline.Assess(prepared, Settings(), null);

    [Fact]
    public void Prediction_CountsTheRowsThatStayWhileTheTablesAreSolvedFor()
    {
        var cost = new VoxelCost(VoxelPipelineTests.Good());
        LeadfieldCost one = cost.Of(64, 2000, reusable: true), both = cost.Of((64, 2000, true), (203, 500, false));
        long kept = cost.RowBytes(64, 2000, reusable: true);
        Assert.Equal(4L * 64 * cost.SourceNodes, kept);
        Assert.Equal(cost.Of(203, 500, reusable: false).Bytes + kept, both.Bytes);
        Assert.True(both.Seconds > one.Seconds);
    }

    [Fact]
    public void Prediction_KnowsTheNodesWhoseRowsAreKept()
    {
        TissueVolume volume = VoxelPipelineTests.Good();
        Assert.Equal(KeptNodes.All(new SourceTissue(HexMesh.Plain(volume))).Count, new VoxelCost(volume).SourceNodes);
    }

    [Fact]
    public void MoreRowsThanCanBeKept_AreRefusedBeforeAnythingIsSolved()
    {
        // The stand-in's limit: what an array holds would take more dipoles than a test has time for.
        PreparedStudy check = Prepare(Study(), checkOnly: true);
        long sensors = (check.Electrodes + check.MegChannels + 15) / 16 * 16, values = 27 * (check.Dipoles + 500) * sensors;
        string message = Refusal(Study(), parts: _parts.Parts with { MostRowValues = values - 1 });
        Assert.Matches(@"^.*study.yaml:4:\d+: head.voxels.labels: the [0-9,]+ dipoles use [0-9,]+ nodes of the finite elements on head.nii, and [0-9,]+ nodes x 63 sensors are more values than can be kept", message);
        Assert.Contains("a wider spacing_mm", message, StringComparison.Ordinal);
        Assert.Empty(_parts.Solved);
        Prepare(Study(), parts: _parts.Parts with { MostRowValues = values });
        Assert.Equal(2, _parts.Solved.Count);
        Assert.InRange(TransferRows.MostValues, 2_000_000_000L, int.MaxValue);
    }

    [Fact]
    public void EquationsThatAreNotSolved_EndWith3AndNameTheSensors()
    {
        _folder.Write("head.nii", VoxelPipelineTests.Good(0.008).File());
        VoxelParts one = _parts.Parts with { Solver = (built, choice) => new RowSolver(built, choice, new SolveSettings(1e-6, 1)) };
        Outcome outcome = Command(Study(), one, "assess", "--out", _folder.At("results"), "--cache", _folder.At("rows"));
        Assert.Equal(3, outcome.Status);
        string line = outcome.ErrorLines[^1];
        Assert.Matches(@"^error: the finite elements on head.nii were not solved for \w+, \w+, \w+, \w+, \w+ and \d+ more: relative residual [\d.]+e-\d after 1 cycles, 1\.0e-6 was asked for\. Likely causes: ", line);
        Assert.Contains("Look at conductivity_S_per_m", line, StringComparison.Ordinal);
        Assert.DoesNotContain("DEEPSOURCECHECK_TRACE", line, StringComparison.Ordinal);
        Assert.False(Path.Exists(_folder.At("results")) || Path.Exists(_folder.At("rows")));
    }

    [Fact]
    public void ChannelsThatAreNotSolved_AreNamedAfterTheElectrodes()
    {
        var problem = new VoxelProblem("", [new("Cz", default, true, 0)], [new("S001", CoilKind.Magnetometer, []), new("S002", CoilKind.Magnetometer, [])], [], false);
        Assert.Equal(["Cz", "S001", "S002"], Enumerable.Range(0, 3).Select(problem.Sensor));
        string few = new NotSolvedException("head.nii", ["S002"], new NoConvergenceException([2], 100, 3e-3, 1e-6)).Message;
        Assert.Contains("not solved for S002: relative residual 3.0e-3 after 100 cycles, 1.0e-6 was asked for", few, StringComparison.Ordinal);
    }
}
