using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report;

namespace DeepSourceCheck.Tests.Report;

public sealed class ResultFolderTests : IDisposable
{
    private const string Ours = """{"program": {"name": "DeepSourceCheck", "version": "0.0.1"}}""";

    private readonly string _root = Directory.CreateTempSubdirectory("result-folder-").FullName;

    private string Target => Path.Combine(_root, "out");

    public void Dispose() => Directory.Delete(_root, recursive: true);

    [Fact]
    public void Commit_PutsTheWholeFolderAtTheTarget()
    {
        using (ResultFolder folder = ResultFolder.Create(Target, ResultFolderKind.Assessment))
        {
            Fill(folder.Folder);
            Assert.False(Directory.Exists(Target));
            folder.Commit();
        }

        Assert.Equal(["assessment.json"], Names(Target));
        Assert.Equal(["out"], Names(_root));
    }

    [Fact]
    public void Dispose_WithoutCommit_LeavesNothing()
    {
        using (ResultFolder folder = ResultFolder.Create(Target, ResultFolderKind.Assessment))
        {
            Fill(folder.Folder);
        }

        Assert.Empty(Names(_root));
    }

    [Fact]
    public void Dispose_WithoutCommit_LeavesTheOldResultAsItWas()
    {
        Directory.CreateDirectory(Target);
        Fill(Target);
        File.WriteAllText(Path.Combine(Target, "regions.csv"), "old");
        using (ResultFolder folder = ResultFolder.Create(Target, ResultFolderKind.Assessment))
        {
            Fill(folder.Folder);
        }

        Assert.Equal("old", File.ReadAllText(Path.Combine(Target, "regions.csv")));
        Assert.Equal(["out"], Names(_root));
    }

    [Fact]
    public void Commit_ReplacesAnOldResultWhole()
    {
        Directory.CreateDirectory(Path.Combine(Target, "figures"));
        Fill(Target);
        File.WriteAllText(Path.Combine(Target, "dipoles.csv"), "old");
        using ResultFolder folder = ResultFolder.Create(Target, ResultFolderKind.Assessment);
        Fill(folder.Folder);
        folder.Commit();
        Assert.Equal(["assessment.json"], Names(Target));
        Assert.Equal(["out"], Names(_root));
    }

    [Fact]
    public void MissingParents_AreMade_AndGoAgainWithoutCommit()
    {
        string deep = Path.Combine(_root, "a", "b", "out");
        using (ResultFolder.Create(deep, ResultFolderKind.Assessment))
        {
            Assert.True(Directory.Exists(Path.Combine(_root, "a", "b")));
        }

        Assert.Empty(Names(_root));
        using ResultFolder folder = ResultFolder.Create(deep, ResultFolderKind.Assessment);
        Fill(folder.Folder);
        folder.Commit();
        Assert.Equal(["assessment.json"], Names(deep));
    }

    [Theory]
    [InlineData("file")]
    [InlineData("empty folder")]
    [InlineData("foreign folder")]
    [InlineData("other program")]
    [InlineData("broken json")]
    [InlineData("ours with a stranger")]
    [InlineData("below a file")]
    public void Targets_ThatAreNotOurs_AreRefusedAndLeftAlone(string kind)
    {
        string target = Target;
        switch (kind)
        {
            case "file":
                File.WriteAllText(target, "mine");
                break;
            case "below a file":
                File.WriteAllText(target, "mine");
                target = Path.Combine(target, "deeper");
                break;
            default:
                Directory.CreateDirectory(target);
                string json = kind switch { "other program" => Ours.Replace("Deep", "Other", StringComparison.Ordinal), "broken json" => "{", _ => Ours };
                if (kind != "empty folder" && kind != "foreign folder")
                {
                    File.WriteAllText(Path.Combine(target, "assessment.json"), json);
                }

                if (kind is "foreign folder" or "ours with a stranger")
                {
                    File.WriteAllText(Path.Combine(target, "notes.txt"), "mine");
                }

                break;
        }

        string[] before = Tree(_root);
        InputException e = Assert.Throws<InputException>(() => ResultFolder.CheckTarget(target, ResultFolderKind.Assessment));
        Assert.Contains(target, e.Message, StringComparison.Ordinal);
        Assert.Throws<InputException>(() => ResultFolder.Create(target, ResultFolderKind.Assessment));
        Assert.Equal(before, Tree(_root));
    }

