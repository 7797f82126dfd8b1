using System.CommandLine;

namespace DeepSourceCheck.Cli;

/// <summary>An example of a command's use.</summary>
/// <param name="Line">The command line as typed.</param>
/// <param name="Says">What it does.</param>
internal sealed record Example(string Line, string Says);

/// <summary>A command that carries its own lesson: what it does, why, and how it is typed. <see cref="HelpPage"/> prints it.</summary>
internal sealed class TaughtCommand(string name, string summary) : Command(name, summary)
{
    /// <summary>Paragraphs on what the command does.</summary>
    public required IReadOnlyList<string> About { get; init; }

    /// <summary>At least one example.</summary>
    public required IReadOnlyList<Example> Examples { get; init; }
}
