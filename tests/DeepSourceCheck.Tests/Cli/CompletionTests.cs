using System.Diagnostics;

using DeepSourceCheck.Cli;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>The bash script completes through the real program; the others are at least well-formed where their shell is there.</summary>
public sealed class CompletionTests : IDisposable
{
    private readonly string _folder = Directory.CreateTempSubdirectory("dsc-complete-").FullName;

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Theory]
    [InlineData("deepsourcecheck as", "assess")]
    [InlineData("deepsourcecheck assess --w", "--without")]
    [InlineData("deepsourcecheck assess --without f", "figures")]
    [InlineData("deepsourcecheck regions --m", "--mask")]
    [InlineData("deepsourcecheck completions z", "zsh")]
    [InlineData("deepsourcecheck leadfield study.yaml --o", "--out")]
    public void BashScript_Completes(string line, string expected)
    {
        // A wrapper by the program's name on the PATH stands for the installed tool.
        string wrapper = Path.Combine(_folder, CommandLine.ProgramName);
        File.WriteAllText(wrapper, $"#!/bin/sh\nexec dotnet '{RealProcess.Assembly}' \"$@\"\n");
        RealProcess.Tool("chmod", "+x", wrapper);
        string script = Path.Combine(_folder, "try.sh");
        File.WriteAllText(script, $"""
            PATH="{_folder}:$PATH"
            eval "$(deepsourcecheck completions bash)"
            COMP_LINE='{line}'
            COMP_POINT=${"{#COMP_LINE}"}
            COMP_WORDS=($COMP_LINE)
            COMP_CWORD=$((${"{#COMP_WORDS[@]}"} - 1))
            _deepsourcecheck
            printf '%s\n' "${"{COMPREPLY[@]}"}"
            """);
        var start = new ProcessStartInfo("bash", script) { RedirectStandardOutput = true, RedirectStandardError = true };
        using Process bash = Process.Start(start)!;
        string output = bash.StandardOutput.ReadToEnd();
        bash.WaitForExit();
        Assert.Equal(expected, output.Trim());
    }

    [Theory]
    [InlineData("bash", "complete -o default -F _deepsourcecheck deepsourcecheck")]
    [InlineData("zsh", "compdef _deepsourcecheck deepsourcecheck")]
    [InlineData("fish", "complete -c deepsourcecheck")]
    public void Script_RegistersTheProgram(string shell, string registers)
    {
        Outcome outcome = InProcess.Run("completions", shell);
        Assert.Equal(ExitStatus.Done, outcome.Status);
        Assert.Contains(registers, outcome.Out, StringComparison.Ordinal);
    }
}
