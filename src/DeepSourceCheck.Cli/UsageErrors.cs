using System.CommandLine;
using System.CommandLine.Parsing;

namespace DeepSourceCheck.Cli;

/// <summary>Tells what is wrong with a command line: one line a mistake, the nearest known word, where to read on.</summary>
internal static class UsageErrors
{
    // More changes than this and the words are not alike.
    private const int LargestDistance = 3;

    /// <summary>Whether the command line is wrong.</summary>
    public static bool Any(ParseResult parsed) => parsed.Errors.Count > 0 || UnknownOptions(parsed).Any();

    /// <summary>Writes the mistakes to standard error.</summary>
    /// <returns>Exit status 2.</returns>
    public static int Write(ParseResult parsed, TextWriter error)
    {
        Command command = parsed.CommandResult.Command;
        string[] options = [.. UnknownOptions(parsed)];

        // Words that follow an unknown option are most often its value, words that follow an unknown command are its own: only the first mistake is named then.
        string[] unknown = command is RootCommand && parsed.UnmatchedTokens is [{ } first, ..] && first[0] != '-' ? [first] : options.Length > 0 ? options : [.. parsed.UnmatchedTokens];
        foreach (string word in unknown)
        {
            error.WriteLine("error: " + Failure.OneLine(Unknown(word, command)));
        }

        // The parser repeats unmatched words, and asks for a command where an unknown one stands: said once, above.
        foreach (ParseError mistake in parsed.Errors.Where(m => !parsed.UnmatchedTokens.Any(w => m.Message.Contains(w, StringComparison.Ordinal))))
        {
            if (command is not RootCommand && options.Length == 0)
            {
                error.WriteLine("error: " + Failure.OneLine(mistake.Message));
            }
        }

        if (command is RootCommand && unknown.Length == 0)
        {
            error.WriteLine($"error: name a command: {string.Join(", ", command.Subcommands.Select(c => c.Name))}.");
        }

        string name = command is RootCommand ? CommandLine.ProgramName : $"{CommandLine.ProgramName} {command.Name}";
        error.WriteLine($"Try `{name} --help`.");
        return ExitStatus.InputWrong;
    }

    /// <summary>Words that begin with a dash and are no option of the command: the parser takes them for arguments. After `--` a dash means nothing.</summary>
    private static IEnumerable<string> UnknownOptions(ParseResult parsed) => parsed.Tokens
        .TakeWhile(token => token.Type != TokenType.DoubleDash)
        .Where(token => token.Type == TokenType.Argument && token.Value.Length > 1 && token.Value[0] == '-')
        .Select(token => token.Value);

    private static string Unknown(string word, Command command)
    {
        bool isOption = word.StartsWith('-');
        string[] known = [.. isOption ? command.Options.Select(o => o.Name) : command.Subcommands.Select(c => c.Name)];
        string kind = isOption ? "option" : command is RootCommand ? "command" : "argument";
        string? nearest = known.Select(k => (Word: k, Distance: Distance(k, word))).Where(k => k.Distance <= LargestDistance).OrderBy(k => k.Distance).Select(k => k.Word).FirstOrDefault();
        return nearest is not null
            ? $"unknown {kind} '{word}'; the nearest is '{nearest}'."
            : known.Length > 0 ? $"unknown {kind} '{word}'; there are {string.Join(", ", known)}." : $"one {kind} too many: '{word}'.";
    }

    /// <summary>Levenshtein distance: insertions, deletions and exchanges of one character.</summary>
    private static int Distance(string a, string b)
    {
        int[] previous = [.. Enumerable.Range(0, b.Length + 1)];
        for (int i = 1; i <= a.Length; i++)
        {
            int[] row = new int[b.Length + 1];
            row[0] = i;
            for (int j = 1; j <= b.Length; j++)
            {
                int exchange = previous[j - 1] + (a[i - 1] == b[j - 1] ? 0 : 1);
                row[j] = Math.Min(exchange, 1 + Math.Min(previous[j], row[j - 1]));
            }

            previous = row;
        }

        return previous[^1];
    }
}
