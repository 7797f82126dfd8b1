using System.CommandLine;

using DeepSourceCheck.Cli.Output;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>`completions SHELL`: a script that lets the shell complete commands, options and values.</summary>
internal static class CompletionsCommand
{
    // The program completes by itself through the directive [suggest:POSITION]; the scripts hand it the line and keep what begins with the word at the cursor.
    private const string Bash = """
        _deepsourcecheck() {
          local IFS=$'\n' current="${COMP_WORDS[COMP_CWORD]}"
          COMPREPLY=($(compgen -W "$(deepsourcecheck "[suggest:${COMP_POINT}]" "${COMP_LINE}" 2>/dev/null)" -- "$current"))
        }
        complete -o default -F _deepsourcecheck deepsourcecheck
        """;

    private const string Zsh = """
        #compdef deepsourcecheck
        _deepsourcecheck() {
          local -a found
          found=("${(@f)$(deepsourcecheck "[suggest:${CURSOR}]" "${BUFFER}" 2>/dev/null)}")
          found=(${found:#})
          if (( ${#found} )); then compadd -- "${found[@]}"; else _files; fi
        }
        compdef _deepsourcecheck deepsourcecheck
        """;

    private const string Fish = """
        function __deepsourcecheck_complete
          set -l line (commandline -cp)
          deepsourcecheck "[suggest:"(string length -- $line)"]" "$line" 2>/dev/null
        end
        complete -c deepsourcecheck -a "(__deepsourcecheck_complete)"
        """;

    private static readonly string[] Shells = ["bash", "zsh", "fish"];

    public static Command Create(Surroundings surroundings)
    {
        var shell = new Argument<string>("SHELL")
        {
            Description = "bash, zsh or fish.",
            CustomParser = SharedOptions.Single("SHELL", "bash, zsh or fish", text => Shells.Contains(text) ? text : null),
        };
        shell.CompletionSources.Add(Shells);
        Option<bool> json = SharedOptions.Json();
        var command = new TaughtCommand("completions", "print a script by which the shell completes commands and options")
        {
            About = ["Prints the script; your shell's start-up file evaluates it. It needs `deepsourcecheck` on the PATH."],
            Examples =
            [
                new("eval \"$(deepsourcecheck completions bash)\"", "In ~/.bashrc."),
                new("eval \"$(deepsourcecheck completions zsh)\"", "In ~/.zshrc, after compinit."),
                new("deepsourcecheck completions fish | source", "In fish's config.fish."),
            ],
        };
        command.Add(shell);
        command.Add(json);
        command.SetAction(parsed =>
        {
            string name = parsed.GetRequiredValue(shell);
            string script = name switch { "bash" => Bash, "zsh" => Zsh, _ => Fish };
            if (parsed.GetValue(json))
            {
                JsonOutput.Object(surroundings.Out, writer =>
                {
                    writer.WriteString("shell", name);
                    writer.WriteString("script", script);
                });
            }
            else
            {
                surroundings.Out.WriteLine(script);
            }

            return ExitStatus.Done;
        });
        return command;
    }
}
