using System.Globalization;
using System.Text.Json;

using DeepSourceCheck.Cli;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>Each command from arguments to what it prints and writes.</summary>
public sealed class CommandTests : IDisposable
{
    private const string SmallStudy = """
        title: One point under a few electrodes
        head:
          spheres: {preset: adult-4}
        sensors:
          eeg: {layout: ten-twenty-21, reference: average}
        regions:
          - {name: here, points: points.tsv}
        responses:
          - {name: any, regions: [here], moment_nAm: 10, band_Hz: [1, 40], direction: [0, 0, 1]}
        noise: {eeg_sensor_uV_rms: 8}
        """;

    private readonly string _folder = Directory.CreateTempSubdirectory("dsc-command-").FullName;

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Fact]
    public void New_WritesAStudyThatChecksAndNeverOverwritesOne()
    {
        string study = At("mine", "study.yaml");
        Outcome first = InProcess.Run("new", At("mine"));
        Assert.Equal(ExitStatus.Done, first.Status);
        Assert.Contains(study, first.Out, StringComparison.Ordinal);
        byte[] written = File.ReadAllBytes(study);
        Assert.Equal(["study.yaml"], Directory.EnumerateFileSystemEntries(At("mine")).Select(f => Path.GetFileName(f)));
        Assert.Equal(ExitStatus.Done, InProcess.Run("check", study).Status);

        Outcome second = InProcess.Run("new", At("mine"));
        Assert.Equal(ExitStatus.InputWrong, second.Status);
        Assert.Contains("exists already", second.Error, StringComparison.Ordinal);
        Assert.Equal(written, File.ReadAllBytes(study));
    }

    [Fact]
    public void New_RefusesAFileWithoutTouchingIt()
    {
        File.WriteAllText(At("file"), "mine");
        Assert.Equal(ExitStatus.InputWrong, InProcess.Run("new", At("file")).Status);
        Assert.Equal("mine", File.ReadAllText(At("file")));
    }

    [Fact]
    public void New_ReportsWhatItWroteAsJson() =>
        Assert.Equal(At("mine", "study.yaml"), Json("new", At("mine"), "--json").GetProperty("written")[0].GetString());

    [Fact]
    public void Check_SaysWhatWouldRunAndWritesNothing()
    {
        Outcome outcome = InProcess.Run("check", Small());
        Assert.Equal(ExitStatus.Done, outcome.Status);
        Assert.Contains("21 electrodes, 0 MEG channels", outcome.Out, StringComparison.Ordinal);
        Assert.Contains("1 in 1 region", outcome.Out, StringComparison.Ordinal);
        Assert.Contains("these defaults enter", outcome.Out, StringComparison.Ordinal);
        Assert.Contains("amplitude_ratio", outcome.Out, StringComparison.Ordinal);
        Assert.Equal(2, Directory.EnumerateFileSystemEntries(_folder).Count());
    }

    [Fact]
    public void Check_OfTheDefaultStudyIsJson()
    {
        JsonElement json = Json("check", "--json");
        Assert.True(json.GetProperty("electrodes").GetInt32() >= 64);
        Assert.Equal(200, json.GetProperty("meg_channels").GetInt32());
        Assert.Equal(2, json.GetProperty("regions").GetArrayLength());
        Assert.True(json.GetProperty("predicted_memory_bytes").GetInt64() > 0);
        Assert.All(json.GetProperty("assumptions").EnumerateArray(), a => Assert.Contains(a.GetProperty("origin").GetString(), (string[])["study", "default"]));
    }

    [Theory]
    [InlineData("check")]
    [InlineData("assess")]
    [InlineData("why")]
    public void RunOverTheMemoryBudget_IsRefusedBeforehand(string command)
    {
        Outcome outcome = InProcess.Run(command, Small(), "--memory", "1kB");
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Contains("1 kB", outcome.Error, StringComparison.Ordinal);
        Assert.Empty(outcome.Out);
    }

    [Fact]
    public void Assess_WritesAWholeFolderAndPrintsTheAnswer()
    {
        Outcome outcome = InProcess.Run("assess", Small(), "--out", At("out"));
        Assert.True(outcome.Status == ExitStatus.Done, outcome.Error);
        Assert.All((string[])["assessment.json", "regions.csv", "dipoles.csv", "report.html"], name => Assert.True(new FileInfo(At("out", name)).Length > 0, name));
        Assert.NotEmpty(Directory.EnumerateFiles(At("out", "figures"), "*.svg"));
        Assert.Contains("One point under a few electrodes", outcome.Out, StringComparison.Ordinal);
        Assert.Contains(At("out"), outcome.Out, StringComparison.Ordinal);
        Assert.All(outcome.ErrorLines, line => Assert.StartsWith("warning: ", line, StringComparison.Ordinal));
        Assert.Equal(["out", "points.tsv", "study.yaml"], Directory.EnumerateFileSystemEntries(_folder).Select(f => Path.GetFileName(f)).Order(StringComparer.Ordinal));
    }

    [Fact]
    public void Assess_WithoutParts_LeavesThemOut()
    {
        Assert.Equal(ExitStatus.Done, InProcess.Run("assess", Small(), "--out", At("out"), "--without", "dipoles, figures,report").Status);
        Assert.Equal(["assessment.json", "regions.csv"], Directory.EnumerateFileSystemEntries(At("out")).Select(f => Path.GetFileName(f)).Order(StringComparer.Ordinal));
    }

    [Fact]
    public void Assess_PrintsAsJsonWhatItWrites()
    {
        Outcome outcome = InProcess.Run("assess", Small(), "--out", At("out"), "--without", "figures,report", "--json");
        Assert.True(outcome.Status == ExitStatus.Done, outcome.Error);
        Assert.Equal(File.ReadAllText(At("out", "assessment.json")), outcome.Out);
        Assert.Empty(outcome.Error);
    }

    [Fact]
    public void Assess_ReplacesAnEarlierResultByTheSameBytes()
    {
        string[] arguments = ["assess", Small(), "--out", At("out"), "--without", "figures"];
        Assert.Equal(ExitStatus.Done, InProcess.Run(arguments).Status);
        Dictionary<string, byte[]> first = Directory.EnumerateFiles(At("out")).ToDictionary(f => f, File.ReadAllBytes);
        Assert.Equal(ExitStatus.Done, InProcess.Run(arguments).Status);
        Assert.Equal(first.Keys.Order(StringComparer.Ordinal), Directory.EnumerateFiles(At("out")).Order(StringComparer.Ordinal));
        Assert.All(first, pair => Assert.Equal(pair.Value, File.ReadAllBytes(pair.Key)));
    }

    [Theory]
    [InlineData("assess")]
    [InlineData("leadfield")]
    public void FolderThatIsNotOurs_IsRefusedAndUntouched(string command)
    {
        Directory.CreateDirectory(At("theirs"));
        File.WriteAllText(At("theirs", "notes.txt"), "mine");
        Outcome outcome = InProcess.Run(command, Small(), "--out", At("theirs"));
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Equal(["notes.txt"], Directory.EnumerateFileSystemEntries(At("theirs")).Select(f => Path.GetFileName(f)));
    }

    [Fact]
    public void OutThatIsAFile_IsRefused()
    {
        File.WriteAllText(At("file"), "mine");
        Assert.Equal(ExitStatus.InputWrong, InProcess.Run("assess", Small(), "--out", At("file")).Status);
        Assert.Equal("mine", File.ReadAllText(At("file")));
    }

    [Fact]
    public void WrongStudy_ReportsEveryProblemAndWritesNothing()
    {
        File.WriteAllText(At("study.yaml"), SmallStudy.Replace("moment_nAm: 10", "moment_nAm: ten", StringComparison.Ordinal).Replace("eeg_sensor_uV_rms", "eeg_sensor_uV_rsm", StringComparison.Ordinal));
        File.WriteAllText(At("points.tsv"), "name\tx\ty\tz\nA\t0\t-20\t20\n");
        Outcome outcome = InProcess.Run("assess", At("study.yaml"), "--out", At("out"));
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Contains("moment_nAm", outcome.Error, StringComparison.Ordinal);
        Assert.Contains("eeg_sensor_uV_rms", outcome.Error, StringComparison.Ordinal);
        Assert.True(outcome.ErrorLines.Length >= 2, outcome.Error);
        Assert.False(Directory.Exists(At("out")));
    }

    [Fact]
    public void FailureWhileComputing_LeavesNoFolder()
    {
        Outcome outcome = InProcess.Run(s => s with { Steps = s.Steps with { Assess = (_, _, _) => throw new InvalidOperationException("no convergence") } }, "assess", Small(), "--out", At("out"));
        Assert.Equal(ExitStatus.Failed, outcome.Status);
        Assert.Equal(["points.tsv", "study.yaml"], Directory.EnumerateFileSystemEntries(_folder).Select(f => Path.GetFileName(f)).Order(StringComparer.Ordinal));
    }

    [Fact]
    public void InterruptionWhileComputing_LeavesNoFolder()
    {
        using var interruption = new Interruption();
        Outcome outcome = InProcess.Run(s => s with
        {
            Interruption = interruption,
            Steps = s.Steps with
            {
                Assess = (_, settings, _) =>
                {
                    interruption.Request();
                    settings.Cancellation.ThrowIfCancellationRequested();
                    throw new InvalidOperationException("the token was not the command's");
                },
            },
        }, "assess", Small(), "--out", At("out"));
        Assert.Equal(ExitStatus.Interrupted, outcome.Status);
        Assert.Equal(["points.tsv", "study.yaml"], Directory.EnumerateFileSystemEntries(_folder).Select(f => Path.GetFileName(f)).Order(StringComparer.Ordinal));
    }

    [Fact]
    public void Progress_IsShownOnATerminalAlone()
    {
        string study = Small();
        Outcome piped = InProcess.Run("assess", study, "--out", At("out"), "--without", "figures,report");
        Assert.DoesNotContain("\r", piped.Error, StringComparison.Ordinal);
        Outcome terminal = InProcess.Run(s => s with { ErrorIsTerminal = true }, "assess", study, "--out", At("out"), "--without", "figures,report");
        Assert.Contains("\r", terminal.Error, StringComparison.Ordinal);
        Assert.Contains(" %", terminal.Error, StringComparison.Ordinal);
        Assert.Equal(piped.Out, terminal.Out);
    }

    [Fact]
    public void Leadfield_NeedsNoResponsesAndReportsItsFiles()
    {
        string study = Small(SmallStudy[..SmallStudy.IndexOf("responses:", StringComparison.Ordinal)]);
        JsonElement json = Json("leadfield", study, "--out", At("lf"), "--json");
        Assert.Equal(["eeg.npy", "points.tsv", "rows.tsv"], json.GetProperty("files").EnumerateArray().Select(f => f.GetString()!));
        Assert.All(json.GetProperty("files").EnumerateArray(), f => Assert.True(File.Exists(At("lf", f.GetString()!))));
        Assert.Equal(21, json.GetProperty("electrodes").GetInt32());
        Assert.Equal(ExitStatus.Done, InProcess.Run("check", study).Status);
    }

    [Fact]
    public void Regions_ListTheContractsNames()
    {
        // Source: the contract's list of regions; each but the midline ones and cortex has two sides.
        string[] paired =
        [
            "thalamus", "ventral-posterolateral-thalamus", "medial-geniculate", "lateral-geniculate", "caudate", "putamen", "pallidum", "accumbens", "hippocampus", "amygdala",
            "subthalamic-nucleus", "substantia-nigra", "red-nucleus", "inferior-colliculus", "superior-colliculus", "cochlear-nucleus", "superior-olive", "lateral-lemniscus", "cuneate-nucleus", "cerebellum",
        ];
        string[] expected = [.. paired.SelectMany(n => new[] { n + "-left", n + "-right" }), "midbrain", "pons", "medulla", "cortex"];
        string[] listed = [.. Json("regions", "--json").GetProperty("regions").EnumerateArray().Select(r => r.GetProperty("name").GetString()!)];
        Assert.Equal(expected.Order(StringComparer.Ordinal), listed.Order(StringComparer.Ordinal));
        string text = InProcess.Run("regions").Out;
        Assert.All(expected, name => Assert.Contains("\n" + name + " ", text, StringComparison.Ordinal));
    }

    [Fact]
    public void MaskListing_AgreesWithTheReferenceReader()
    {
        // Source: ReferenceCases/nifti-edge/expected.json, made by an independent reader; centroids there have four decimals.
        const double CentroidTolerance = 1e-4;
        string file = Path.Combine(ReferenceCase.Folder, "nifti-edge", "ref.nii.gz");
        using JsonDocument expected = JsonDocument.Parse(File.ReadAllText(Path.Combine(ReferenceCase.Folder, "nifti-edge", "expected.json")));
        JsonElement reference = expected.RootElement.GetProperty("ref.nii.gz").GetProperty("labels");
        JsonElement[] labels = [.. Json("regions", "--mask", file, "--json").GetProperty("labels").EnumerateArray()];
        Assert.Equal(reference.EnumerateObject().Count(), labels.Length);
        foreach (JsonElement label in labels)
        {
            JsonElement wanted = reference.GetProperty(label.GetProperty("label").GetInt64().ToString(CultureInfo.InvariantCulture));
            Assert.Equal(wanted.GetProperty("voxels").GetInt64(), label.GetProperty("voxels").GetInt64());
            double[] found = label.GetProperty("centroid_mm").Numbers();
            double[] centroid = wanted.GetProperty("centroid_mm").Numbers();
            Assert.All(Enumerable.Range(0, 3), axis => Assert.InRange(found[axis] - centroid[axis], -CentroidTolerance, CentroidTolerance));
        }

        Assert.Contains("185", InProcess.Run("regions", "--mask", file).Out, StringComparison.Ordinal);
    }

    [Fact]
    public void MaskThatIsNoVolume_EndsWith2()
    {
        File.WriteAllText(At("x.nii"), "no volume");
        Outcome outcome = InProcess.Run("regions", "--mask", At("x.nii"));
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Contains("x.nii", outcome.Error, StringComparison.Ordinal);
    }

    [Fact]
    public void Why_PrintsTheChainOfTheCountThatAssessGives()
    {
        string study = Small();
        JsonElement chains = Json("why", study, "--json").GetProperty("chains");
        JsonElement chain = chains.EnumerateArray().First(c => c.GetProperty("modality").GetString() == "EEG");
        Assert.Equal("here", chain.GetProperty("region").GetString());
        Outcome assessed = InProcess.Run("assess", study, "--out", At("out"), "--without", "dipoles,figures,report", "--json");
        using JsonDocument document = JsonDocument.Parse(assessed.Out);
        JsonElement row = document.RootElement.GetProperty("responses")[0].GetProperty("regions")[0].GetProperty("results").EnumerateArray().First(r =>
            r.GetProperty("modality").GetString() == "EEG" && r.GetProperty("direction").GetString() == "given" && r.GetProperty("measure").GetString() == chain.GetProperty("measure").GetString());
        long trials = row.GetProperty("targets")[0].GetProperty("trials").GetProperty("p50").GetInt64();
        Assert.Contains(chain.GetProperty("numbers").EnumerateArray(), n => n.GetProperty("value").TryGetDouble(out double value) && value == trials);
        Assert.Contains(trials.ToString("#,0", CultureInfo.InvariantCulture).Split(',')[^1], InProcess.Run("why", study).Out, StringComparison.Ordinal);
    }

    [Fact]
    public void Why_ListsTheRegionsWhereTheNamedOneIsNotThere()
    {
        Outcome outcome = InProcess.Run("why", Small(), "thalamus-left");
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Contains("there are here", outcome.Error, StringComparison.Ordinal);
    }

    [Fact]
    public void Why_TakesALoneRegionOfTheDefaultStudy()
    {
        JsonElement chains = Json("why", "inferior-colliculus-right", "--json").GetProperty("chains");
        Assert.All(chains.EnumerateArray(), c => Assert.Equal("inferior-colliculus-right", c.GetProperty("region").GetString()));
        Assert.NotEqual(0, chains.GetArrayLength());
    }

    [Fact]
    public void Why_EndsWithWhatARealisticHeadChanges_AndHowToGetFiguresOfOnesOwn()
    {
        Outcome outcome = InProcess.Run("why", "inferior-colliculus-right");
        Assert.Equal(ExitStatus.Done, outcome.Status);
        string[] blocks = outcome.Out.Split("\n\n");
        Assert.StartsWith("What a realistic head changes: inferior-colliculus-right\n", blocks[^1], StringComparison.Ordinal);
        Assert.EndsWith("  deepsourcecheck new FOLDER --head phantom\n  variants: [{name: spheres, head: {spheres: {preset: adult-4}}}]\n", blocks[^1], StringComparison.Ordinal);
        JsonElement entry = Assert.Single(Json("why", "inferior-colliculus-right", "--json").GetProperty("realistic_head").EnumerateArray());
        Assert.Equal("inferior-colliculus-right", entry.GetProperty("region").GetString());
        Assert.Equal("left", entry.GetProperty("measured_side").GetString());
        Assert.Equal(3, entry.GetProperty("changes").GetArrayLength());
    }

    // Two regions that act together: the figures of each.
    [Fact]
    public void Why_OfRegionsThatActTogether_HasTheFiguresOfEach()
    {
        string study = Small(SmallStudy.Replace("regions: [here]", "regions: [thalamus-left, here, pons], counts: together", StringComparison.Ordinal));
        JsonElement json = Json("why", study, "--json");
        Assert.Equal(["thalamus-left", "pons"], json.GetProperty("realistic_head").EnumerateArray().Select(e => e.GetProperty("region").GetString()));
    }

    [Fact]
    public void Why_OfPointsOnSpheres_SaysThatNothingWasMeasured()
    {
        string study = Small();
        Assert.Contains("Nothing was measured for here", InProcess.Run("why", study).Out, StringComparison.Ordinal);
        Assert.Empty(Json("why", study, "--json").GetProperty("realistic_head").EnumerateArray());
    }

    private string At(params string[] parts) => Path.Combine([_folder, .. parts]);

    private string Small(string text = SmallStudy)
    {
        File.WriteAllText(At("points.tsv"), "name\tx\ty\tz\nA\t0\t-20\t20\n");
        File.WriteAllText(At("study.yaml"), text);
        return At("study.yaml");
    }

    /// <summary>Runs a command that must succeed and print one JSON document.</summary>
    private static JsonElement Json(params string[] arguments)
    {
        Outcome outcome = InProcess.Run(arguments);
        Assert.True(outcome.Status == ExitStatus.Done, outcome.Error);
        using JsonDocument document = JsonDocument.Parse(outcome.Out);
        Assert.Equal("DeepSourceCheck", document.RootElement.GetProperty("program").GetProperty("name").GetString());
        return document.RootElement.Clone();
    }
}
