namespace DeepSourceCheck.Tests.House;

/// <summary>What a visitor sees first: six names at the top, nothing heavy, a README that states the job.</summary>
public class TreeTests
{
    private static readonly string[] Top = ["DEVELOPERS.md", "DeepSourceCheck.sln", "README.md", "regions", "src", "tests"];

    // Larger files belong elsewhere: a clone stays quick.
    private const long LargestFile = 1_000_000;

    // The opening paragraph states the job, who has it and what comes out; less than this does not.
    private const int LeastOpeningWords = 60;

    [Fact]
    public void Top_HoldsTheSixNamesAndDotfiles()
    {
        string[] visible = [.. Repository.Tracked().Select(f => f.Split('/')[0]).Where(f => !f.StartsWith('.')).Distinct().Order(StringComparer.Ordinal)];
        Assert.Equal(Top, visible);
    }

    [Fact]
    public void Files_AreSmall()
    {
        string[] large = [.. Repository.Tracked().Where(f => new FileInfo(Repository.At(f)) is { Exists: true, Length: > LargestFile })];
        Assert.True(large.Length == 0, "over 1 MB: " + string.Join(", ", large));
    }

    [Fact]
    public void Readme_OpensWithTheJobInOnePlainParagraph()
    {
        string[] blocks = File.ReadAllText(Repository.At("README.md")).Split("\n\n", StringSplitOptions.RemoveEmptyEntries | StringSplitOptions.TrimEntries);
        string opening = blocks.First(b => !b.StartsWith('#'));
        int words = opening.Split((char[])[' ', '\n'], StringSplitOptions.RemoveEmptyEntries).Length;
        Assert.True(words > LeastOpeningWords, $"README opens with {words} words: {opening}");
        Assert.DoesNotMatch(@"^[-*|`>\d]", opening);
    }

    [Fact]
    public void Tests_MirrorTheSource()
    {
        string[] layers = ["Core", "Files", "Report", "Cli"];
        string[] missing = [.. layers.Where(l => !Directory.Exists(Repository.At("tests", "DeepSourceCheck.Tests", l)))];
        Assert.True(missing.Length == 0, "no tests for " + string.Join(", ", missing));
    }
}
