using System.Text;

namespace DeepSourceCheck.Cli;

/// <summary>What the process's own terminal and environment allow.</summary>
internal static class Terminal
{
    private static readonly string[] LocaleVariables = ["LC_ALL", "LC_CTYPE", "LANG"];

    /// <summary>The surroundings of the process.</summary>
    public static Surroundings Surroundings(TextWriter standardOutput, TextWriter standardError, Interruption interruption)
    {
        bool terminal = !Console.IsOutputRedirected;
        bool dumb = Environment.GetEnvironmentVariable("TERM") is "dumb";
        if (OperatingSystem.IsWindows() && terminal)
        {
            Console.OutputEncoding = Encoding.UTF8;
        }

        return new()
        {
            Out = standardOutput,
            Error = standardError,
            Interruption = interruption,
            OutIsTerminal = terminal,
            ErrorIsTerminal = !Console.IsErrorRedirected && !dumb,
            Unicode = terminal && SaysUtf8(),
            Color = terminal && !dumb && string.IsNullOrEmpty(Environment.GetEnvironmentVariable("NO_COLOR")),
            Columns = Columns(),
            Trace = Environment.GetEnvironmentVariable("DEEPSOURCECHECK_TRACE") is "1",
        };
    }

    /// <summary>Whether the locale asks for UTF-8: the first of LC_ALL, LC_CTYPE and LANG that is set decides.</summary>
    private static bool SaysUtf8()
    {
        if (OperatingSystem.IsWindows())
        {
            return true;
        }

        string locale = LocaleVariables.Select(Environment.GetEnvironmentVariable).FirstOrDefault(v => !string.IsNullOrEmpty(v)) ?? "";
        return locale.Contains("UTF-8", StringComparison.OrdinalIgnoreCase) || locale.Contains("utf8", StringComparison.OrdinalIgnoreCase);
    }

    private static int Columns()
    {
        try
        {
            return Console.IsErrorRedirected || Console.WindowWidth < 20 ? 80 : Console.WindowWidth;
        }
        catch (Exception e) when (e is IOException or PlatformNotSupportedException)
        {
            return 80;
        }
    }
}
