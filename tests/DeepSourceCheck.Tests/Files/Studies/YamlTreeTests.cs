using System.Text;

using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>What a YAML text may hold, and where a refusal points.</summary>
public class YamlTreeTests
{
    [Theory]
    [InlineData("a: &x 3\nb: 1\n", 1, 4, "anchor &x")]
    [InlineData("b: 1\na: *x\n", 2, 4, "alias *x")]
    [InlineData("a: &x {b: *x}\n", 1, 11, "alias *x")]
    [InlineData("b: 1\n<<: {c: 1}\n", 2, 1, "merge key <<")]
    [InlineData("a: !!binary aGk=\n", 1, 4, "tag tag:yaml.org,2002:binary")]
    [InlineData("a: !mine 3\n", 1, 4, "tag !mine")]
    [InlineData("a: ! x\n", 1, 4, "tag !")]
    [InlineData("a: !!seq {b: 1}\n", 1, 4, "tag tag:yaml.org,2002:seq")]
    [InlineData("a: 1\nb: 2\na: 3\n", 3, 1, "'a' stands twice, first at line 1, column 1")]
    [InlineData("? [a, b]\n: 3\n", 1, 3, "a key must be a single word, here it is a list")]
    [InlineData("a: 1\n---\nb: 2\n", 2, 1, "second document")]
    [InlineData("a: 'open\nb: 2\n", 1, 4, "not YAML")]
    [InlineData("a:\n\tb: 1\n", 1, 1, "not YAML")]
    [InlineData("a: [1, 2\nb: 3\n", 1, 6, "the bracket opened at line 1, column 4 is not closed")]
    [InlineData("a: {b: 1\n", 2, 1, "the bracket opened at line 1, column 4 is not closed")]
    [InlineData("a: b: c\n", 1, 5, "not YAML")]
    public void Text_ThatIsRefused_HasAPosition(string text, int line, int column, string part)
    {
        InputProblem problem = Assert.Throws<InputException>(() => YamlTree.Parse(text, "f.yaml")).Problems[0];
        Assert.Contains(part, problem.Message, StringComparison.Ordinal);
        Assert.Equal((line, column), (problem.Line, problem.Column));
    }

    [Fact]
    public void Nesting_DeeperThanTheLimit_IsRefusedAtOnce()
    {
        string deep = "a: " + new string('[', 20000) + new string(']', 20000);
        InputProblem problem = Assert.Throws<InputException>(() => YamlTree.Parse(deep, "f.yaml")).Problems[0];
        Assert.Contains("deeper than 32", problem.Message, StringComparison.Ordinal);
        Assert.Equal(1, problem.Line);
        Assert.NotNull(YamlTree.Parse("a: " + new string('[', 31) + new string(']', 31), "f.yaml"));
    }

