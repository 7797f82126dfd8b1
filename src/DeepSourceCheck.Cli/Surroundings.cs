namespace DeepSourceCheck.Cli;

/// <summary>Everything outside a command that it may touch: writers, what the terminal can show, the interruption. Tests hand in their own.</summary>
internal sealed record Surroundings
{
    /// <summary>Standard output: the result and nothing else.</summary>
    public required TextWriter Out { get; init; }

    /// <summary>Standard error: errors, warnings, progress.</summary>
    public required TextWriter Error { get; init; }

    /// <summary>Whether a person reads standard output directly.</summary>
    public bool OutIsTerminal { get; init; }

    /// <summary>Whether a person reads standard error directly: only then is progress shown.</summary>
    public bool ErrorIsTerminal { get; init; }

    /// <summary>Whether the terminal shows UTF-8.</summary>
    public bool Unicode { get; init; }

    /// <summary>Whether colour is wanted.</summary>
    public bool Color { get; init; }

    /// <summary>Width of the terminal [characters].</summary>
    public int Columns { get; init; } = 80;

    /// <summary>Whether a failure prints where it happened (DEEPSOURCECHECK_TRACE=1).</summary>
    public bool Trace { get; init; }

    /// <summary>Ctrl-C and its kin.</summary>
    public Interruption Interruption { get; init; } = new();

    /// <summary>The steps of the computation.</summary>
    public PipelineSteps Steps { get; init; } = PipelineSteps.Real;

    /// <summary>Writes warnings to standard error, one line each.</summary>
    public void Warn(IEnumerable<string> warnings)
    {
        foreach (string warning in warnings)
        {
            Error.WriteLine("warning: " + Failure.OneLine(warning));
        }
    }
}
