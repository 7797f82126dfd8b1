using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Cli;

/// <summary>Turns what went wrong into an exit status and plain lines: no stack trace, no type names.</summary>
/// <param name="Status">Exit status.</param>
/// <param name="Lines">One line a problem.</param>
internal sealed record Failure(int Status, IReadOnlyList<string> Lines)
{
    // The low 16 bits of an IOException's HResult: errno on Unix, the Win32 code on Windows.
    private const int NoSpaceUnix = 28;
    private const int QuotaUnix = 122;
    private const int NoSpaceWindows = 112;

    /// <summary>Describes an exception.</summary>
    /// <param name="exception">What was thrown.</param>
    /// <param name="interrupted">Whether the run had been asked to end: whatever it threw then is the interruption's doing.</param>
    public static Failure Of(Exception exception, bool interrupted)
    {
        if (interrupted)
        {
            return new(ExitStatus.Interrupted, ["interrupted: nothing was written"]);
        }

        Exception cause = Innermost(exception);
        return cause switch
        {
            InputException input => new(ExitStatus.InputWrong, [.. input.Problems.Select(p => "error: " + OneLine(p.ToString()))]),
            OperationCanceledException => new(ExitStatus.Interrupted, ["interrupted: nothing was written"]),
            OutOfMemoryException => new(ExitStatus.Failed,
                ["error: ran out of memory. A wider spacing_mm or fewer regions need less; `deepsourcecheck check` predicts it, --memory refuses beforehand."]),
            UnauthorizedAccessException or FileNotFoundException or DirectoryNotFoundException or PathTooLongException =>
                new(ExitStatus.InputWrong, ["error: " + OneLine(cause.Message)]),
            IOException io => new(ExitStatus.Failed, ["error: " + OneLine(Resource(io))]),
            NotSolvedException => new(ExitStatus.Failed, ["error: " + OneLine(cause.Message)]),
            _ => new(ExitStatus.Failed, ["error: the computation failed: " + OneLine(cause.Message) + " (DEEPSOURCECHECK_TRACE=1 shows where)"]),
        };
    }

    /// <summary>The text on one line, control characters replaced, so that a hostile file name cannot steer the terminal.</summary>
    public static string OneLine(string text) =>
        string.Create(text.Length, text, static (span, source) =>
        {
            for (int i = 0; i < span.Length; i++)
            {
                span[i] = char.IsControl(source[i]) || source[i] is '\u2028' or '\u2029' or (>= '\u202a' and <= '\u202e') ? ' ' : source[i];
            }
        });

    private static string Resource(IOException io) => (io.HResult & 0xffff) switch
    {
        NoSpaceUnix or NoSpaceWindows => "the disk is full: " + io.Message,
        QuotaUnix => "the disk quota is used up: " + io.Message,
        _ => io.Message,
    };

    /// <summary>Parallel loops wrap what their workers throw: the gravest of those is the cause.</summary>
    private static Exception Innermost(Exception exception)
    {
        while (true)
        {
            switch (exception)
            {
                case AggregateException aggregate when aggregate.InnerExceptions.Count > 0:
                    exception = aggregate.Flatten().InnerExceptions.OrderBy(Rank).First();
                    break;
                case TypeInitializationException { InnerException: { } inner }:
                    exception = inner;
                    break;
                default:
                    return exception;
            }
        }
    }

    private static int Rank(Exception exception) => exception switch
    {
        OutOfMemoryException => 0,
        InputException => 1,
        OperationCanceledException => 3,
        _ => 2,
    };
}
