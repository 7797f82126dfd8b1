using DeepSourceCheck.Cli;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>`new --head phantom`: everything or nothing, and nothing of the user's is touched.</summary>
public sealed class NewPhantomTests : IDisposable
{
    private static readonly string[] Files = ["phantom-head.nii.gz", "phantom-regions.nii.gz", "phantom-regions.tsv", "study.yaml"];

    private readonly ScratchFolder _scratch = new();

    public void Dispose() => _scratch.Dispose();

    [Theory]
    [InlineData("phantom")]
    [InlineData("neonate-phantom")]
    public void Phantom_WritesStudyHeadRegionsAndListing(string kind)
    {
        Outcome outcome = InProcess.Run("new", _scratch.At("deep/mine"), "--head", kind, "--voxel-mm", "3");
        Assert.True(outcome.Status == ExitStatus.Done, outcome.Error);
        Assert.Equal(Files, Names("deep/mine"));
        Assert.All(Files, file => Assert.Contains("Written: " + Path.Combine(_scratch.At("deep/mine"), file), outcome.Out, StringComparison.Ordinal));
        Assert.NotEmpty(outcome.ErrorLines);
        Assert.All(outcome.ErrorLines, line => Assert.StartsWith("warning: ", line, StringComparison.Ordinal));
        Assert.Contains("phantom-head.nii.gz", File.ReadAllText(_scratch.At("deep/mine/study.yaml")), StringComparison.Ordinal);
    }

    [Fact]
    public void Json_ListsWhatWasWritten()
    {
        Outcome outcome = InProcess.Run("new", _scratch.At("mine"), "--head", "phantom", "--voxel-mm", "3", "--json");
        using var json = System.Text.Json.JsonDocument.Parse(outcome.Out);
        string[] written = [.. json.RootElement.GetProperty("written").EnumerateArray().Select(p => p.GetString()!)];
        Assert.Equal(Files, written.Select(p => Path.GetFileName(p)).Order(StringComparer.Ordinal));
        Assert.All(written, path => Assert.True(File.Exists(path)));
    }

    [Theory]
    [InlineData("study.yaml")]
    [InlineData("phantom-head.nii.gz")]
    [InlineData("phantom-regions.tsv")]
    public void FileThatIsThere_IsLeftAlone_AndNothingElseIsWritten(string name)
    {
        Directory.CreateDirectory(_scratch.At("mine"));
        File.WriteAllText(_scratch.At("mine/" + name), "the user's");
        Outcome outcome = InProcess.Run("new", _scratch.At("mine"), "--head", "phantom", "--voxel-mm", "3");
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Contains("exists already", outcome.Error, StringComparison.Ordinal);
        Assert.Equal([name], Names("mine"));
        Assert.Equal("the user's", File.ReadAllText(_scratch.At("mine/" + name)));
    }

    [Fact]
    public void OtherFilesOfTheFolder_Stay()
    {
        Directory.CreateDirectory(_scratch.At("mine"));
        File.WriteAllText(_scratch.At("mine/notes.txt"), "the user's");
        Assert.Equal(ExitStatus.Done, InProcess.Run("new", _scratch.At("mine"), "--head", "phantom", "--voxel-mm", "3").Status);
        Assert.Equal([.. Files.Append("notes.txt").Order(StringComparer.Ordinal)], Names("mine"));
    }

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Interrupted_LeavesNothing(bool folderIsThere)
    {
        if (folderIsThere)
        {
            Directory.CreateDirectory(_scratch.At("mine"));
        }

        using var interruption = new Interruption();
        interruption.Request();
        Outcome outcome = InProcess.Run(s => s with { Interruption = interruption }, "new", _scratch.At("mine"), "--head", "phantom");
        Assert.Equal(ExitStatus.Interrupted, outcome.Status);
        Assert.Equal(folderIsThere, Directory.Exists(_scratch.At("mine")));
        Assert.True(!folderIsThere || Names("mine").Length == 0);
    }

    private string[] Names(string folder) => [.. Directory.EnumerateFileSystemEntries(_scratch.At(folder)).Select(f => Path.GetFileName(f)!).Order(StringComparer.Ordinal)];
}
