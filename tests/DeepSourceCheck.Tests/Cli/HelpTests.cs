using System.CommandLine;

using DeepSourceCheck.Cli;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>The help teaches: purpose, every argument and option, an example each, exit statuses.</summary>
public class HelpTests
{
    private const int Columns = 79;

    private static readonly string[] Names = ["new", "check", "assess", "leadfield", "regions", "cache", "why", "completions"];

    public static TheoryData<string> Commands => new(Names);

    [Fact]
    public void RootHelp_IsTheRecordedText() => GoldenText.Matches("help/root.txt", Help());

    [Theory]
    [MemberData(nameof(Commands))]
    public void CommandHelp_IsTheRecordedText(string command) => GoldenText.Matches($"help/{command}.txt", Help(command));

    [Fact]
    public void Root_HasTheContractsCommandsAndNoOthers()
    {
        // Source: the contract's table of commands; completions, and the cache of voxel heads with its way to be cleared, beside it.
        RootCommand root = CommandLine.Build(new Surroundings { Out = TextWriter.Null, Error = TextWriter.Null });
        Assert.Equal(Names, root.Subcommands.Select(c => c.Name));
    }

    [Theory]
    [InlineData("new", "FOLDER --head --voxel-mm --json")]
    [InlineData("check", "STUDY --json --memory")]
    [InlineData("assess", "STUDY --out --without --json --memory --cache")]
    [InlineData("leadfield", "STUDY --out --json --memory --cache")]
    [InlineData("regions", "--mask --json")]
    [InlineData("why", "STUDY REGION --json --memory --cache")]
    [InlineData("cache", "--cache --clear --json")]
    [InlineData("completions", "SHELL --json")]
    public void CommandHelp_NamesEveryArgumentAndOption(string command, string names)
    {
        RootCommand root = CommandLine.Build(new Surroundings { Out = TextWriter.Null, Error = TextWriter.Null });
        Command built = root.Subcommands.Single(c => c.Name == command);
        Assert.Equal(names.Split(' '), built.Arguments.Select(a => a.Name).Concat(built.Options.Select(o => o.Name)));
        string help = Help(command);
        Assert.All(names.Split(' '), name => Assert.Contains("\n  " + name, help, StringComparison.Ordinal));
        Assert.Contains($"\n  deepsourcecheck {command}", help[help.IndexOf("Examples", StringComparison.Ordinal)..] + help, StringComparison.Ordinal);
    }

    [Theory]
    [MemberData(nameof(Commands))]
    public void CommandHelp_FitsTheNarrowestTerminal(string command) =>
        Assert.All(Help(command).Split('\n'), line => Assert.True(line.Length <= Columns, $"{line.Length} columns: {line}"));

    [Fact]
    public void RootHelp_NamesExitStatusesAndTheCaution()
    {
        string help = Help();
        Assert.All((string[])["  0  ", "  2  ", "  3  ", "  130  "], status => Assert.Contains(status, help, StringComparison.Ordinal));
        Assert.Contains("no medical device", help, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("-h")]
    [InlineData("--help")]
    public void Help_WinsOverMistakesBesideIt(string spelling)
    {
        Outcome outcome = InProcess.Run("leadfield", spelling);
        Assert.Equal(ExitStatus.Done, outcome.Status);
        Assert.Equal(Help("leadfield"), outcome.Out);
        Assert.Empty(outcome.Error);
    }

    [Theory]
    [InlineData("--version")]
    [InlineData("assess", "--version")]
    public void Version_IsTheAssemblys(params string[] arguments)
    {
        Outcome outcome = InProcess.Run(arguments);
        Assert.Equal(ExitStatus.Done, outcome.Status);
        Assert.Matches(@"^DeepSourceCheck \d+\.\d+\.\d+\n$", outcome.Out);
    }

    private static string Help(params string[] command)
    {
        Outcome outcome = InProcess.Run([.. command, "--help"]);
        Assert.Equal(ExitStatus.Done, outcome.Status);
        Assert.Empty(outcome.Error);
        return outcome.Out;
    }
}