    [Fact]
    public void Nodes_BeyondTheLimit_AreRefusedBeforeTheRestIsRead()
    {
        string many = "a: [" + string.Join(", ", Enumerable.Repeat("0", YamlTree.MostNodes)) + "]\nb: [";
        InputProblem problem = Assert.Throws<InputException>(() => YamlTree.Parse(many, "f.yaml")).Problems[0];
        Assert.Contains("more than 50000 values", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Nodes_KnowLineAndColumn()
    {
        var map = Assert.IsType<YamlMap>(YamlTree.Parse("# note\na:\n  - {b: 1, 'c': \"2\"}\n", "f.yaml"));
        YamlEntry a = Assert.Single(map.Entries);
        Assert.Equal((2, 1), (a.Line, a.Column));
        var inner = Assert.IsType<YamlMap>(Assert.Single(Assert.IsType<YamlList>(a.Value).Items));
        Assert.Equal((3, 5), (inner.Line, inner.Column));
        Assert.Equal(new YamlScalar("1", true, 3, 9), inner.Entries[0].Value);
        Assert.Equal(new YamlScalar("2", false, 3, 17), inner.Entries[1].Value);
    }

    [Theory]
    [InlineData("!!str 5", false, "5")]
    [InlineData("!!int 5", true, "5")]
    [InlineData("!!float '5'", true, "5")]
    public void CoreTags_SayWhetherAScalarIsText(string text, bool plain, string value)
    {
        var scalar = Assert.IsType<YamlScalar>(Assert.IsType<YamlMap>(YamlTree.Parse("a: " + text, "f.yaml")).Entries[0].Value);
        Assert.Equal((value, plain), (scalar.Text, scalar.Plain));
    }

    [Theory]
    [InlineData("")]
    [InlineData("# only a comment\n")]
    [InlineData("---\n")]
    [InlineData("~\n")]
    public void EmptyStudy_IsRefusedPlainly(string text) => Assert.Contains("is empty", StudyText.Problem(text).Message, StringComparison.Ordinal);

    [Theory]
    [InlineData("[1, 2]", "a list")]
    [InlineData("words", "a single value")]
    public void Study_ThatIsNoMap_IsRefused(string text, string part) => Assert.Contains(part, StudyText.Problem(text).Message, StringComparison.Ordinal);

    [Fact]
    public void RefusedNodes_AreReportedBesideTheOtherFaults()
    {
        string text = StudyText.Small.With("[100, 1500]", "*band").With("tangential", "up");
        IReadOnlyList<InputProblem> problems = StudyText.Problems(text);
        Assert.Equal(2, problems.Count);
        Assert.Contains("alias *band", problems[0].Message, StringComparison.Ordinal);
        Assert.Equal("responses.wave V.direction", problems[1].Key);
    }

    public static TheoryData<byte[], int, int, string> BadBytes() => new()
    {
        { [0xFF, 0xFE, (byte)'a', 0], 1, 1, "UTF-16" },
        { [0xFE, 0xFF, 0, (byte)'a'], 1, 1, "UTF-16" },
        { Encoding.BigEndianUnicode.GetBytes("a: 1"), 1, 1, "zero byte" },
        { [.. "a: 1\nb: "u8, 0xE9, (byte)'\n'], 2, 4, "not UTF-8" },
        { [.. "a: 1\nbc: "u8, 0, (byte)'\n'], 2, 5, "zero byte" },
        { [.. "a: 1\nbc: "u8, 7], 2, 5, "control character U+0007" },
    };

    [Theory]
    [MemberData(nameof(BadBytes))]
    public void Bytes_ThatAreNoPlainText_AreRefusedWithTheirPlace(byte[] bytes, int line, int column, string part)
    {
        InputProblem problem = Assert.Throws<InputException>(() => StudyFile.Decode(bytes, "f.yaml")).Problems[0];
        Assert.Contains(part, problem.Message, StringComparison.Ordinal);
        Assert.Equal((line, column), (problem.Line, problem.Column));
    }

    [Fact]
    public void ByteOrderMark_OfUtf8_IsLeftOut() => Assert.Equal("a: π", StudyFile.Decode([0xEF, 0xBB, 0xBF, .. "a: π"u8], "f.yaml"));

    [Fact]
    public void File_BeyondTheLimit_IsRefused() =>
        Assert.Contains("larger than 16 MB", Assert.Throws<InputException>(() => StudyFile.Decode(new byte[StudyFile.LargestFile + 1], "f.yaml")).Problems[0].Message, StringComparison.Ordinal);

    [Fact]
    public void Path_ThatIsMissingOrAFolder_IsRefusedPlainly()
    {
        InputProblem missing = Assert.Throws<InputException>(() => StudyReader.Read("nowhere/at/all.yaml", Purpose.Assess, [])).Problems[0];
        Assert.Equal("nowhere/at/all.yaml", missing.File);
        Assert.Contains("no such file", missing.Message, StringComparison.Ordinal);
        Assert.Contains("is a folder", Assert.Throws<InputException>(() => StudyReader.Read(StudyText.Folder, Purpose.Assess, [])).Problems[0].Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("\n")]
    [InlineData("\r\n")]
    public void LineEnds_OfEitherKind_GiveTheSamePositions(string end)
    {
        string text = StudyText.Small.With("tangential", "up").ReplaceLineEndings(end);
        InputProblem problem = StudyText.Problem(text);
        Assert.Equal((18, 16), (problem.Line, problem.Column));
    }
}
