namespace DeepSourceCheck.Report;

/// <summary>The program's name as results write it, and as <see cref="ResultFolder"/> looks for it.</summary>
public static class ProgramName
{
    /// <summary>`DeepSourceCheck`.</summary>
    public const string Text = "DeepSourceCheck";
}
