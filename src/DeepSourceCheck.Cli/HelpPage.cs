using System.CommandLine;
using System.CommandLine.Help;
using System.CommandLine.Invocation;
using System.Text;

namespace DeepSourceCheck.Cli;

/// <summary>Prints the help of a command: what it does, how it is typed, every argument and option, an example each.</summary>
internal sealed class HelpPage : SynchronousCommandLineAction
{
    private const int Width = 79;

    // Column at which descriptions start; longer names push theirs to the next line.
    private const int Indent = 22;

    /// <inheritdoc/>
    public override bool ClearsParseErrors => true;

    /// <inheritdoc/>
    public override int Invoke(ParseResult parseResult)
    {
        parseResult.InvocationConfiguration.Output.Write(Text(parseResult.CommandResult.Command));
        return ExitStatus.Done;
    }

    /// <summary>The page of a command, at most 79 columns wide.</summary>
    public static string Text(Command command)
    {
        var page = new StringBuilder();
        bool isRoot = command is RootCommand;
        string name = isRoot ? CommandLine.ProgramName : $"{CommandLine.ProgramName} {command.Name}";
        Paragraph(page, $"{name}: {command.Description}", "");
        page.Append('\n');
        Paragraph(page, "usage: " + Usage(command, name), "  ");
        foreach (string about in command is TaughtCommand taught ? taught.About : CommandLine.About)
        {
            page.Append('\n');
            Paragraph(page, about, "");
        }

        Section(page, "Commands", command.Subcommands.Where(c => !c.Hidden).Select(c => (c.Name, c.Description ?? "")));
        Section(page, "Arguments", command.Arguments.Where(a => !a.Hidden).Select(a => (a.Name, a.Description ?? "")));
        Section(page, "Options", command.Options.Where(o => !o.Hidden).Concat(Inherited(command)).Select(o => (Spelling(o), Description(o))));
        page.Append("\nExamples\n");
        foreach (Example example in command is TaughtCommand t ? t.Examples : CommandLine.Examples)
        {
            page.Append("  ").Append(example.Line).Append('\n');
            Paragraph(page, example.Says, "      ", "      ");
        }

        if (isRoot)
        {
            Section(page, "Exit status",
            [
                ("0", "Done."),
                ("2", "The input or the command line is wrong. Standard error names file, line, key, value and what is allowed; nothing is written."),
                ("3", "The computation failed or ran out of a resource."),
                ("130", "Interrupted (Ctrl-C). A partly written result folder is never left."),
            ]);
        }

        page.Append('\n');
        Paragraph(page, isRoot ? CommandLine.Caution : $"Exit status: 0 done, 2 input wrong, 3 failed, 130 interrupted; see {CommandLine.ProgramName} --help.", "");
        return page.ToString();
    }

    private static IEnumerable<Option> Inherited(Command command) =>
        command.Parents.OfType<RootCommand>().SelectMany(root => root.Options).Where(o => o is HelpOption);

    private static string Usage(Command command, string name)
    {
        if (command.Subcommands.Count > 0)
        {
            return name + " COMMAND [options]";
        }

        IEnumerable<string> arguments = command.Arguments.Select(a => a.Arity.MinimumNumberOfValues > 0 ? a.Name : $"[{a.Name}]");
        IEnumerable<string> options = command.Options.Where(o => !o.Hidden).Select(o => o.Required ? Spelling(o) : $"[{Spelling(o)}]");
        return string.Join(' ', new[] { name }.Concat(arguments).Concat(options));
    }

    private static string Spelling(Option option) =>
        option switch
        {
            HelpOption => "-h, --help",
            _ when option.ValueType == typeof(bool) || option is VersionOption => option.Name,
            _ => $"{option.Name} {option.HelpName ?? "VALUE"}",
        };

    private static string Description(Option option) => option switch
    {
        HelpOption => "Print this page.",
        VersionOption => "Print the version.",
        _ => (option.Description ?? "") + (option.Required ? " (required)" : ""),
    };

    private static void Section(StringBuilder page, string title, IEnumerable<(string Name, string Text)> rows)
    {
        bool first = true;
        foreach ((string name, string text) in rows)
        {
            if (first)
            {
                page.Append('\n').Append(title).Append('\n');
                first = false;
            }

            string lead = "  " + name;
            string indent = new(' ', Indent);
            if (lead.Length > Indent - 2)
            {
                page.Append(lead).Append('\n');
                Paragraph(page, text, indent, indent);
            }
            else
            {
                Paragraph(page, text, indent, lead.PadRight(Indent));
            }
        }
    }

    /// <summary>Appends text, broken at spaces; the first line starts with <paramref name="lead"/>, the others with <paramref name="indent"/>.</summary>
    private static void Paragraph(StringBuilder page, string text, string indent, string lead = "")
    {
        var line = new StringBuilder(lead);
        bool empty = true;
        foreach (string word in text.Split(' ', StringSplitOptions.RemoveEmptyEntries))
        {
            if (!empty && line.Length + 1 + word.Length > Width)
            {
                page.Append(line.ToString().TrimEnd()).Append('\n');
                line.Clear().Append(indent);
                empty = true;
            }

            line.Append(empty ? "" : " ").Append(word);
            empty = false;
        }

        page.Append(line.ToString().TrimEnd()).Append('\n');
    }
}
