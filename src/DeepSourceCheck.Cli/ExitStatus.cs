namespace DeepSourceCheck.Cli;

/// <summary>What the program tells the shell.</summary>
internal static class ExitStatus
{
    /// <summary>Done.</summary>
    public const int Done = 0;

    /// <summary>The input or the command line is wrong; nothing was written.</summary>
    public const int InputWrong = 2;

    /// <summary>The computation failed or ran out of a resource.</summary>
    public const int Failed = 3;

    /// <summary>Interrupted; no partly written result is left.</summary>
    public const int Interrupted = 130;
}
