using System.Diagnostics;
using System.Text.Json;
using System.Text.RegularExpressions;

using DeepSourceCheck.Cli;

namespace DeepSourceCheck.Examples;

/// <summary>README's commands do what README says, on the real executable, in an empty folder.</summary>
public sealed partial class ReadmeTests : IDisposable
{
    private static readonly string Readme = File.ReadAllText(Path.Combine(SourceTree.Root, "README.md")).Replace("\r", "", StringComparison.Ordinal);
    private readonly string _folder = Directory.CreateTempSubdirectory("dsc-readme-").FullName;

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Fact]
    public void FirstCommand_RunsTheMainJobAndItsSampleIsWhatItPrints()
    {
        string command = Commands().First();
        Match run = RunCommand().Match(command);
        Assert.True(run.Success, command);
        Assert.True(Directory.Exists(Path.Combine(SourceTree.Root, run.Groups[1].Value)), command);
        (int status, string printed, string error) = Program(run.Groups[2].Value);
        Assert.True(status == ExitStatus.Done, error);
        string result = Path.Combine(_folder, "deepsourcecheck-results");
        Assert.Equal([result], Directory.EnumerateFileSystemEntries(_folder));

        string[] promised = [.. Regex.Matches(Readme, @"^\| `([\w./]+)` \|", RegexOptions.Multiline).Select(m => m.Groups[1].Value).Where(n => n.Contains('.', StringComparison.Ordinal) || n.EndsWith('/'))];
        Assert.True(promised.Length >= 5, "README lists the files of the result folder");
        Assert.All(promised, name => Assert.True(Path.Exists(Path.Combine(result, name)), name));
        using JsonDocument document = JsonDocument.Parse(File.ReadAllText(Path.Combine(result, "assessment.json")));
        Assert.NotEqual(0, document.RootElement.GetProperty("responses").GetArrayLength());

        string sample = Sample().Match(Readme).Groups[1].Value;
        Assert.Equal(printed.TrimEnd(), sample.TrimEnd());
    }

    [Fact]
    public void SecondCommand_IsTheOneThatRunsTheTests()
    {
        // Run here it would run itself: .ci/run takes it from README, and this test is part of what it then runs.
        string command = Commands().ElementAt(1);
        Assert.StartsWith("dotnet test", command, StringComparison.Ordinal);
        Assert.Contains("grep -m1 '^dotnet test'", File.ReadAllText(Path.Combine(SourceTree.Root, ".ci", "run")), StringComparison.Ordinal);
    }

    [Fact]
    public void NewCommand_WritesTheStudyThatReadmeNames()
    {
        string[] commands = [.. Commands().Where(c => c.Contains("-- new ", StringComparison.Ordinal))];
        string named = Regex.Match(Readme, @"writes `([^`]+\.yaml)`").Groups[1].Value;
        Assert.StartsWith(RunCommand().Match(commands[0]).Groups[2].Value["new ".Length..], named, StringComparison.Ordinal);

        // The studies that the commands after them check or assess: the first example and that on the invented head.
        string[] used = [.. Commands().SelectMany(c => Regex.Matches(c, @"\S+\.yaml").Select(m => m.Value)).Distinct()];
        Assert.Equal(commands.Length, used.Length);
        foreach ((string command, string study) in commands.Zip(used))
        {
            (int status, _, string error) = Program(RunCommand().Match(command).Groups[2].Value);
            Assert.True(status == ExitStatus.Done, error);
            Assert.True(File.Exists(Path.Combine(_folder, study)), study);
            Assert.Equal(ExitStatus.Done, Program("check " + study).Status);
        }
    }

    [Fact]
    public void EveryCommand_IsOneThatThisClassOrTheReleaseRecipeRuns()
    {
        // Packing and installing reach outside a test's folder; the release recipe of DEVELOPERS.md runs them, and has to hold the same lines.
        string developers = File.ReadAllText(Path.Combine(SourceTree.Root, "DEVELOPERS.md"));
        Assert.All(Commands(), command => Assert.True(
            RunCommand().IsMatch(command) || command.StartsWith("dotnet test", StringComparison.Ordinal) || developers.Contains(command, StringComparison.Ordinal), command));
    }

    [Fact]
    public void CommandTable_ListsEveryCommandAndNoOther()
    {
        string[] listed = [.. Regex.Matches(Readme, @"^\| `(\w+)(?: [^`]*)?` \|", RegexOptions.Multiline).Select(m => m.Groups[1].Value)];
        string[] real = [.. CommandLine.Build(new Surroundings { Out = TextWriter.Null, Error = TextWriter.Null }).Subcommands.Select(c => c.Name)];
        Assert.Equal(real, listed);
    }

    [Fact]
    public void RealExecutable_KeepsToTheExitStatuses()
    {
        Assert.Equal(ExitStatus.Done, Program("--version").Status);
        Assert.Equal(ExitStatus.InputWrong, Program("assess nowhere.yaml").Status);
        Assert.Equal(ExitStatus.InputWrong, Program("frobnicate").Status);
        Assert.Empty(Directory.EnumerateFileSystemEntries(_folder));
    }

    /// <summary>The lines of README's shell blocks, in order.</summary>
    private static IEnumerable<string> Commands() => ShellBlock().Matches(Readme).SelectMany(m => m.Groups[1].Value.Split('\n', StringSplitOptions.RemoveEmptyEntries));

    private (int Status, string Out, string Error) Program(string arguments)
    {
        var start = new ProcessStartInfo("dotnet") { WorkingDirectory = _folder, RedirectStandardOutput = true, RedirectStandardError = true };
        foreach (string argument in arguments.Split(' ', StringSplitOptions.RemoveEmptyEntries).Prepend(Path.Combine(AppContext.BaseDirectory, "deepsourcecheck.dll")))
        {
            start.ArgumentList.Add(argument);
        }

        using Process process = Process.Start(start)!;
        Task<string> error = process.StandardError.ReadToEndAsync();
        string output = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        return (process.ExitCode, output, error.Result);
    }

    [GeneratedRegex(@"^```sh\n(.*?)^```$", RegexOptions.Multiline | RegexOptions.Singleline)]
    private static partial Regex ShellBlock();

    [GeneratedRegex(@"^dotnet run --project (\S+) -c Release -- (.+)$")]
    private static partial Regex RunCommand();

    [GeneratedRegex(@"<!-- default-answer -->\n```text\n(.*?)\n```\n<!-- /default-answer -->", RegexOptions.Singleline)]
    private static partial Regex Sample();
}
