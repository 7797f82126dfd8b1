namespace DeepSourceCheck.Core.Studies;

/// <summary>One thing that is wrong with the input. Its text names file, place, key, value, what is allowed and what to do.</summary>
/// <param name="File">File as the user named it, or null where there is none.</param>
/// <param name="Line">Line, from 1; 0 where unknown.</param>
/// <param name="Column">Column, from 1; 0 where unknown.</param>
/// <param name="Key">Full key in the study (`head.spheres.layers[1].radius_mm`) or column of a table, or null.</param>
/// <param name="Message">What was found, what is allowed, what to do; one paragraph, no line breaks.</param>
public sealed record InputProblem(string? File, int Line, int Column, string? Key, string Message)
{
    /// <summary>`file:line:column: key: message`, leaving out what is unknown.</summary>
    public override string ToString()
    {
        string place = File ?? "";
        if (Line > 0)
        {
            place += place.Length > 0 ? $":{Line}" : $"line {Line}";
            place += Column > 0 ? $":{Column}" : "";
        }

        return string.Join(": ", new[] { place, Key ?? "", Message }.Where(part => part.Length > 0));
    }
}

/// <summary>The input is wrong: every problem that was found, at once. Ends the program with exit status 2.</summary>
public sealed class InputException : Exception
{
    /// <summary>The problems, in the order of the file; at least one.</summary>
    public IReadOnlyList<InputProblem> Problems { get; }

    public InputException(IReadOnlyList<InputProblem> problems)
        : base(string.Join(Environment.NewLine, problems)) => Problems = problems;

    public InputException(string? file, string? key, string message)
        : this([new InputProblem(file, 0, 0, key, message)])
    {
    }
}