    [Fact]
    public void Leadfields_AreRecognisedByTheirTablesAndArrays()
    {
        Directory.CreateDirectory(Target);
        File.WriteAllText(Path.Combine(Target, "rows.tsv"), "row\tmodality\tkind\tunit\n");
        File.WriteAllText(Path.Combine(Target, "points.tsv"), "name\tx\ty\tz\tregion\n");
        Assert.Throws<InputException>(() => ResultFolder.CheckTarget(Target, ResultFolderKind.Leadfield));
        File.WriteAllBytes(Path.Combine(Target, "eeg.npy"), [0x93, .. "NUMPY"u8, 1, 0]);
        ResultFolder.CheckTarget(Target, ResultFolderKind.Leadfield);
        Assert.Throws<InputException>(() => ResultFolder.CheckTarget(Target, ResultFolderKind.Assessment));
        // Leadfields from elsewhere: no column `region`.
        File.WriteAllText(Path.Combine(Target, "points.tsv"), "name\tx\ty\tz\n");
        Assert.Throws<InputException>(() => ResultFolder.CheckTarget(Target, ResultFolderKind.Leadfield));
    }

    [Fact]
    public void Create_RemovesWhatAKilledRunLeft_ButNotALiveRun()
    {
        string dead = Path.Combine(_root, ".out.partial-999999-1");
        Directory.CreateDirectory(dead);
        File.WriteAllText(Path.Combine(dead, ".running"), "");
        string other = Path.Combine(_root, ".out2.partial-999999-1");
        Directory.CreateDirectory(other);
        string users = Path.Combine(_root, ".out.partial-mine");
        Directory.CreateDirectory(users);
        using ResultFolder live = ResultFolder.Create(Target, ResultFolderKind.Assessment);
        using ResultFolder second = ResultFolder.Create(Target, ResultFolderKind.Assessment);
        Assert.False(Directory.Exists(dead));
        Assert.True(Directory.Exists(live.Folder));
        Assert.True(Directory.Exists(other));
        Assert.True(Directory.Exists(users));
        Assert.NotEqual(live.Folder, second.Folder);
    }

    [Fact]
    public void Create_AfterAKillBetweenTheTwoRenames_PutsTheOldResultBack()
    {
        string old = Path.Combine(_root, ".out.replaced-999999-1");
        Directory.CreateDirectory(old);
        Fill(old);
        using (ResultFolder.Create(Target, ResultFolderKind.Assessment))
        {
            Assert.Equal(["assessment.json"], Names(Target));
        }

        Assert.Equal(["out"], Names(_root));
    }

    [Fact]
    public void Commit_RefusesWhatAppearedAtTheTargetMeanwhile()
    {
        using (ResultFolder folder = ResultFolder.Create(Target, ResultFolderKind.Assessment))
        {
            Directory.CreateDirectory(Target);
            File.WriteAllText(Path.Combine(Target, "notes.txt"), "mine");
            Assert.Throws<InputException>(folder.Commit);
        }

        Assert.Equal(["notes.txt"], Names(Target));
        Assert.Equal(["out"], Names(_root));
    }

    [Fact]
    public void Dispose_AfterTheFolderVanished_DoesNotThrow()
    {
        ResultFolder folder = ResultFolder.Create(Target, ResultFolderKind.Assessment);
        Directory.Delete(folder.Folder, recursive: true);
        folder.Dispose();
        Assert.Empty(Names(_root));
    }

    private static void Fill(string folder) => File.WriteAllText(Path.Combine(folder, "assessment.json"), Ours);

    private static string[] Names(string folder) => [.. Directory.EnumerateFileSystemEntries(folder).Select(p => Path.GetFileName(p)!).Order(StringComparer.Ordinal)];

    private static string[] Tree(string folder) => [.. Directory.EnumerateFileSystemEntries(folder, "*", SearchOption.AllDirectories).Order(StringComparer.Ordinal)];
}
