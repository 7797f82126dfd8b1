using DeepSourceCheck.Cli;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>What a command line printed and how it ended.</summary>
internal sealed record Outcome(int Status, string Out, string Error)
{
    /// <summary>Lines of standard error.</summary>
    public string[] ErrorLines => Error.Split('\n', StringSplitOptions.RemoveEmptyEntries);
}

/// <summary>Runs command lines inside the test process.</summary>
internal static class InProcess
{
    public static Outcome Run(params string[] arguments) => Run(s => s, arguments);

    /// <summary>Runs in changed surroundings.</summary>
    public static Outcome Run(Func<Surroundings, Surroundings> change, params string[] arguments)
    {
        using var standardOutput = new StringWriter { NewLine = "\n" };
        using var standardError = new StringWriter { NewLine = "\n" };
        int status = CommandLine.Run(arguments, change(new Surroundings { Out = standardOutput, Error = standardError }));
        return new(status, standardOutput.ToString(), standardError.ToString());
    }
}
