using DeepSourceCheck.Cli;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>A wrong command line ends with status 2, says what is wrong on standard error, and prints nothing on standard output.</summary>
public class UsageErrorTests
{
    [Theory]
    [InlineData("name a command: new, check, assess, leadfield, regions, cache, why, completions")]
    [InlineData("unknown command 'asses'; the nearest is 'assess'", "asses")]
    [InlineData("unknown command 'frobnicate'", "frobnicate", "--x")]
    [InlineData("unknown option '--outt'; the nearest is '--out'", "assess", "--outt", "x")]
    [InlineData("unknown option '-v'", "check", "-v")]
    [InlineData("one argument too many: 'b'", "assess", "a", "b")]
    [InlineData("'--out' is required", "leadfield", "study.yaml")]
    [InlineData("'FOLDER' missing", "new")]
    [InlineData("--memory takes a size such as 4GB, 800MB or 2GiB, not '4'", "assess", "--memory", "4")]
    [InlineData("--memory takes a size such as 4GB, 800MB or 2GiB, not '1,5GB'", "check", "--memory=1,5GB")]
    [InlineData("--without takes one or more of dipoles, figures, report, maps, separated by commas, not 'plots'", "assess", "--without", "plots")]
    [InlineData("--without takes one or more of dipoles, figures, report, maps, separated by commas, not 'dipoles,'", "assess", "--without", "dipoles,")]
    [InlineData("--out takes the name of a folder, not ''", "assess", "--out", "")]
    [InlineData("'--out'", "assess", "--out")]
    [InlineData("--voxel-mm: only the phantom has voxels", "new", "x", "--voxel-mm", "2")]
    [InlineData("--voxel-mm takes a number from 1 to 3, not '0.5'", "new", "x", "--head", "phantom", "--voxel-mm", "0.5")]
    [InlineData("--voxel-mm takes a number from 1 to 3, not '2,5'", "new", "x", "--head", "phantom", "--voxel-mm", "2,5")]
    [InlineData("--head takes phantom or neonate-phantom, not 'cube'", "new", "x", "--head", "cube")]
    [InlineData("SHELL takes bash, zsh or fish, not 'tcsh'", "completions", "tcsh")]
    [InlineData("unknown command '@arguments.txt'", "@arguments.txt")]
    [InlineData("nowhere.yaml: there is no such file", "assess", "nowhere.yaml")]
    [InlineData("nowhere.yaml: there is no such file", "check", "nowhere.yaml")]
    [InlineData("@study: there is no such file", "check", "@study")]
    [InlineData("nowhere/study.yaml: there is no such file", "why", "nowhere/study.yaml")]
    public void WrongCommandLine_EndsWithStatus2AndSaysWhy(string says, params string[] arguments)
    {
        Outcome outcome = InProcess.Run(arguments);
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Empty(outcome.Out);
        Assert.StartsWith("error: ", outcome.Error, StringComparison.Ordinal);
        Assert.Contains(says, outcome.Error, StringComparison.Ordinal);
    }

    [Fact]
    public void UnknownOption_NamesTheHelpOfItsCommand() =>
        Assert.Equal("Try `deepsourcecheck assess --help`.", InProcess.Run("assess", "--frob").ErrorLines[^1]);

    [Fact]
    public void StudyThatIsAFolder_NamesTheFileInside()
    {
        string folder = Directory.CreateTempSubdirectory("dsc-").FullName;
        try
        {
            string file = Path.Combine(folder, "study.yaml");
            Assert.Contains("writes an example study into it", InProcess.Run("check", folder).Error, StringComparison.Ordinal);
            File.WriteAllText(file, "");
            Assert.Contains("name the file: " + file, InProcess.Run("check", folder).Error, StringComparison.Ordinal);
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }
}
