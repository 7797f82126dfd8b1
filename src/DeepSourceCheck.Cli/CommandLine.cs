using System.CommandLine;
using System.CommandLine.Completions;
using System.CommandLine.Help;
using System.CommandLine.Invocation;
using System.Reflection;

using DeepSourceCheck.Cli.Commands;

namespace DeepSourceCheck.Cli;

/// <summary>From arguments to an exit status: the commands, usage errors, and what becomes of whatever a command throws.</summary>
internal static class CommandLine
{
    /// <summary>The name that people type.</summary>
    public const string ProgramName = "deepsourcecheck";

    /// <summary>What the help always ends with.</summary>
    public const string Caution =
        "A planning aid, no medical device: it does not diagnose, and a predicted non-detection is no evidence that a response or a lesion is absent. Equipment limits, stimulus levels and decisions about patients follow local rules and licensed practice.";

    /// <summary>What the program is for.</summary>
    public static readonly IReadOnlyList<string> About =
    [
        "For anyone who plans an EEG or MEG study of a source deep in the head. From a study file (YAML), physics and stated assumptions it says whether the response can be detected, with which modality, in how many trials and minutes, and how that was computed.",
        "Start with `assess`, which needs no file at all; then `new`, edit, `check`, `assess`. Each command has its own --help.",
    ];

    /// <summary>First steps.</summary>
    public static readonly IReadOnlyList<Example> Examples =
    [
        new("deepsourcecheck assess", "The embedded default study: can a click response of the brainstem be recorded?"),
        new("deepsourcecheck new my-study", "A commented study file to start from."),
        new("deepsourcecheck why", "How each number of the default study's answer comes about."),
    ];

    /// <summary>Version of the program.</summary>
    public static string Version { get; } =
        typeof(CommandLine).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion ?? "0";

    /// <summary>Runs one command line.</summary>
    /// <returns>The exit status.</returns>
    public static int Run(IReadOnlyList<string> arguments, Surroundings surroundings)
    {
        try
        {
            int status = Dispatch(arguments, surroundings);
            surroundings.Out.Flush();
            return status;
        }
        catch (Exception e)
        {
            return Explain(e, surroundings);
        }
    }

    /// <summary>The command tree.</summary>
    public static RootCommand Build(Surroundings surroundings)
    {
        var root = new RootCommand("can a deep source be detected with EEG or MEG, and in how many trials?")
        {
            NewCommand.Create(surroundings),
            CheckCommand.Create(surroundings),
            AssessCommand.Create(surroundings),
            LeadfieldCommand.Create(surroundings),
            RegionsCommand.Create(surroundings),
            CacheCommand.Create(surroundings),
            WhyCommand.Create(surroundings),
            CompletionsCommand.Create(surroundings),
        };
        for (int i = 0; i < root.Options.Count; i++)
        {
            root.Options[i] = root.Options[i] switch
            {
                HelpOption => new HelpOption("--help", "-h") { Action = new HelpPage() },
                VersionOption => new VersionOption { Action = new PrintVersion(), Recursive = true },
                Option other => other,
            };
        }

        return root;
    }

    private static int Dispatch(IReadOnlyList<string> arguments, Surroundings surroundings)
    {
        RootCommand root = Build(surroundings);
        ParseResult parsed = root.Parse(arguments, new ParserConfiguration { ResponseFileTokenReplacer = null });
        bool runsCommand = parsed.Action is not (HelpPage or PrintVersion) && parsed.GetResult(root.Directives.OfType<SuggestDirective>().First()) is null;
        if (runsCommand && UsageErrors.Any(parsed))
        {
            return UsageErrors.Write(parsed, surroundings.Error);
        }

        return parsed.Invoke(new InvocationConfiguration
        {
            EnableDefaultExceptionHandler = false,
            ProcessTerminationTimeout = null,
            Output = surroundings.Out,
            Error = surroundings.Error,
        });
    }

    private static int Explain(Exception e, Surroundings surroundings)
    {
        Failure failure = Failure.Of(e, surroundings.Interruption.Token.IsCancellationRequested);
        try
        {
            foreach (string line in failure.Lines)
            {
                surroundings.Error.WriteLine(line);
            }

            if (surroundings.Trace)
            {
                surroundings.Error.WriteLine(e.ToString());
            }

            surroundings.Error.Flush();
        }
        catch (IOException)
        {
            // Standard error is gone too: the exit status is all that is left to say.
        }

        return failure.Status;
    }

    private sealed class PrintVersion : SynchronousCommandLineAction
    {
        public override bool ClearsParseErrors => true;

        public override int Invoke(ParseResult parseResult)
        {
            parseResult.InvocationConfiguration.Output.WriteLine("DeepSourceCheck " + Version);
            return ExitStatus.Done;
        }
    }
}
